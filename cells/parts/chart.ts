// Charts of values in time: one or several lines on one pair of axes, a marked window, limits.

import { timesMs, type Series } from "../../stdlib/index.ts";
import { timeField } from "./fanChart.ts";
import type { ChartPart, Columns } from "./part.ts";
import { pick, pickNumbers, thin } from "./thin.ts";

/** One line of a chart. */
export interface Line {
  /** What the line is, for the label at its end and the tooltip. */
  readonly label: string;
  readonly series: Series;
  readonly style: "sample" | "heldOut" | "model" | "mark";
}

export interface TimePlot {
  readonly title: string;
  /** The finding in a sentence. */
  readonly alt: string;
  /** Title of the value axis, with its unit. */
  readonly axis: string;
  readonly lines: readonly Line[];
  /** Pixels across, for thinning. */
  readonly width: number;
  /** Horizontal reference lines. */
  readonly limits?: readonly number[];
  /** A stretch of time drawn behind the lines, both ends in UTC milliseconds (plain numbers where undated). */
  readonly stretch?: { readonly from: number; readonly to: number };
  /** Height of the drawing area in pixels. */
  readonly height?: number;
}

const mostHovered = 600;

/** Lines in time. Labels stand at the ends of the lines when there is more than one; a gap breaks a line; an observation
 *  between two gaps, and the last one, are drawn as points. */
export function timePlot(plot: TimePlot): ChartPart {
  const { lines, height = 200, limits = [], width } = plot;
  const dated = lines.every((line) => line.series.every !== null);
  const x = timeField("time", dated);
  const y = { field: "value", type: "quantitative", title: plot.axis, scale: { zero: false } };
  const data: Record<string, Columns> = {};
  const full: Record<string, Columns> = {};
  const layers: unknown[] = [];
  if (plot.stretch) {
    data["stretch"] = { from: Float64Array.of(plot.stretch.from), to: Float64Array.of(plot.stretch.to) };
    layers.push({ data: { name: "stretch" }, mark: { type: "rect", style: "guide", opacity: 0.25 }, encoding: { x: { ...x, field: "from" }, x2: { field: "to" } } });
  }
  if (limits.length > 0) {
    data["limits"] = { value: Float64Array.from(limits) };
    layers.push({ data: { name: "limits" }, mark: { type: "rule", style: "limit" }, encoding: { y } });
  }
  lines.forEach((line, i) => {
    const name = `line${i + 1}`;
    const { columns, single, end } = lineColumns(line, width);
    Object.assign(data, { [name]: columns, [`${name}Single`]: single, [`${name}End`]: end });
    full[line.label || name] = { time: line.series.times, value: line.series.values };
    layers.push(
      { data: { name }, mark: { type: "line", style: line.style }, encoding: { x, y } },
      { data: { name: `${name}Single` }, mark: { type: "point", style: line.style, filled: true, size: 14 }, encoding: { x, y } },
    );
    if (lines.length > 1) layers.push({ data: { name: `${name}End` }, mark: { type: "text", style: "label", align: "right", dy: -8 }, encoding: { x, y, text: { field: "label", type: "nominal" } } });
  });
  data["hover"] = hoverColumns(lines, width);
  layers.push({
    data: { name: "hover" }, mark: { type: "point", style: "guide", filled: true, opacity: 0, size: 90 },
    encoding: { x, y, tooltip: [{ field: "period", type: "nominal", title: "period" }, ...(lines.length > 1 ? [{ field: "label", type: "nominal", title: "line" }] : []), { field: "value", type: "quantitative", title: plot.axis, format: ",.6~g" }] },
  });
  return { part: "chart", title: plot.title, alt: plot.alt, height: height + 45, spec: { width: "container", height, layer: layers }, data, full };
}

function lineColumns(line: Line, width: number): { readonly columns: Columns; readonly single: Columns; readonly end: Columns } {
  const { series, label } = line;
  const ms = timesMs(series);
  const kept = thin(series.values, width);
  const ends = lastObserved(series);
  const singles = [...positionsOf(series, (t) => alone(series.values, t)).slice(0, width), ...ends];
  return {
    columns: { time: pickNumbers(ms, kept), value: pickNumbers(series.values, kept) },
    single: { time: pickNumbers(ms, singles), value: pickNumbers(series.values, singles) },
    end: { time: pickNumbers(ms, ends), value: pickNumbers(series.values, ends), label: ends.map(() => label) },
  };
}

/** Points that answer the pointer; only the last ones where there are too many to tell apart. */
function hoverColumns(lines: readonly Line[], width: number): Columns {
  const all = lines.map((line) => {
    const kept = positionsOf(line.series, (t) => !Number.isNaN(line.series.values[t]));
    return { line, kept };
  });
  const count = all.reduce((sum, one) => sum + one.kept.length, 0);
  const shown = count <= Math.min(mostHovered, width) ? all : lines.map((line) => ({ line, kept: lastObserved(line.series) }));
  return {
    time: Float64Array.from(shown.flatMap(({ line, kept }) => { const ms = timesMs(line.series); return Array.from(kept, (t) => ms[t]); })),
    value: Float64Array.from(shown.flatMap(({ line, kept }) => pick(line.series.values, kept))),
    period: shown.flatMap(({ line, kept }) => pick(line.series.times, kept)),
    label: shown.flatMap(({ line, kept }) => Array.from(kept, () => line.label)),
  };
}

/** Position of the last observation; none where nothing is observed. */
function lastObserved(series: Series): number[] {
  let last = series.n - 1;
  while (last >= 0 && Number.isNaN(series.values[last])) last--;
  return last < 0 ? [] : [last];
}

function positionsOf(series: Series, wanted: (t: number) => boolean): number[] {
  const found: number[] = [];
  for (let t = 0; t < series.n; t++) if (wanted(t)) found.push(t);
  return found;
}

function alone(values: Float64Array, t: number): boolean {
  return !Number.isNaN(values[t]) && (t === 0 || Number.isNaN(values[t - 1])) && (t === values.length - 1 || Number.isNaN(values[t + 1]));
}
