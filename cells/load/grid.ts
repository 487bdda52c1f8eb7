// The rows of a file on a regular grid of periods: order, spacing, gaps and duplicates.

import { civilFromDays, everyInWords, formatEvery, formatPeriod, inferEvery, milliseconds, parseEvery, period, positionsOf, startMs, type Period } from "../../stdlib/index.ts";
import { OptionError } from "../kind.ts";
import type { Row } from "./csv.ts";

const dayMs = 86_400_000;
const mostPeriods = 5_000_000;

export interface Grid {
  readonly every: string | null;
  readonly start: string;
  readonly n: number;
  /** Position on the grid of each row of the file. */
  readonly positions: Int32Array;
  readonly notes: readonly string[];
}

/** Places rows on a grid.
 *  @param asked  the spacing the author gave; inferred otherwise
 *  @throws OptionError naming file and lines */
export function gridOf(file: string, rows: readonly Row[], read: readonly Period[], asked: string | undefined): Grid {
  const notes: string[] = [];
  const order = Array.from(read, (_, i) => i);
  const ms = Float64Array.from(read, startMs);
  const unordered = order.find((i) => i > 0 && ms[i] < ms[i - 1]);
  if (unordered !== undefined) {
    const falling = order.every((i) => i === 0 || ms[i] <= ms[i - 1]);
    notes.push(falling ? `${file} runs backwards in time; its rows were put in order` : `${file}: line ${rows[unordered].line} (${formatPeriod(read[unordered])}) comes after a later time; the rows were put in order of time`);
    order.sort((a, b) => ms[a] - ms[b] || a - b);
  }
  if (read[0].unit === "number") return numberedGrid(file, rows, read, asked, notes);
  const every = spacing(file, read, ms, order, asked);
  const { periods, note } = inUsualForm(read, every);
  if (note !== null) notes.push(note);
  const first = periods[order[0]];
  const start = formatPeriod(first);
  const starts = Float64Array.from(periods, startMs);
  const positions = placed(starts, { start, every });
  const n = checkedLength(file, rows, order, positions, periods, positions[order[order.length - 1]] + 1);
  checkOnGrid(file, rows, periods, starts, positions, { start, every, n });
  return { every, start, n, positions, notes };
}

function numberedGrid(file: string, rows: readonly Row[], read: readonly Period[], asked: string | undefined, notes: string[]): Grid {
  if (asked !== undefined) throw new OptionError("every", `${file} only numbers its rows, so \`every\` needs a \`start\`: leave \`time\` out and write start: "2019-01"`);
  const low = read.reduce((least, p) => Math.min(least, p.index), Infinity);
  const high = read.reduce((most, p) => Math.max(most, p.index), -Infinity);
  const positions = Int32Array.from(read, (p) => p.index - low);
  const order = Array.from(read, (_, i) => i).sort((a, b) => positions[a] - positions[b]);
  return { every: null, start: String(low), n: checkedLength(file, rows, order, positions, read, high - low + 1), positions, notes };
}

function spacing(file: string, read: readonly Period[], ms: Float64Array, order: readonly number[], asked: string | undefined): string {
  if (asked !== undefined) {
    try { return formatEvery(parseEvery(asked)); } catch (error) {
      if (error instanceof RangeError) throw new OptionError("every", error.message);
      throw error;
    }
  }
  const distinct = order.filter((i, k) => k === 0 || ms[i] !== ms[order[k - 1]]).map((i) => read[i]);
  const found = inferEvery(distinct);
  if (found !== null) return found;
  if (distinct.length < 2) {
    const usual: Readonly<Record<string, string>> = { year: "P1Y", quarter: "P3M", month: "P1M", week: "P1W", day: "P1D" };
    if (read[0].unit in usual) return usual[read[0].unit];
    throw new OptionError("every", `${file} has one time, ${formatPeriod(distinct[0])}; say how far apart the periods are, as in every: "hour"`);
  }
  const some = distinct.slice(0, 4).map(formatPeriod).join(", ");
  throw new OptionError("every", `${file}: the times (${some}, …) are not evenly spaced; say how far apart the periods are, as in every: "day": absent ones become missing values`);
}

/** Dates one a month become months, quarters or years; instants at midnight, whole days apart, become dates. */
function inUsualForm(read: readonly Period[], every: string): { readonly periods: readonly Period[]; readonly note: string | null } {
  const { months, ms } = parseEvery(every);
  const { unit } = read[0];
  if (unit === "time" && (months > 0 || ms % dayMs === 0) && read.every((p) => p.index % dayMs === 0)) {
    return inUsualForm(read.map((p) => period("day", p.index / dayMs)), every);
  }
  if (unit !== "day" || months === 0) return { periods: read, note: null };
  const index = read.map((p) => { const { year, month } = civilFromDays(p.index); return year * 12 + month - 1; });
  const atYearEnd = months === 12 && index.every((m) => mod(m, 12) === 0 || mod(m, 12) === 11);
  const atQuarter = months === 3 && (index.every((m) => mod(m, 3) === 0) || index.every((m) => mod(m, 3) === 2));
  const [name, periods] = atYearEnd ? ["years", index.map((m) => period("year", Math.floor(m / 12)))] as const
    : atQuarter ? ["quarters", index.map((m) => period("quarter", Math.floor(m / 3)))] as const
    : ["months", index.map((m) => period("month", m))] as const;
  return { periods, note: `Dates such as ${formatPeriod(read[0])} are read as ${name} (${formatPeriod(periods[0])})` };
}

function placed(starts: Float64Array, grid: { readonly start: string; readonly every: string }): Int32Array {
  try { return positionsOf(grid, starts); } catch (error) {
    if (error instanceof RangeError) throw new OptionError("every", `every ${everyInWords(grid.every)} does not fit times such as ${grid.start}: ${error.message}`);
    throw error;
  }
}

/** A row whose time does not start a period of the grid was given too coarse a spacing, or falls beside it. */
function checkOnGrid(file: string, rows: readonly Row[], periods: readonly Period[], starts: Float64Array, positions: Int32Array, grid: { readonly start: string; readonly every: string; readonly n: number }): void {
  const { start, every } = grid;
  const expected = milliseconds(start, every, grid.n);
  const i = periods.findIndex((_, k) => expected[positions[k]] !== starts[k]);
  if (i >= 0) throw new OptionError("every", `${file}, line ${rows[i].line}: ${formatPeriod(periods[i])} does not fall on a ${everyInWords(every)} counted from ${start}; load the file at its own spacing and use aggregate(${JSON.stringify(every)}, "sum") in a transform, or mend the time`);
}

function checkedLength(file: string, rows: readonly Row[], order: readonly number[], positions: Int32Array, periods: readonly Period[], n: number): number {
  let leap = 1;
  for (let k = 1; k < order.length; k++) if (positions[order[k]] - positions[order[k - 1]] > positions[order[leap]] - positions[order[leap - 1]]) leap = k;
  if (n > 3 * rows.length + 100 || n > mostPeriods) {
    throw new OptionError("time", `${file}: after ${formatPeriod(periods[order[leap - 1]])} (line ${rows[order[leap - 1]].line}) comes ${formatPeriod(periods[order[leap]])} (line ${rows[order[leap]].line}), so that ${n - rows.length} of ${n} periods would be missing; look for a slip in a date, or say a longer spacing with \`every\``);
  }
  return n;
}

function mod(a: number, b: number): number {
  return ((a % b) + b) % b;
}
