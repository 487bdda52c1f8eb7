// p-values of tests across lags, against the level at which they would be called small.

import type { ChartPart } from "./part.ts";
import { decimals } from "./words.ts";

export interface PValueLine { readonly label: string; readonly rows: readonly { readonly lag: number; readonly p: number }[] }

/** @param small  the level below which a p-value counts as small, such as 0.05 */
export function pValueChart(title: string, alt: string, lines: readonly PValueLine[], small: number): ChartPart {
  const points = lines.flatMap(line => line.rows.filter(row => Number.isFinite(row.p)).map(row => ({ ...row, label: line.label })));
  const x = { field: "lag", type: "quantitative", title: "up to lag (periods)", scale: { nice: false, zero: false, padding: 8 }, axis: { grid: false, tickMinStep: 1, tickCount: 12, format: "d" } };
  const y = { field: "p", type: "quantitative", title: "p-value", scale: { domain: [0, 1] }, axis: { tickCount: 5 } };
  const labels = lines.map(line => line.label);
  return {
    part: "chart", title, alt, height: 210,
    spec: {
      layer: [
        { data: { name: "limit" }, mark: { type: "rule", style: "limit" }, encoding: { y: { ...y, field: "at" } } },
        {
          data: { name: "points" }, mark: { type: "point", style: "mark", filled: true, size: 34, opacity: 0.9 },
          encoding: {
            x, y, shape: { field: "label", type: "nominal", scale: { domain: labels }, legend: { title: null, orient: "top" } },
            tooltip: [{ field: "label", title: "test" }, { field: "lag", type: "quantitative", title: "up to lag" }, { field: "p", type: "quantitative", title: "p", format: ".3f" }],
          },
        },
        { data: { name: "points" }, transform: [{ filter: { field: "small", equal: true } }], mark: { type: "point", style: "outside", shape: "circle", filled: false, size: 90, strokeWidth: 1.6 }, encoding: { x, y } },
      ],
    },
    data: {
      points: { lag: points.map(p => p.lag), p: points.map(p => p.p), label: points.map(p => p.label), small: points.map(p => p.p < small) },
      limit: { at: [small], shown: [decimals(small, 2)] },
    },
  };
}
