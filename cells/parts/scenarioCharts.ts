// Scenarios in one picture, and what each makes against the first in another.

import { milliseconds, type Band, type Forecast } from "../../stdlib/index.ts";
import { timeField } from "./fanChart.ts";
import type { ChartPart, Columns } from "./part.ts";
import { percent } from "./words.ts";

interface Course { readonly label: string; readonly median: Float64Array; readonly bands: readonly Band[] }

/** @param shownPast  how many observed periods to draw before the origin */
export function scenarioChart(forecast: Forecast, alt: string, shownPast: number): ChartPart {
  const { history, every, horizon, heldOut } = forecast, courses = Object.values(forecast.scenarios);
  const all = milliseconds(history.start, every, history.n + horizon), from = Math.max(0, history.n - shownPast);
  const x = timeField("time", every !== null), y = axis(forecast.unit ? `${forecast.name} (${forecast.unit})` : forecast.name);
  return {
    part: "chart", title: `${forecast.name} by scenario${bandsText(courses[0])}`, alt, height: 320,
    spec: { layer: [
      ...courseLayers(x, y),
      { data: { name: "history" }, mark: { type: "line", style: "sample" }, encoding: { x, y: { ...y, field: "value" } } },
      { data: { name: "heldOut" }, mark: { type: "line", style: "heldOut" }, encoding: { x, y: { ...y, field: "value" } } },
    ] },
    data: {
      ...columnsOf(courses, all.subarray(history.n), { time: all[history.n - 1], value: history.values[history.n - 1] }), history: { time: all.slice(from, history.n), value: history.values.slice(from) },
      heldOut: heldOut === null ? { time: [], value: [] } : { time: milliseconds(heldOut.start, every, Math.min(heldOut.n, horizon)), value: heldOut.values.slice(0, horizon) },
    },
    full: { observed: { time: history.times, value: history.values }, ...Object.fromEntries(courses.map(({ label, mean, median, bands }) => [label, { time: forecast.times, mean, median, ...limitsOf(bands) }])) },
  };
}

export function differenceChart(forecast: Forecast, alt: string): ChartPart {
  // The first scenario is its own zero line, so that each keeps its colour of the picture above.
  const zero = new Float64Array(forecast.horizon), [first, ...rest] = Object.values(forecast.scenarios).map(({ label, difference }) => ({ label, mean: zero, median: zero, bands: [], ...difference }));
  const future = milliseconds(forecast.times[0], forecast.every, forecast.horizon);
  const x = timeField("time", forecast.every !== null), y = { ...axis(`less ${first.label}${forecast.unit ? ` (${forecast.unit})` : ""}`), scale: { zero: true } };
  return {
    part: "chart", title: `Difference from ${first.label}${bandsText(rest[0])}`, alt, height: 200,
    spec: { layer: courseLayers(x, y) }, data: columnsOf([first, ...rest], future),
    full: Object.fromEntries(rest.map(({ label, mean, median, bands }) => [label, { time: forecast.times, mean, median, ...limitsOf(bands) }])),
  };
}

const axis = (title: string): Record<string, unknown> => ({ type: "quantitative", title, scale: { zero: false } });

/** A band and a line each, told apart by colour and dashes. Labels are data: renaming a scenario makes no new picture. */
function courseLayers(x: Record<string, unknown>, y: Record<string, unknown>): readonly Record<string, unknown>[] {
  const label = { field: "label", type: "nominal", sort: null }, legend = { title: null, orient: "top", labelLimit: 240 };
  return [
    { data: { name: "bands" }, mark: { type: "area", fillOpacity: 0.12 }, encoding: { x, y: { ...y, field: "low" }, y2: { field: "high" }, color: { ...label, legend } } },
    { data: { name: "lines" }, mark: { type: "line", strokeWidth: 2, size: 2 }, encoding: { x, y: { ...y, field: "median" }, color: { ...label, legend }, strokeDash: { ...label, legend } } },
    {
      data: { name: "middles" }, mark: { type: "point", filled: true, size: 30, opacity: 1 },
      encoding: {
        x, y: { ...y, field: "median" }, color: { ...label, legend }, shape: { ...label, legend },
        tooltip: [{ field: "label", title: "scenario" }, { field: "median", type: "quantitative", title: "median", format: ",.4~r" }, { field: "low", type: "quantitative", title: "from", format: ",.4~r" }, { field: "high", type: "quantitative", title: "to", format: ",.4~r" }],
      },
    },
  ];
}

/** @param last  the last observation, to which the lines are joined so that the eye is led over the origin */
function columnsOf(courses: readonly Course[], future: Float64Array, last = { time: NaN, value: NaN }): Record<string, Columns> {
  const rows = courses.flatMap(({ label, median, bands }) => {
    const band = widest(bands);
    return Array.from(median, (value, h) => ({ label, time: future[h], median: value, low: band?.low[h] ?? NaN, high: band?.high[h] ?? NaN }));
  });
  const column = (name: "time" | "median" | "low" | "high"): Float64Array => Float64Array.from(rows, (row) => row[name]), labels = rows.map((row) => row.label);
  const joined = courses.flatMap(({ label, median }) => [...(Number.isFinite(last.value) ? [{ label, time: last.time, median: last.value }] : []), ...Array.from(median, (value, h) => ({ label, time: future[h], median: value }))]);
  return {
    lines: { label: joined.map((row) => row.label), time: Float64Array.from(joined, (row) => row.time), median: Float64Array.from(joined, (row) => row.median) },
    bands: { label: labels, time: column("time"), low: column("low"), high: column("high") },
    middles: { label: labels, time: column("time"), median: column("median"), low: column("low"), high: column("high") },
  };
}

const limitsOf = (bands: readonly Band[]): Columns => Object.fromEntries(bands.flatMap((band) => [[`low ${percent(band.level)}`, band.low], [`high ${percent(band.level)}`, band.high]]));

/** The band of the highest level; null where no level was asked for. */
export function widest<T extends { readonly level: number }>(bands: readonly T[]): T | null {
  return bands.reduce<T | null>((most, band) => (most === null || band.level > most.level ? band : most), null);
}

function bandsText({ bands }: Course): string { const band = widest(bands); return band === null ? "" : `, with bands at ${percent(band.level)}`; }
