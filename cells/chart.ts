// A Vega-Lite view of a notebook's own rows.

import { OptionError, type Kind } from "./kind.ts";
import type { ChartPart, Columns } from "./parts/part.ts";
import { chartColumns, readView } from "./parts/vegaLite.ts";

export type ChartCell = Readonly<Record<string, unknown>>;
interface View { readonly spec: Readonly<Record<string, unknown>>; readonly data: Readonly<Record<string, Columns>>; readonly title: string; readonly alt: string; readonly height: number }

export const chart: Kind<ChartCell, View> = {
  name: "chart",
  sentence: "A Vega-Lite view; each option is a top-level property of the specification.",
  options: {
    data: { type: "any", required: true, sentence: "Rows (a list of objects), a series (fields time, period, value), several series, or a forecast (time, mean, median, low90, high90, …).", example: "crossings" },
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
    const title = titleOf(given["title"]);
    const { title: _title, description: _description, ...drawn } = spec;
    const alt = typeof given["description"] === "string" ? given["description"] : `${title === "" ? "A chart" : title}: ${rowsSentence(data)}`;
    return { spec: drawn, data: Object.fromEntries(Object.entries(data).map(([name, rows]) => [name, chartColumns(rows)])), title, alt, height: heightOf(spec) };
  },
  show: ({ spec, data, title, alt, height }) => [{ part: "chart", title, alt, spec, data, height } satisfies ChartPart],
};

function titleOf(title: unknown): string {
  if (title === undefined) return "";
  if (typeof title === "string") return title;
  if (Array.isArray(title) && title.every((line) => typeof line === "string")) return title.join(" ");
  if (typeof title === "object" && title !== null && "text" in title) return titleOf(title.text);
  throw new OptionError("title", "`title` is a text in quotes");
}

function rowsSentence(data: Readonly<Record<string, { readonly n: number; readonly columns: Readonly<Record<string, unknown>> }>>): string {
  const all = Object.values(data);
  const fields = [...new Set(all.flatMap((rows) => Object.keys(rows.columns)))];
  return `${all.map((rows) => `${rows.n} rows`).join(" and ")} of ${fields.join(", ")}.`;
}

function heightOf(spec: Readonly<Record<string, unknown>>): number {
  const { height } = spec;
  const own = typeof height === "number" ? height : 260;
  const below = Array.isArray(spec["vconcat"]) ? spec["vconcat"].length : 1;
  return below * (own + 50);
}
