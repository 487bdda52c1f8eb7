// Time and position: the k-th period of a regular series, and the positions that a span of time covers.

import { civilFromDays, dayMs, daysFromCivil, daysInMonth } from "./civil.ts";
import { parseEvery, type Spacing } from "./every.ts";
import { endMs, formatPeriod, parsePeriod, period, startMs, type Period } from "./period.ts";
import type { Series } from "./series.ts";

/** The period that a text names in a series of this spacing; a plain number where `every` is null.
 *  @throws RangeError in words */
export function periodOf(time: unknown, every: string | null): Period {
  if (typeof time === "number") throw new RangeError(`${time} is a number where a time belongs: quote the date, as in "${time}"`);
  if (typeof time !== "string") throw new RangeError(`a time is a quoted ISO 8601 text such as "2019-03", and this is ${time === null ? "null" : Array.isArray(time) ? "a list" : `of type ${typeof time}`}`);
  if (every === null) {
    if (/^[+-]?\d+$/.test(time)) return period("number", Number(time));
    throw new RangeError(`"${time}" cannot be found: the series is only numbered 1, 2, 3, … ; quote a number, as in "12"`);
  }
  const found = parsePeriod(time);
  if (found) return found;
  throw new RangeError(`"${time}" is not a date: write an ISO 8601 text such as "2019", "2019-Q1", "2019-03", "2019-W07", "2019-03-05" or "2019-03-05T14:00"`);
}

/** A period moved by k spacings. Where a day of the month does not exist, the month's last one. */
export function shifted(from: Period, every: Spacing | null, k: number): Period {
  if (every === null) return { ...from, index: from.index + k };
  const { months, ms } = every;
  switch (from.unit) {
    case "number": return { ...from, index: from.index + k };
    case "year": return { ...from, index: from.index + whole(months / 12, "years") * k };
    case "quarter": return { ...from, index: from.index + whole(months / 3, "quarters") * k };
    case "month": return { ...from, index: from.index + whole(months, "months") * k };
    case "week": return { ...from, index: from.index + whole(ms / (7 * dayMs), "weeks") * k };
    case "day": return { ...from, index: months > 0 ? addMonths(from.index, months * k) : from.index + whole(ms / dayMs, "days") * k };
    case "time": {
      if (months === 0) return { ...from, index: from.index + ms * k };
      const days = Math.floor(from.index / dayMs);
      return { ...from, index: addMonths(days, months * k) * dayMs + (from.index - days * dayMs) };
    }
  }
}

/** ISO 8601 text of the k-th period (k = 0 is `start`). */
export function timeAt(start: string, every: string | null, k: number): string {
  return formatPeriod(shifted(periodOf(start, every), every === null ? null : parseEvery(every), k));
}

/** ISO 8601 texts of n periods from `start`. */
export function timesFrom(start: string, every: string | null, n: number): string[] {
  const first = periodOf(start, every);
  const spacing = every === null ? null : parseEvery(every);
  const times: string[] = [];
  for (let k = 0; k < n; k++) times.push(formatPeriod(shifted(first, spacing, k)));
  return times;
}

/** UTC milliseconds of the first instant of n periods from `start`; the plain numbers where the series is only numbered. */
export function milliseconds(start: string, every: string | null, n: number): Float64Array {
  const first = periodOf(start, every);
  const spacing = every === null ? null : parseEvery(every);
  const times = new Float64Array(n);
  for (let k = 0; k < n; k++) times[k] = startMs(shifted(first, spacing, k));
  return times;
}

/** Position of a time in a series that starts at `start`: of the period that contains the time's first instant. May be negative, or beyond any length. */
export function positionIn(series: Pick<Series, "start" | "every">, time: string): number {
  const first = periodOf(series.start, series.every);
  const sought = periodOf(time, series.every);
  if (series.every === null) return sought.index - first.index;
  return positionOf(first, parseEvery(series.every), startMs(sought));
}

/** Positions of many instants (UTC milliseconds) in a series, as `positionIn` gives them; for numbered series, of the numbers. */
export function positionsOf(series: Pick<Series, "start" | "every">, ms: ArrayLike<number>): Int32Array {
  const first = periodOf(series.start, series.every);
  if (series.every === null) return Int32Array.from(ms, (v) => v - first.index);
  const spacing = parseEvery(series.every);
  return Int32Array.from(ms, (v) => positionOf(first, spacing, v));
}

/** Number of the period that contains a time's first instant, on a grid that is the same for every series of this spacing:
 *  neighbouring periods differ by 1. Months, quarters and years count from year 0, weeks from a Monday, the rest from 1970. */
export function periodIndex(time: string, every: string | null): number {
  const p = periodOf(time, every);
  return every === null ? p.index : gridIndex(startMs(p), parseEvery(every));
}

/** Numbers of the periods that a time text covers, half open, on the grid of `periodIndex`.
 *  A time finer than the spacing means the one period that contains it.
 *  @example periodSpan("2019", "P1M") // { from: 24228, to: 24240 } */
export function periodSpan(time: string, every: string | null): { readonly from: number; readonly to: number } {
  const p = periodOf(time, every);
  if (every === null) return { from: p.index, to: p.index + 1 };
  const spacing = parseEvery(every);
  const lead = spacing.ms === 7 * dayMs ? 3 * dayMs : 0; // a week belongs to the year of its Thursday
  const start = startMs(p), end = endMs(p);
  const first = gridIndex(start, spacing);
  const from = gridIndex(start - lead - 1, spacing) + 1;
  const to = gridIndex(end - lead - 1, spacing) + 1;
  return to > from && (p.unit !== "day" || lead === 0) ? { from, to } : { from: first, to: first + 1 };
}

/** Number of the period that contains an instant (UTC milliseconds), on the grid of `periodIndex`. */
export function gridIndex(ms: number, spacing: Spacing): number {
  if (spacing.months > 0) {
    const { year, month } = civilFromDays(Math.floor(ms / dayMs));
    return Math.floor((year * 12 + month - 1) / spacing.months);
  }
  return Math.floor((ms - (spacing.ms % (7 * dayMs) === 0 ? 4 * dayMs : 0)) / spacing.ms);
}

type Spaced = Pick<Series, "name" | "start" | "every" | "n">;

/** Positions of a span of time, half open. Either end may be left out; a partial date covers its whole period;
 *  a time finer than the spacing means the period that contains it.
 *  @throws RangeError in words: not a time, empty span, outside the series */
export function indexRange(series: Spaced, from?: unknown, to?: unknown): { readonly from: number; readonly to: number } {
  const low = from === undefined || from === null ? 0 : firstPosition(series, from);
  const high = to === undefined || to === null ? series.n : lastPosition(series, to) + 1;
  const label = series.name === "" ? "the series" : series.name;
  const lastTime = timeAt(series.start, series.every, series.n - 1);
  if (low >= series.n) throw new RangeError(`${String(from)} lies after the last period of ${label}, ${lastTime}`);
  if (high <= 0) throw new RangeError(`${String(to)} lies before the first period of ${label}, ${series.start}`);
  if (high <= low) throw new RangeError(`nothing lies between ${String(from)} and ${String(to)} in ${label}: the start comes after the end`);
  return { from: Math.max(0, low), to: Math.min(series.n, high) };
}

function firstPosition(series: Spaced, time: unknown): number {
  const sought = periodOf(time, series.every);
  if (series.every === null) return sought.index - Number(series.start);
  const { first, spacing, lead } = layout(series.start, series.every);
  if (finer(sought, first, spacing)) return positionOf(first, spacing, startMs(sought));
  // The first period whose reference instant is not before the span.
  return ceilPosition(first, spacing, startMs(sought) - lead);
}

function lastPosition(series: Spaced, time: unknown): number {
  const sought = periodOf(time, series.every);
  if (series.every === null) return sought.index - Number(series.start);
  const { first, spacing, lead } = layout(series.start, series.every);
  if (finer(sought, first, spacing)) return positionOf(first, spacing, startMs(sought));
  return ceilPosition(first, spacing, endMs(sought) - lead) - 1;
}

/** An ISO week belongs to the year (and month) of its Thursday, three days after its start; every other period to that of its start. */
function layout(start: string, every: string): { readonly first: Period; readonly spacing: Spacing; readonly lead: number } {
  const first = periodOf(start, every);
  return { first, spacing: parseEvery(every), lead: first.unit === "week" ? 3 * dayMs : 0 };
}

function finer(sought: Period, first: Period, spacing: Spacing): boolean {
  const spacingMs = spacing.months > 0 ? spacing.months * 28 * dayMs : spacing.ms;
  return endMs(sought) - startMs(sought) < Math.min(spacingMs, startMs(shifted(first, spacing, 1)) - startMs(first));
}

/** The last k whose period starts at or before an instant. */
function positionOf(first: Period, spacing: Spacing, ms: number): number {
  const meanMs = spacing.months > 0 ? spacing.months * 30.436875 * dayMs : spacing.ms;
  let k = Math.floor((ms - startMs(first)) / meanMs);
  while (startMs(shifted(first, spacing, k)) > ms) k--;
  while (startMs(shifted(first, spacing, k + 1)) <= ms) k++;
  return k;
}

/** The first k whose period starts at or after an instant. */
function ceilPosition(first: Period, spacing: Spacing, ms: number): number {
  const k = positionOf(first, spacing, ms);
  return startMs(shifted(first, spacing, k)) === ms ? k : k + 1;
}

/** Days in a period of this spacing. */
export function daysIn(time: string, every: string): number {
  const p = periodOf(time, every);
  return (startMs(shifted(p, parseEvery(every), 1)) - startMs(p)) / dayMs;
}

function addMonths(days: number, months: number): number {
  const { year, month, day } = civilFromDays(days);
  const index = year * 12 + month - 1 + months;
  const y = Math.floor(index / 12);
  const m = index - y * 12 + 1;
  return daysFromCivil(y, m, Math.min(day, daysInMonth(y, m)));
}

function whole(count: number, what: string): number {
  if (count >= 1 && Number.isInteger(count)) return count;
  throw new RangeError(`the spacing is not a whole number of ${what}, and the times are written in ${what}`);
}
