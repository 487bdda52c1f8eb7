// A score of several models against how far ahead they forecast.

import type { ChartPart } from "./part.ts";

export interface ScoreLine { readonly label: string; readonly horizons: readonly number[]; readonly values: readonly number[] }

const mostLines = 6;

/** @param measure  title of the score's axis, with its unit
 *  @param level    a reference value of the score (1 for MASE: the naive rule inside the training data); null for none */
export function scoreChart(title: string, alt: string, measure: string, lines: readonly ScoreLine[], level: number | null): ChartPart {
  const drawn = lines.slice(0, mostLines);
  const points = drawn.flatMap(line => line.horizons.map((horizon, i) => ({ label: line.label, horizon, value: line.values[i] }))).filter(p => Number.isFinite(p.value));
  const x = { field: "horizon", type: "quantitative", title: "periods ahead", scale: { nice: false, zero: false, padding: 14 }, axis: { grid: false, tickMinStep: 1, format: "d" } };
  const y = { field: "value", type: "quantitative", title: measure, scale: { zero: true } };
  const legend = { title: null, orient: "top", columns: 2, labelLimit: 240 };
  // In the order of the data: labels in the specification would make a new picture of every renamed model.
  const series = { field: "label", type: "nominal", sort: null };
  return {
    part: "chart", title, alt, height: 250,
    spec: {
      layer: [
        { data: { name: "level" }, mark: { type: "rule", style: "limit" }, encoding: { y } },
        { data: { name: "points" }, mark: { type: "line", strokeWidth: 1.6, size: 1.6 }, encoding: { x, y, color: { ...series, legend }, strokeDash: { ...series, legend } } },
        {
          data: { name: "points" }, mark: { type: "point", filled: true, size: 46, opacity: 1 },
          encoding: {
            x, y, color: { ...series, legend }, shape: { ...series, legend },
            tooltip: [{ field: "label", title: "model" }, { field: "horizon", type: "quantitative", title: "periods ahead" }, { field: "value", type: "quantitative", title: measure, format: ",.4~r" }],
          },
        },
      ],
    },
    data: {
      points: { label: points.map(p => p.label), horizon: points.map(p => p.horizon), value: points.map(p => p.value) },
      level: { value: level === null ? [] : [level] },
    },
    full: { scores: { label: lines.flatMap(line => line.horizons.map(() => line.label)), horizon: lines.flatMap(line => line.horizons), value: lines.flatMap(line => line.values) } },
  };
}
