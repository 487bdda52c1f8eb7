// Forecasts from every held-out origin against what happened; the reader moves along the origins.

import { timeField } from "./fanChart.ts";
import type { ChartPart, Columns } from "./part.ts";
import { percent } from "./words.ts";

export interface OriginPath {
  readonly origin: string;
  /** The origin's own time and value; a gap has none. Times are UTC milliseconds (plain numbers where undated). */
  readonly from: { readonly time: number; readonly value: number };
  readonly time: ArrayLike<number>;
  readonly value: ArrayLike<number>;
  readonly bands: readonly { readonly level: number; readonly low: ArrayLike<number>; readonly high: ArrayLike<number> }[];
  /** What came of the forecasts from here, in a sentence. */
  readonly words: string;
}

/** More paths than these cover each other; every one of them can be picked, and all are in the data behind the picture. */
const mostPaths = 40;

/** @param given.paths  in the order of their origins, at least one; the last is picked at first */
export function originsChart(given: {
  readonly title: string; readonly alt: string; readonly axis: string; readonly dated: boolean;
  readonly actual: { readonly time: ArrayLike<number>; readonly value: ArrayLike<number> }; readonly paths: readonly OriginPath[];
}): ChartPart {
  const { paths, actual } = given;
  const x = timeField("time", given.dated);
  const y = { field: "value", type: "quantitative", title: given.axis, scale: { zero: false } };
  const step = Math.ceil(paths.length / mostPaths), drawn = paths.filter((_, i) => (paths.length - 1 - i) % step === 0);
  const rows = drawn.flatMap(path => Array.from(path.time, (time, i) => ({ origin: path.origin, time, value: path.value[i] })));
  const levels = paths[0].bands.map(band => band.level);
  const among = paths.map(path => ({ label: path.origin, words: path.words, data: pathColumns(path) }));
  const at = among.length - 1;
  return {
    part: "chart", title: given.title, alt: given.alt, height: 270,
    spec: {
      layer: [
        { data: { name: "paths" }, mark: { type: "line", style: "guide", strokeWidth: 0.8, size: 0.8, opacity: 0.8 }, encoding: { x, y, detail: { field: "origin", type: "nominal" } } },
        ...levels.map((_, i) => ({ data: { name: `band${i + 1}` }, mark: { type: "area", style: "band" }, encoding: { x, y: { ...y, field: "low" }, y2: { field: "high" } } })),
        { data: { name: "origin" }, mark: { type: "rule", style: "limit" }, encoding: { x } },
        { data: { name: "actual" }, mark: { type: "line", style: "sample" }, encoding: { x, y } },
        { data: { name: "picked" }, mark: { type: "line", style: "model" }, encoding: { x, y } },
        {
          data: { name: "picked" }, mark: { type: "point", style: "model", filled: true, size: 24, opacity: 1 },
          encoding: { x, y, tooltip: [{ field: "value", type: "quantitative", title: "forecast", format: ",.4~r" }] },
        },
      ],
    },
    data: {
      paths: { origin: rows.map(r => r.origin), time: rows.map(r => r.time), value: rows.map(r => r.value) },
      actual: { time: Array.from(actual.time), value: Array.from(actual.value) }, ...among[at].data,
    },
    pick: { label: "Origin", at, among },
  };
}

/** The path starts at the origin's own value, so that the eye is led over it. */
function pathColumns({ from, time, value, bands }: OriginPath): Readonly<Record<string, Columns>> {
  const known = Number.isFinite(from.value);
  return {
    origin: { time: [from.time] },
    picked: { time: [...(known ? [from.time] : []), ...Array.from(time)], value: [...(known ? [from.value] : []), ...Array.from(value)] },
    ...Object.fromEntries(bands.map(({ level, low, high }, i) => [`band${i + 1}`, { time: Array.from(time), low: Array.from(low), high: Array.from(high), level: Array.from(time, () => percent(level)) }])),
  };
}
