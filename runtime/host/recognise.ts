// What a data file holds, as far as `begin` can tell: its series, the times, their spacing.

import { basename, extname } from "node:path";
import { language } from "../../cells/index.ts";
import { numericColumns, timeColumns } from "../../cells/load/columns.ts";
import { readSheet } from "../../cells/load/sheet.ts";
import { acrossTheYear } from "../../cells/load/wide.ts";
import { nameFault } from "../text/names.ts";
import { ask } from "./ask.ts";
import { loadCell } from "./beginText.ts";
import type { LoadText, Recognised } from "./beginText.ts";
import { NoFile, readInside } from "./folder.ts";
import { compute } from "./headless.ts";
import { CannotRun } from "./io.ts";

/** @param file  inside `folder`, as the notebook will name it
 *  @throws CannotRun where there is no series to be had, with the reason */
export async function recognise(folder: string, file: string): Promise<Recognised> {
  let bytes: Uint8Array;
  try { bytes = await readInside(folder, file); } catch (error) { throw error instanceof NoFile ? new CannotRun(error.message) : error; }
  const { times, numbers } = await columnsOf(bytes, file);
  const column = numbers.length > 1 ? numbers[0] : null;
  const { words, unit } = headerWords(numbers[0] ?? "");
  const load: LoadText = { name: identifier(words, file), file, column, unit, order: null, numbered: false };
  const { order, every, notes } = await readable(folder, load);
  const week = every === "P1D" ? await workingWeek(folder, { ...load, order }) : null;
  // Days without business are no gaps: the rows are numbered, and their column is named, for dates written as 20190305 are numbers too.
  const found = week === null ? { ...load, order, every, notes } : { ...load, column: numbers[0], numbered: true, every: null, notes: [] };
  return { ...found, otherColumns: numbers.slice(1, 9), timeColumns: times, week };
}

/** Columns of times and of numbers, by their headers; those that `load` makes of a file with one row a year. */
async function columnsOf(bytes: Uint8Array, file: string): Promise<{ readonly times: readonly string[]; readonly numbers: readonly string[] }> {
  try {
    const read = await readSheet(bytes, file), sheet = acrossTheYear(read) ?? read;
    const times = timeColumns(sheet, undefined);
    return { times: times.map((column) => sheet.columns[column]), numbers: numericColumns(sheet, times).map((column) => sheet.columns[column]) };
  } catch (error) {
    throw new CannotRun(error instanceof Error ? error.message : String(error));
  }
}

/** @example headerWords("Sales (EUR)") // { words: "Sales", unit: "EUR" } */
function headerWords(header: string): { readonly words: string; readonly unit: string | null } {
  const [, words, round, square] = /^(.*\S)\s*(?:\(([^()]+)\)|\[([^\][]+)\])$/.exec(header) ?? [];
  return { words: words ?? header, unit: (round ?? square)?.trim() ?? null };
}

interface Read { readonly order: LoadText["order"]; readonly every: string | null; readonly notes: readonly string[]; readonly fault: string | null }

/** The spacing that `load` finds, and its remarks. Where the file leaves open whether day or month comes first, the order that gives evenly spaced times. */
async function readable(folder: string, load: LoadText): Promise<Read> {
  const plain = await tried(folder, load);
  if (plain.fault === null) return plain;
  if (!/may be day first or month first/.test(plain.fault)) throw new CannotRun(plain.fault);
  const orders = await Promise.all((["day-month", "month-day"] as const).map((order) => tried(folder, { ...load, order })));
  const even = orders.filter((each) => each.fault === null);
  if (even.length === 1) return even[0];
  throw new CannotRun(`${plain.fault}. Neither order alone gives evenly spaced times: write the dates as 2019-03-05, and begin again.`);
}

async function tried(folder: string, load: LoadText): Promise<Read> {
  const { cells, numbers } = await compute({ text: `${loadCell(load)}\n\n[-](=${load.name}.every)\n`, folder, settings: [], allowCode: false });
  const every = numbers[0]?.value;
  return { order: load.order, fault: cells[0].state === "failed" ? cells[0].message ?? "The data could not be read." : null, every: typeof every === "string" ? every : null, notes: cells[0].notes };
}

/** How many days a week have values, where some have none and the others hardly miss one; null otherwise. */
async function workingWeek(folder: string, load: LoadText): Promise<number | null> {
  const { name } = load, there = `${name}.values.filter(x => x === x).length`;
  const [days, n, present] = await ask(folder, [loadCell(load)], [`range(0, 6, 1).filter(day => ${name}.values.some((x, i) => i % 7 === day && x === x)).length`, `${name}.n`, there], name);
  if (typeof days !== "number" || typeof n !== "number" || typeof present !== "number") return null;
  return n >= 21 && days < 7 && days > 1 && present >= 0.9 * n * days / 7 ? days : null;
}

/** A name for the series: its column's, or the file's where the column says nothing. */
function identifier(column: string, file: string): string {
  const kinds = new Set(language.kinds.map((kind) => kind.name));
  const taken = new Set([...language.library.map((entry) => entry.name.split(".")[0]), ...Object.keys(language.constants), "sample", "steady", "tests", "shape", "orders", "p", "q", "model", "leftover", "contest", "ahead"]);
  const stem = basename(file, extname(file));
  const general = /^(value|values|y|x|data|v|number|amount|count|column \d+|)$/i.test(column.trim());
  for (const words of general ? [stem, column] : [column, stem]) {
    const [first = "", ...rest] = words.normalize("NFKD").replace(/[\u0300-\u036f]/g, "").split(/[^A-Za-z0-9]+/).filter((part) => part !== "");
    const name = [first.charAt(0).toLowerCase() + first.slice(1), ...rest.map((part) => part.charAt(0).toUpperCase() + part.slice(1))].join("");
    if (/^[A-Za-z]\w*$/.test(name) && !taken.has(name) && nameFault(name, kinds) === null) return name;
  }
  return "observed";
}
