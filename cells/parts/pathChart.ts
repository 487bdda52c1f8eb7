// A running statistic as a line between the limits that it should keep to.

import type { ChartPart } from "./part.ts";
import { pickNumbers, thin } from "./thin.ts";

export interface Path {
  readonly x: ArrayLike<number>;
  readonly value: ArrayLike<number>;
  /** Limits at the same places. */
  readonly low: ArrayLike<number>; readonly high: ArrayLike<number>;
}

/** @param width   pixels across, to which a long path is thinned
 *  @param xField  the horizontal axis without its field: a time axis of `timeField("x", …)`, or a quantitative one */
export function pathChart(given: { readonly title: string; readonly alt: string; readonly xField: Readonly<Record<string, unknown>>; readonly axis: string; readonly path: Path; readonly width: number }): ChartPart {
  const { path } = given, kept = thin(path.value, given.width);
  const columns = { x: pickNumbers(path.x, kept), value: pickNumbers(path.value, kept), low: pickNumbers(path.low, kept), high: pickNumbers(path.high, kept) };
  const x = { ...given.xField, field: "x" };
  const y = (field: string): Record<string, unknown> => ({ field, type: "quantitative", title: given.axis, scale: { zero: false } });
  return {
    part: "chart", title: given.title, alt: given.alt, height: 200,
    spec: {
      data: { name: "path" },
      layer: [
        { mark: { type: "area", style: "band" }, encoding: { x, y: y("low"), y2: { field: "high" } } },
        { mark: { type: "line", style: "mark", size: 1.5, strokeWidth: 1.5 }, encoding: { x, y: y("value") } },
        { transform: [{ filter: { field: "outside", equal: true } }], mark: { type: "point", style: "outside", shape: "diamond", filled: true, size: 34, opacity: 1 }, encoding: { x, y: y("value") } },
      ],
    },
    data: {
      path: {
        ...columns, outside: Array.from(columns.value, (value, i) => value < columns.low[i] || value > columns.high[i]),
      },
    },
    full: { path: { x: Float64Array.from(path.x), value: Float64Array.from(path.value), low: Float64Array.from(path.low), high: Float64Array.from(path.high) } },
  };
}
