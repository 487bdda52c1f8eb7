// How much a chart may ask a page to draw. Beyond these the page would stand still for seconds while its chart is laid out.

import { OptionError } from "../kind.ts";
import type { Rows } from "./rows.ts";

type Spec = Readonly<Record<string, unknown>>;
type Data = Readonly<Record<string, Rows>>;

/** Panels: 100 took 3.6 s on a machine with eight others at work, 400 took 10 s, 2,000 took 32 s. Categories on an axis,
 *  each of which has its label: 2,000 took 1.8 s there, 20,000 took 17 s. Lines of groups: 20,000 took 18 s. */
const mostPanels = 100, mostCategories = 2000, mostLines = 2000, mostBins = 1000;
/** A median over all of 20,000 rows at each of them stood still for more than 45 s. */
const mostLooks = 2_000_000, lookAgain = ["median", "q1", "q3", "ci0", "ci1", "distinct", "values"];
const axes = ["x", "y", "xOffset", "yOffset"];
const groups = ["detail", "color", "fill", "stroke", "strokeDash", "strokeWidth", "opacity", "size", "shape"];

/** @throws OptionError naming the top-level option at fault */
export function checkBounds(spec: Spec, data: Data): void {
  for (const [option, inner] of Object.entries(spec)) walk({ [option]: inner }, option, data, nameOf(spec["data"]) ?? "rows", specOf(spec["encoding"]));
  checkLines(spec["mark"], specOf(spec["encoding"]), data["rows"]);
}

function walk(value: unknown, option: string, data: Data, above: string, around: Spec): void {
  if (Array.isArray(value)) { for (const one of value) walk(one, option, data, above, around); return; }
  if (!isSpec(value)) return;
  const name = nameOf(value["data"]) ?? above, rows = data[name] as Rows | undefined;
  const { encoding, facet, repeat } = value;
  if (isSpec(encoding)) {
    checkPanels(["row", "column", "facet"].map((channel) => encoding[channel]), rows, option);
    for (const channel of axes) checkCategories(encoding[channel], channel, rows, option);
  } else if (isSpec(facet)) checkPanels("field" in facet ? [facet] : [facet["row"], facet["column"]], rows, option);
  const encoded = { ...around, ...specOf(encoding) };
  checkLines(value["mark"], encoded, rows);
  checkBins(value, rows, option);
  checkWindow(value, rows, option);
  const lists = Array.isArray(repeat) ? [repeat] : isSpec(repeat) ? Object.values(repeat).filter(Array.isArray) : [];
  refuse(lists.reduce((product, list) => product * list.length, 1), mostPanels, option, "panels");
  for (const list of ["hconcat", "vconcat", "concat"]) if (Array.isArray(value[list])) refuse(value[list].length, mostPanels, option, "panels");
  for (const inner of Object.values(value)) walk(inner, option, data, name, encoded);
}

function checkPanels(fields: readonly unknown[], rows: Rows | undefined, option: string): void {
  refuse(fields.reduce((product: number, field) => product * Math.max(1, distinct(field, rows)), 1), mostPanels, option, "panels");
}

function checkCategories(field: unknown, channel: string, rows: Rows | undefined, option: string): void {
  if (!isSpec(field) || (field["type"] !== "nominal" && field["type"] !== "ordinal") || "bin" in field || "timeUnit" in field) return;
  refuse(distinct(field, rows), mostCategories, option, `categories of ${channel}`);
}

/** A line, area or trail is drawn for each group of rows that agree in these channels. */
function checkLines(mark: unknown, encoding: Spec, rows: Rows | undefined): void {
  if (rows === undefined || !["line", "area", "trail"].includes(String(isSpec(mark) ? mark["type"] : mark))) return;
  const fields = groups.map((channel) => encoding[channel]).filter(isSpec).filter((field) => field["type"] !== "quantitative");
  const columns = fields.map((field) => rows.columns[String(field["field"])]).filter((column) => column !== undefined);
  if (columns.length === 0) return;
  const lines = new Set(Array.from({ length: rows.n }, (_, i) => columns.map((column) => String(column[i])).join("\n")));
  refuse(lines.size, mostLines, "encoding", "lines");
}

/** A step of a bin says how many there are once the extent of its field is known. */
function checkBins(field: Spec, rows: Rows | undefined, option: string): void {
  const { bin } = field, column = rows?.columns[String(field["field"])];
  if (!isSpec(bin) || typeof bin["step"] !== "number" || !(column instanceof Float64Array)) return;
  let low = Infinity, high = -Infinity;
  for (const value of column) { if (value < low) low = value; if (value > high) high = value; }
  const bins = bin["step"] > 0 ? Math.ceil((high - low) / bin["step"]) : Infinity;
  refuse(bins, mostBins, option, "bins");
}

/** A sum or a mean moves along with its window; these look at each row of it again. */
function checkWindow(transform: Spec, rows: Rows | undefined, option: string): void {
  const { window: asked, frame } = transform;
  if (rows === undefined || !Array.isArray(asked) || !asked.some((each) => isSpec(each) && lookAgain.includes(String(each["op"])))) return;
  const [back, on] = (Array.isArray(frame) ? frame : [null, 0]).map((reach: unknown) => (typeof reach === "number" ? Math.min(Math.abs(reach), rows.n) : rows.n));
  const looks = rows.n * Math.min(rows.n, back + on + 1);
  if (looks > mostLooks) throw new OptionError(option, `a window of up to ${Math.min(rows.n, back + on + 1)} rows at each of ${rows.n} would look at ${looks} rows; up to ${mostLooks} are looked at: take a narrower frame, or compute it in the notebook`);
}

function distinct(field: unknown, rows: Rows | undefined): number {
  const column = isSpec(field) ? rows?.columns[String(field["field"])] : undefined;
  return column === undefined ? 0 : new Set(Array.from<unknown>(column)).size;
}

function refuse(n: number, most: number, option: string, what: string): void {
  if (n > most) throw new OptionError(option, `up to ${most} ${what} are drawn, and here are ${n === Infinity ? "more than can be counted" : n}: group them, or draw a part`);
}

function specOf(value: unknown): Spec { return isSpec(value) ? value : {}; }

function isSpec(value: unknown): value is Spec { return typeof value === "object" && value !== null && !Array.isArray(value); }

function nameOf(data: unknown): string | null { return isSpec(data) && typeof data["name"] === "string" ? data["name"] : null; }
