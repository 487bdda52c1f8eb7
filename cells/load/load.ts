// The kind that reads a series, or several, from a file inside the notebook's folder.

import { formatEvery, makeSeries, parseEvery, parsePeriod, type Series } from "../../stdlib/index.ts";
import { OptionError, type Kind, type RunContext } from "../kind.ts";
import { seriesParts } from "../parts/seriesParts.ts";
import { count, listOf, someOf } from "../parts/words.ts";
import { columnNamed, numericColumns, timeColumns } from "./columns.ts";
import { gridOf, type Grid } from "./grid.ts";
import { readTimes } from "./readTimes.ts";
import { readValues } from "./readValues.ts";
import { cellOf, readSheet, usualMissing, type Sheet } from "./sheet.ts";
import { isArchive } from "./spreadsheet.ts";
import type { DayOrder } from "./times.ts";
import { acrossTheYear } from "./wide.ts";

export interface LoadCell {
  readonly file: string;
  readonly time?: string | readonly string[];
  readonly start?: string;
  readonly order?: DayOrder;
  readonly value?: string | readonly string[] | Readonly<Record<string, string>>;
  readonly every?: string;
  readonly missing?: string | readonly string[];
  readonly unit?: string | Readonly<Record<string, string>>;
  readonly sheet?: string;
}

/** One series, or several by name. */
export type Loaded = Series | Readonly<Record<string, Series>>;

/** Reads a data file into regularly spaced series; absent periods become missing values, and that is said. */
export const load: Kind<LoadCell, Loaded> = {
  name: "load",
  sentence: "Reads a series, or several, from a file inside the notebook's folder.",
  options: {
    file: { type: "text", required: true, sentence: "Path of a CSV file or a spreadsheet (.xlsx), from the notebook's folder: a quoted text, or the name of a choice among such texts.", example: "\"data/ferry.csv\"" },
    time: { type: { anyOf: ["text", { listOf: "text" }] }, sentence: "Header of the column that holds the times, or a list of headers (year, month); the first that holds times unless given." },
    start: { type: "time", sentence: "Time of the first row, for a file without times; \"1\" numbers the rows.", example: "\"2019-01\"" },
    order: { type: { oneOf: ["day-month", "month-day"] }, sentence: "Which comes first in dates such as 05/03/2019." },
    value: { type: { anyOf: ["text", { listOf: "text" }, "object"] }, sentence: "Header of the value column: a series; a list of headers: an object of series; an object {own: \"header\"}: by your names. The first numeric column unless given." },
    every: { type: "text", sentence: "Spacing of the periods: \"month\", \"quarter\", \"week\", \"day\", \"hour\" or an ISO 8601 duration; inferred from the times unless given.", example: "\"month\"" },
    missing: { type: { anyOf: ["text", { listOf: "text" }] }, sentence: `Texts that stand for a missing value, besides an empty cell; ${usualMissing.filter((t) => t !== "").join(", ")} unless given.`, example: "[\"NA\", \"-\"]" },
    unit: { type: { anyOf: ["text", "object"] }, sentence: "Unit of the values as readers should see it; for several series one text, or an object by name.", example: "\"vehicles\"" },
    sheet: { type: "text", sentence: "Sheet of a spreadsheet, the first unless given; a text file has none.", example: "\"Sales\"" },
  },
  body: "options",
  example: "file: \"data/series.csv\"",
  run: runLoad,
  show: (result, context) => seriesParts(result, context),
};

async function runLoad(options: LoadCell, context: RunContext): Promise<Loaded> {
  const { file } = options;
  const bytes = await fileBytes(file, context);
  if (options.sheet !== undefined && !isArchive(bytes)) throw new OptionError("sheet", `${file} is read as text, which has no sheets; leave \`sheet\` out`);
  const missing = typeof options.missing === "string" ? [options.missing] : options.missing;
  const read = await readSheet(bytes, file, missing, options.sheet).catch((error: unknown) => inWords(options.sheet === undefined ? "file" : "sheet", () => { throw error; }));
  const sheet = options.time === undefined && options.start === undefined && options.value === undefined ? acrossTheYear(read) ?? read : read;
  sheet.notes.forEach((text) => context.note(text));
  const times = options.start === undefined ? timeColumns(sheet, options.time) : [];
  const grid = gridFor(sheet, times, options);
  grid.notes.forEach((text) => context.note(text));
  const wanted = wantedColumns(sheet, times, options, context);
  const found = wanted.map(({ name, column }) => oneSeries(sheet, grid, name, column, options.unit, context));
  const { value } = options;
  return value === undefined || typeof value === "string" ? found[0] : Object.fromEntries(wanted.map(({ name }, i) => [name, found[i]]));
}

async function fileBytes(file: string, context: RunContext): Promise<Uint8Array> {
  try {
    return await context.read(file);
  } catch (error) {
    if (context.signal.aborted || error instanceof OptionError) throw error;
    throw new OptionError("file", error instanceof Error ? error.message : String(error));
  }
}

/** A refusal from reading, laid at an option's door. */
function inWords<T>(option: string, work: () => T): T {
  try {
    return work();
  } catch (error) {
    if (error instanceof RangeError) throw new OptionError(option, error.message);
    throw error;
  }
}

function gridFor(sheet: Sheet, times: readonly number[], options: LoadCell): Grid {
  const { start, every, time, order, file } = options;
  if (start !== undefined) {
    if (time !== undefined) throw new OptionError("start", "`start` is for files without times; leave out either `start` or `time`");
    return inWords("start", () => startedGrid(sheet, start, every));
  }
  if (times.length > 0) return gridOf(file, sheet.rows, readTimes(sheet, times, order), every);
  if (every !== undefined) throw new OptionError("every", `${file} has no column of times; say when its first row is, as in start: "2019-01"`);
  const rest = { every: null, start: "1", n: sheet.rows.length, positions: Int32Array.from(sheet.rows, (_, i) => i) };
  return { ...rest, notes: [`${file} has no column of times: its rows are numbered 1 to ${sheet.rows.length}; give dates with start: "2019-01", every: "month"`] };
}

function startedGrid(sheet: Sheet, start: string, every: string | undefined): Grid {
  const n = sheet.rows.length;
  const positions = Int32Array.from({ length: n }, (_, i) => i);
  const usual: Readonly<Record<string, string>> = { year: "P1Y", quarter: "P3M", month: "P1M", week: "P1W", day: "P1D" };
  const first = parsePeriod(start);
  if (first === null && every === undefined && /^[+-]?\d{1,3}$/.test(start)) return { every: null, start, n, positions, notes: [] };
  if (every === undefined && (first === null || !(first.unit in usual))) throw new RangeError(`start: "${start}" does not say how far apart the rows are; add \`every\`, as in every: "hour"`);
  const spacing = every === undefined ? usual[first?.unit ?? ""] : formatEvery(parseEvery(every));
  makeSeries({ name: "", start, every: spacing, values: new Float64Array(1) }); // refuses a start that is no time, or of another form
  return { every: spacing, start, n, positions, notes: [] };
}

function wantedColumns(sheet: Sheet, times: readonly number[], { value }: LoadCell, context: RunContext): readonly { readonly name: string; readonly column: number }[] {
  if (value === undefined) {
    const numeric = numericColumns(sheet, times);
    if (numeric.length === 0) throw new OptionError("value", `${sheet.file} has no column of numbers${times.length > 0 ? ` beside the times in "${listOf(times.map((c) => sheet.columns[c]))}"` : ""}; its columns are ${someOf(sheet.columns.map((c) => `"${c}"`), 12)}${nearlyNumbers(sheet, times)}`);
    if (numeric.length > 1) context.note(`Values are those of column "${sheet.columns[numeric[0]]}"; ${sheet.file} also has ${someOf(numeric.slice(1).map((c) => `"${sheet.columns[c]}"`))}, which \`value\` can name`);
    return [{ name: context.name ?? sheet.columns[numeric[0]], column: numeric[0] }];
  }
  if (typeof value === "string") return [{ name: context.name ?? value, column: columnNamed(sheet, value, "value") }];
  if (Array.isArray(value)) {
    if (value.length === 0) throw new OptionError("value", "`value` is an empty list; name at least one column");
    return value.map((name: string) => ({ name, column: columnNamed(sheet, name, "value") }));
  }
  const pairs = Object.entries(value as Readonly<Record<string, unknown>>);
  if (pairs.length === 0) throw new OptionError("value", "`value` is an empty object; name at least one column, as in {crossings: \"vehicles\"}");
  return pairs.map(([name, header]) => {
    if (typeof header !== "string") throw new OptionError("value", `\`value.${name}\` must be the header of a column, in quotes`);
    return { name, column: columnNamed(sheet, header, "value") };
  });
}

/** Numbers with a sign of their own, such as a percentage, are texts to who reads them. */
function nearlyNumbers(sheet: Sheet, times: readonly number[]): string {
  for (let c = 0; c < sheet.columns.length; c++) {
    const cell = cellOf(sheet.rows[0], c);
    if (!times.includes(c) && /^[^\d\s]{0,4}\s?[+-−]?[\d.,'\s]*\d\s?[^\d\s]{0,4}$/u.test(cell)) return `. In "${sheet.columns[c]}", ${JSON.stringify(cell)} is no plain number: leave out what is not a digit, and say \`unit\` instead`;
  }
  return "";
}

function oneSeries(sheet: Sheet, grid: Grid, name: string, column: number, unit: LoadCell["unit"], context: RunContext): Series {
  const { values, repeated } = readValues(sheet, column, grid);
  const own = typeof unit === "object" ? unit[name] ?? "" : unit ?? "";
  if (typeof own !== "string") throw new OptionError("unit", `the unit of ${name} must be a text in quotes`);
  const series = makeSeries({ name, unit: own, every: grid.every, start: grid.start, values });
  noteGaps(sheet, grid, series, repeated, context);
  return series;
}

function noteGaps(sheet: Sheet, grid: Grid, series: Series, repeated: number, context: RunContext): void {
  if (repeated > 0) context.note(`${count(repeated, "row")} of ${sheet.file} repeat${repeated === 1 ? "s" : ""} a time with the same value in ${series.name}; each period is kept once`);
  const there = new Uint8Array(grid.n);
  for (const k of grid.positions) there[k] = 1;
  const absent: string[] = [], empty: string[] = [];
  for (let t = 0; t < series.n; t++) {
    if (!Number.isNaN(series.values[t])) continue;
    (there[t] === 1 ? empty : absent).push(series.times[t]);
  }
  if (absent.length > 0) context.note(`${count(absent.length, "period")} of ${series.n} ${absent.length === 1 ? "is" : "are"} absent from ${sheet.file} and taken as missing: ${someOf(absent)}${weekends(series, there)}`);
  if (empty.length > 0) context.note(`${count(empty.length, "value")} of ${series.name} ${empty.length === 1 ? "is" : "are"} missing: ${someOf(empty)}`);
  if (empty.length + absent.length === series.n) throw new OptionError("value", `${series.name}: every value in ${sheet.file} is missing`);
}

/** Daily data of working days only: what to do about it. */
function weekends(series: Series, there: Uint8Array): string {
  if (series.every !== "P1D") return "";
  const byWeekday = new Float64Array(7);
  there.forEach((v, t) => { byWeekday[t % 7] += v; });
  const silent = byWeekday.filter((v) => v === 0).length;
  return silent === 0 || series.n < 21 ? "" : `. No row falls on ${count(silent, "day")} of the week: if those are no days of business, start: "1" numbers the rows instead`;
}
