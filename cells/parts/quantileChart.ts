// Ordered values against the quantiles of a normal distribution, with the band that all of them together should keep to.

import type { ChartPart, Columns } from "./part.ts";

export interface QuantilePoints {
  readonly theoretical: ArrayLike<number>;
  readonly sample: ArrayLike<number>;
  readonly low: ArrayLike<number>;
  readonly high: ArrayLike<number>;
}

const mostPoints = 400;

export function quantileChart(title: string, alt: string, points: QuantilePoints): ChartPart {
  const all = Array.from(points.theoretical, (_, i) => i);
  const step = Math.max(1, Math.ceil(all.length / mostPoints));
  // The tails say most: their points are all kept, the middle is thinned.
  const kept = all.filter(i => i % step === 0 || i < 40 || i >= all.length - 40);
  const columns = (positions: readonly number[]): Columns => ({
    theoretical: positions.map(i => points.theoretical[i]), sample: positions.map(i => points.sample[i]),
    low: positions.map(i => points.low[i]), high: positions.map(i => points.high[i]),
    outside: positions.map(i => points.sample[i] < points.low[i] || points.sample[i] > points.high[i]),
  });
  const ends = all.length === 0 ? [] : [points.theoretical[0], points.theoretical[all.length - 1]];
  const x = { field: "theoretical", type: "quantitative", title: "expected of a normal distribution (standard deviations)", scale: { nice: false, zero: false }, axis: { grid: false } };
  const y = (field: string): Record<string, unknown> => ({ field, type: "quantitative", title: "found (standard deviations)", scale: { zero: false } });
  return {
    part: "chart", title, alt, height: 260,
    spec: {
      layer: [
        { data: { name: "points" }, mark: { type: "area", style: "band" }, encoding: { x, y: y("low"), y2: { field: "high" } } },
        { data: { name: "line" }, mark: { type: "line", style: "limit" }, encoding: { x, y: y("theoretical") } },
        { data: { name: "points" }, transform: [{ filter: { field: "outside", equal: false } }], mark: { type: "point", style: "mark", filled: true, size: 18, opacity: 0.8 }, encoding: { x, y: y("sample") } },
        { data: { name: "points" }, transform: [{ filter: { field: "outside", equal: true } }], mark: { type: "point", style: "outside", shape: "diamond", filled: true, size: 50, opacity: 1 }, encoding: { x, y: y("sample") } },
      ],
    },
    data: { points: columns(kept), line: { theoretical: ends } },
    full: { points: columns(all) },
  };
}
