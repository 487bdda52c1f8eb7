// A Vega-Lite view of a notebook's own rows.

import { OptionError, type Kind } from "./kind.ts";
import { checkBounds } from "./parts/chartBounds.ts";
import type { ChartPart, Columns } from "./parts/part.ts";
import { chartColumns, fieldsDrawn, panelsBelow, readView } from "./parts/vegaLite.ts";
import { count, listOf } from "./parts/words.ts";

export type ChartCell = Readonly<Record<string, unknown>>;
interface View { readonly spec: Readonly<Record<string, unknown>>; readonly data: Readonly<Record<string, Columns>>; readonly title: string; readonly alt: string; readonly height: number }

export const chart: Kind<ChartCell, View> = {
  name: "chart",
  sentence: "A Vega-Lite view; each option is a top-level property of the specification.",
  options: {
    data: { type: "any", sentence: "Rows (a list of objects), a series (fields time, period, value), several series, or a forecast (time, mean, median, low90, high90, …).", example: "crossings" },
    mark: { type: "any", sentence: "How rows are drawn: \"line\", \"point\", \"bar\", \"area\", … or an object with `type`.", example: "\"line\"" },
    encoding: { type: "object", sentence: "Which field stands on which channel; types are read from the data.", example: "{x: {field: \"time\"}, y: {field: \"value\"}}" },
    layer: { type: "list", sentence: "Views drawn over each other." },
    title: { type: "any", sentence: "What the chart shows." },
    description: { type: "text", sentence: "What it shows, for readers who do not see it." },
    height: { type: "any", sentence: "Height in pixels (260 unless given)." },
  },
  body: "names",
  example: "data: crossings\nmark: \"line\"\nencoding: {x: {field: \"time\"}, y: {field: \"value\"}}",
  run: (options) => {
    const given = Object.fromEntries(Object.entries(options).filter(([, value]) => value !== null && value !== undefined));
    const { spec, data } = readView(given);
    checkSize(spec, data);
    checkBounds(spec, data);
    const title = titleOf(given["title"]);
    const { title: _title, description: _description, ...drawn } = spec;
    const alt = typeof given["description"] === "string" ? given["description"] : `${title === "" ? "Chart" : title}: ${drawnSentence(spec, data)}`;
    return { spec: drawn, data: Object.fromEntries(Object.entries(data).map(([name, rows]) => [name, chartColumns(rows)])), title, alt, height: heightOf(spec, panelsBelow(spec, data)) };
  },
  show: ({ spec, data, title, alt, height }) => [{ part: "chart", title, alt, spec, data, height } satisfies ChartPart],
};

/** Rows that a chart draws: each point or bar is an element of the page, a line is one altogether. */
const mostMarks = 20_000, mostInLines = 200_000;

function checkSize(spec: unknown, data: Readonly<Record<string, { readonly n: number }>>): void {
  const rows = Object.values(data).reduce((sum, one) => sum + one.n, 0), most = marksIn(spec).every((mark) => ["line", "area", "trail"].includes(mark)) ? mostInLines : mostMarks;
  if (rows > most) throw new OptionError("data", `a chart with these marks draws up to ${most} rows, and here are ${rows}: aggregate them, or draw a part`);
}

function marksIn(spec: unknown): readonly string[] {
  if (typeof spec !== "object" || spec === null) return [];
  return Object.entries(spec).flatMap(([name, inner]) => (name === "mark" ? [String(typeof inner === "object" && inner !== null ? Reflect.get(inner, "type") : inner)] : marksIn(inner)));
}

function titleOf(title: unknown): string {
  if (title === undefined) return "";
  if (typeof title === "string") return title;
  if (Array.isArray(title) && title.every((line) => typeof line === "string")) return title.join(" ");
  if (typeof title === "object" && title !== null && "text" in title) return titleOf(title.text);
  throw new OptionError("title", "`title` is a text in quotes");
}

/** "value by time, from 180 rows." */
function drawnSentence(spec: Readonly<Record<string, unknown>>, data: Readonly<Record<string, { readonly n: number }>>): string {
  const { drawn, by } = fieldsDrawn(spec);
  const rows = Object.values(data).reduce((sum, one) => sum + one.n, 0);
  const what = drawn.length === 0 ? "" : `${listOf(drawn)}${by.length === 0 ? "" : ` by ${listOf(by)}`}, `;
  return `${what}from ${count(rows, "row")}.`;
}

function heightOf(spec: Readonly<Record<string, unknown>>, panels: number): number {
  const { height } = spec;
  const own = typeof height === "number" ? height : panels > 1 ? 160 : 260;
  return panels > 1 ? panels * (own + 20) + 45 : own + 50;
}
