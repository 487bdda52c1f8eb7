// A forecast as a fan: what was observed, what came after it where that is known, the middle and the bands.

import { milliseconds, type Forecast } from "../../stdlib/index.ts";
import type { ChartPart, Columns } from "./part.ts";
import { listOf, percent } from "./words.ts";

/** A horizontal field of times: UTC where the series is dated, plain numbers where it is only numbered. */
export function timeField(field: string, dated: boolean): Record<string, unknown> {
  return dated
    ? { field, type: "temporal", title: null, scale: { type: "utc", nice: false }, axis: { grid: false, labelOverlap: true } }
    : { field, type: "quantitative", title: "period", scale: { nice: false, zero: false }, axis: { grid: false, format: "d" } };
}

/** @param shownPast  how many observed periods to draw before the origin */
export function fanChart(forecast: Forecast, alt: string, shownPast: number): ChartPart {
  const { history, heldOut, every } = forecast;
  const dated = every !== null;
  const h = forecast.horizon;
  const all = milliseconds(history.start, every, history.n + h);
  const from = Math.max(0, history.n - shownPast);
  const future = all.subarray(history.n, history.n + h);
  const levels = forecast.bands.map(band => band.level).sort((a, b) => b - a);
  const data: Record<string, Columns> = {
    history: { time: all.slice(from, history.n), value: history.values.slice(from) },
    middle: middleColumns(forecast, all),
    heldOut: heldOut === null ? { time: [], value: [] } : { time: milliseconds(heldOut.start, every, Math.min(heldOut.n, h)), value: heldOut.values.slice(0, h) },
  };
  data.paths = {
    path: forecast.paths.flatMap((path, i) => Array.from(path, () => String(i + 1))), time: forecast.paths.flatMap(() => Array.from(future)),
    value: forecast.paths.flatMap(path => Array.from(path)),
  };
  levels.forEach((level, i) => {
    const band = forecast.bands.find(one => one.level === level)!;
    data[`band${i + 1}`] = { time: future.slice(), low: band.low, high: band.high, level: Array.from(future, () => percent(level)) };
  });
  const full: Record<string, Columns> = {
    observed: { time: history.times, value: history.values },
    forecast: {
      time: forecast.times, mean: forecast.mean, median: forecast.median, se: forecast.se,
      ...Object.fromEntries(forecast.bands.flatMap(band => [[`low ${percent(band.level)}`, band.low], [`high ${percent(band.level)}`, band.high]])),
    },
    ...(heldOut === null ? {} : { heldOut: { time: heldOut.times, value: heldOut.values } }),
    ...Object.fromEntries(forecast.paths.map((path, i) => [`path ${i + 1}`, { time: forecast.times, value: path }])),
  };
  const x = timeField("time", dated);
  const y = { type: "quantitative", title: forecast.unit ? `${forecast.name} (${forecast.unit})` : forecast.name, scale: { zero: false } };
  return {
    part: "chart", title: `Forecast of ${forecast.name}${levels.length > 0 ? `, with bands at ${listOf(levels.map(level => percent(level)))}` : ""}`, alt, height: 300,
    spec: {
      layer: [
        ...levels.map((_, i) => ({
          data: { name: `band${i + 1}` }, mark: { type: "area", style: "band" },
          encoding: { x, y: { ...y, field: "low" }, y2: { field: "high" }, tooltip: bandTooltip(dated) },
        })),
        { data: { name: "paths" }, mark: { type: "line", style: "guide", strokeWidth: 0.7, size: 0.7, opacity: 0.7 }, encoding: { x, y: { ...y, field: "value" }, detail: { field: "path", type: "nominal" } } },
        { data: { name: "history" }, mark: { type: "line", style: "sample" }, encoding: { x, y: { ...y, field: "value" } } },
        { data: { name: "middle" }, mark: { type: "line", style: "model" }, encoding: { x, y: { ...y, field: "value" } } },
        { data: { name: "heldOut" }, mark: { type: "line", style: "heldOut", point: false }, encoding: { x, y: { ...y, field: "value" } } },
        { data: { name: "heldOut" }, mark: { type: "point", style: "heldOut", filled: false, size: 28 }, encoding: { x, y: { ...y, field: "value" } } },
      ],
    },
    data, full,
  };
}

function bandTooltip(dated: boolean): readonly Record<string, unknown>[] {
  return [
    dated ? { field: "time", type: "temporal", title: "period", format: "%Y-%m-%d" } : { field: "time", type: "quantitative", title: "period" },
    { field: "level", type: "nominal", title: "band" },
    { field: "low", type: "quantitative", title: "from", format: ",.4~r" }, { field: "high", type: "quantitative", title: "to", format: ",.4~r" },
  ];
}

/** The median line, joined to the last observation so that the eye is led over the origin. */
function middleColumns(forecast: Forecast, all: Float64Array): Columns {
  const { history, horizon } = forecast;
  const last = history.values[history.n - 1];
  const joined = Number.isFinite(last);
  const time = all.slice(history.n - (joined ? 1 : 0), history.n + horizon);
  return { time, value: joined ? [last, ...forecast.median] : Array.from(forecast.median) };
}
