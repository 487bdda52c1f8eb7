// What a series, or several, show of themselves: a line in time, and what there is in figures.

import { everyInWords, isSeries, mean, type Series } from "../../stdlib/index.ts";
import type { ShowContext } from "../kind.ts";
import { timePlot } from "./chart.ts";
import { plain } from "./format.ts";
import type { Part } from "./part.ts";
import { axisTitle } from "./scale.ts";
import { capital, count } from "./words.ts";

const mostPictures = 6;

/** A picture and a line of figures for each series, up to six; a table of the rest. */
export function seriesParts(value: Series | Readonly<Record<string, Series>>, context: ShowContext): readonly Part[] {
  if (isSeries(value)) return [...figuresOf(value), seriesChart(value, context)];
  const all = Object.entries(value);
  const pictures = all.slice(0, mostPictures).map(([, series]) => seriesChart(series, context));
  return [rowsOf(all), ...pictures];
}

/** A series as a line in time. */
export function seriesChart(series: Series, context: ShowContext): Part {
  const title = axisTitle(series);
  // A long name beside the axis would take the picture's own height; it stands above the picture anyway.
  const axis = title.length > 28 ? series.unit : title;
  return timePlot({ title: capital(title), alt: seriesSentence(series), axis, width: context.width, lines: [{ label: series.name, series, style: "sample" }] });
}

/** "Crossings, every month from 2010-01 to 2024-12: 180 values between 3,912 and 12,044 vehicles, the first 4,789, the last 9,120; 2 missing." */
function seriesSentence(series: Series): string {
  const observed = series.values.filter((v) => !Number.isNaN(v));
  const name = capital(series.name || "the series");
  if (observed.length === 0) return `${name}: no value is observed.`;
  const unit = series.unit === "" ? "" : ` ${series.unit}`;
  const low = observed.reduce((a, b) => Math.min(a, b)), high = observed.reduce((a, b) => Math.max(a, b));
  const missing = series.n - observed.length;
  const spread = low === high ? `all ${plain(low)}${unit}` : `between ${plain(low)} and ${plain(high)}${unit}`;
  return `${name}, ${spanText(series)}: ${count(observed.length, "value")} ${spread}, the first ${plain(observed[0])}, the last ${plain(observed[observed.length - 1])}; ${missing === 0 ? "none" : plain(missing)} missing.`;
}

/** "every month from 2010-01 to 2024-12", "numbered 1 to 200". */
export function spanText(series: Series): string {
  const end = series.times[series.n - 1] ?? series.start;
  return series.every === null ? `numbered ${series.start} to ${end}` : `every ${everyInWords(series.every)} from ${series.start} to ${end}`;
}

function figuresOf(series: Series): readonly Part[] {
  const missing = series.values.reduce((sum, v) => sum + (Number.isNaN(v) ? 1 : 0), 0);
  return [{
    part: "figures", figures: [
      { label: "periods", value: series.n, format: ",d" },
      { label: "span", value: `${series.start} to ${series.times[series.n - 1] ?? series.start}` },
      { label: "every", value: everyInWords(series.every) },
      { label: "missing", value: missing, format: ",d" },
      { label: "mean", value: mean(series), format: ",.4~r", unit: series.unit },
    ],
  }];
}

function rowsOf(all: readonly (readonly [string, Series])[]): Part {
  return {
    part: "table",
    columns: [{ title: "series" }, { title: "span" }, { title: "every" }, { title: "periods", align: "right", format: ",d" }, { title: "missing", align: "right", format: ",d" }, { title: "mean", align: "right", format: ",.4~r" }, { title: "unit" }],
    rows: all.map(([name, s]) => [name, `${s.start} to ${s.times[s.n - 1] ?? s.start}`, everyInWords(s.every), s.n, s.values.reduce((sum, v) => sum + (Number.isNaN(v) ? 1 : 0), 0), mean(s), s.unit]),
  };
}
