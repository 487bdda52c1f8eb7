// The season position by position: its values through time, side by side, each about its own mean.

import type { Subseries } from "../../stdlib/index.ts";
import type { ChartPart } from "./part.ts";
import type { SeasonLabel } from "./seasonLabels.ts";
import { thin } from "./thin.ts";

/** Share of a position's room that its line takes; the rest parts it from the next. */
const filled = 0.8;
const mostLabels = 12;

/** @param axis  title of the vertical axis, with the unit */
export function subseriesChart(title: string, alt: string, axis: string, positions: readonly Subseries[], labels: readonly SeasonLabel[], width: number): ChartPart {
  const places = positions.map((one, p) => ({ ...one, ...labels[p] })).sort((a, b) => a.order - b.order).map((one, slot) => ({ ...one, slot }));
  const points = places.flatMap(one => {
    const last = Math.max(1, one.values.length - 1);
    return Array.from(thin(one.values, Math.max(8, width / places.length)), i => ({ at: one.slot + (1 - filled) / 2 + (filled * i) / last, value: one.values[i], label: one.label, time: one.times[i], slot: one.slot }));
  });
  const stride = Math.ceil(places.length / mostLabels), named = places.filter(one => one.slot % stride === 0);
  const x = (field: string): Record<string, unknown> => ({ field, type: "quantitative", scale: { domain: [0, places.length], nice: false, zero: false }, axis: null });
  const y = { type: "quantitative", title: axis, scale: { zero: false } };
  return {
    part: "chart", title, alt, height: 230,
    spec: {
      padding: { bottom: 20, left: 2, right: 6, top: 4 },
      layer: [
        { data: { name: "points" }, mark: { type: "line", style: "sample" }, encoding: { x: x("at"), y: { ...y, field: "value" }, detail: { field: "slot", type: "nominal" } } },
        { data: { name: "means" }, mark: { type: "rule", style: "model", strokeWidth: 2 }, encoding: { x: x("from"), x2: { field: "to" }, y: { ...y, field: "mean" }, tooltip: [{ field: "label", title: "position" }, { field: "mean", type: "quantitative", title: "mean", format: ",.4~r" }] } },
        // The labels stand under the picture, in the middle of their positions.
        { data: { name: "names" }, mark: { type: "text", style: "label", align: "center", baseline: "top", dy: 6 }, encoding: { x: x("middle"), y: { value: { expr: "height" } }, text: { field: "label", type: "nominal" } } },
      ],
    },
    data: {
      points: { at: points.map(p => p.at), value: points.map(p => p.value), slot: points.map(p => p.slot) },
      means: { from: places.map(one => one.slot + (1 - filled) / 2), to: places.map(one => one.slot + (1 + filled) / 2), mean: places.map(one => one.mean), label: places.map(one => one.label) },
      names: { middle: named.map(one => one.slot + 0.5), label: named.map(one => one.label) },
    },
    full: { subseries: {
      position: places.flatMap(one => Array.from(one.values, () => one.label)), time: places.flatMap(one => [...one.times]),
      value: Float64Array.from(places.flatMap(one => [...one.values])), mean: Float64Array.from(places.flatMap(one => Array.from(one.values, () => one.mean))),
    } },
  };
}
