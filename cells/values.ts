// Named expressions.

import { isSeries } from "../stdlib/index.ts";
import type { Kind } from "./kind.ts";
import { inWords } from "./parts/describe.ts";
import { mixedFormat } from "./parts/format.ts";
import type { Part } from "./parts/part.ts";
import { seriesChart } from "./parts/seriesParts.ts";

export type Named = Readonly<Record<string, unknown>>;

const mostPictures = 3;

export const values: Kind<Named, Named> = {
  name: "values",
  sentence: "Named expressions, read as cell.name.",
  options: {},
  body: "names",
  example: "share: last(crossings) / mean(crossings)",
  run: (given) => given,
  show: (result, context) => {
    const entries = Object.entries(result);
    if (entries.length === 0) return [{ part: "text", tone: "note", text: "No names yet: write one a line, as in share: last(crossings) / mean(crossings)." }];
    const rows = entries.map(([name, value]) => [name, plainCell(value)]);
    const table: Part = { part: "table", columns: [{ title: "name" }, { title: "value", align: "right", format: mixedFormat(rows.map(([, value]) => value)) }], rows };
    const pictures = entries.flatMap(([name, value]) => (isSeries(value) ? [seriesChart(value.name === "" ? { ...value, name } : value, context)] : []));
    return [table, ...pictures.slice(0, mostPictures)];
  },
};

function plainCell(value: unknown): number | string | boolean | null {
  return typeof value === "number" || typeof value === "boolean" ? value : value === null || value === undefined ? null : inWords(value);
}
