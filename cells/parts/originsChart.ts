// Forecasts from every held-out origin against what happened.

import { timeField } from "./fanChart.ts";
import type { ChartPart } from "./part.ts";

export interface OriginPath {
  readonly origin: string;
  /** UTC milliseconds (plain numbers where undated), the origin itself first where its value is known. */
  readonly time: ArrayLike<number>;
  readonly value: ArrayLike<number>;
}

export function originsChart(given: {
  readonly title: string; readonly alt: string; readonly axis: string; readonly dated: boolean;
  readonly actual: { readonly time: ArrayLike<number>; readonly value: ArrayLike<number> }; readonly paths: readonly OriginPath[];
}): ChartPart {
  const { paths, actual } = given;
  const x = timeField("time", given.dated);
  const y = { field: "value", type: "quantitative", title: given.axis, scale: { zero: false } };
  const rows = paths.flatMap(path => Array.from(path.time, (time, i) => ({ origin: path.origin, time, value: path.value[i] })));
  return {
    part: "chart", title: given.title, alt: given.alt, height: 250,
    spec: {
      layer: [
        { data: { name: "actual" }, mark: { type: "line", style: "sample" }, encoding: { x, y } },
        { data: { name: "paths" }, mark: { type: "line", style: "model", strokeWidth: 1, size: 1, opacity: 0.65 }, encoding: { x, y, detail: { field: "origin", type: "nominal" } } },
        { data: { name: "paths" }, mark: { type: "point", style: "model", filled: true, size: 12, opacity: 0.65 }, encoding: { x, y, tooltip: [{ field: "origin", title: "from" }, { field: "value", type: "quantitative", title: "forecast", format: ",.4~r" }] } },
      ],
    },
    data: {
      actual: { time: Array.from(actual.time), value: Array.from(actual.value) },
      paths: { origin: rows.map(r => r.origin), time: rows.map(r => r.time), value: rows.map(r => r.value) },
    },
  };
}
