// Regressors that are known for every time: they extend into the forecast by themselves.

import { milliseconds, periodIndex, periodSpan } from "../series/calendar.ts";
import { dayMs } from "../series/civil.ts";
import { easterMs } from "./easter.ts";

/** An intervention or calendar effect, as plain data; `interventionColumns` computes its columns. */
export type Intervention =
  | { readonly intervention: "pulse"; readonly at: string }
  | { readonly intervention: "levelShift"; readonly at: string }
  | { readonly intervention: "ramp"; readonly from: string; readonly to: string }
  | { readonly intervention: "harmonics"; readonly length: number; readonly count: number }
  | { readonly intervention: "tradingDays" }
  | { readonly intervention: "easterEffect"; readonly days: number }
  | { readonly intervention: "temporaryChange"; readonly at: string; readonly decay: number };

/** 1 in the period `at` (in each period of it, where `at` is a longer one), 0 elsewhere. */
export const pulse = (at: string): Intervention => ({ intervention: "pulse", at });

/** 0 before the period `at`, 1 from it on. */
export const levelShift = (at: string): Intervention => ({ intervention: "levelShift", at });

/** 0 up to the period `from`, then a straight line that reaches 1 at `to`, and 1 after it. */
export const ramp = (from: string, to: string): Intervention => ({ intervention: "ramp", from, to });

/** `count` pairs of sine and cosine with periods length, length / 2, ... */
export function harmonics(length: number, count: number): Intervention {
  if (!(length >= 2)) throw new RangeError(`harmonics: length is ${length}, expected at least 2 periods`);
  if (!Number.isInteger(count) || count < 1 || count > length / 2) {
    throw new RangeError(`harmonics: count is ${count}, expected a whole number from 1 to ${Math.floor(length / 2)} for a length of ${length}`);
  }
  return { intervention: "harmonics", length, count };
}

/** Six contrasts: how many Mondays less Sundays a period has, Tuesdays less Sundays, ... Saturdays less Sundays. */
export const tradingDays = (): Intervention => ({ intervention: "tradingDays" });

/** The share, falling in each period, of the `days` days before Easter Sunday. */
export function easterEffect(days: number): Intervention {
  if (!Number.isInteger(days) || days < 1 || days > 60) throw new RangeError(`easterEffect: days is ${days}, expected a whole number from 1 to 60`);
  return { intervention: "easterEffect", days };
}

/** 1 in the period `at`, dying away by the factor `decay` each period after it. */
export function temporaryChange(at: string, decay = 0.7): Intervention {
  if (!(decay > 0 && decay < 1)) throw new RangeError(`temporaryChange: decay is ${decay}, expected between 0 and 1`);
  return { intervention: "temporaryChange", at, decay };
}

export interface Columns {
  /** One a column: the regressor's own name, or the name with the part in words (`easter`, `td.Monday`, `wave.sin1`). */
  readonly names: readonly string[];
  readonly columns: readonly Float64Array[];
}

const weekdays = ["Monday", "Tuesday", "Wednesday", "Thursday", "Friday", "Saturday"];

/** Columns of an intervention over `n` periods from `start`, in levels. The value at a time never depends on where
 *  the columns start, so a forecast's columns continue the sample's.
 *  @param every  spacing as in `Series`; null for a numbered series
 *  @throws RangeError where the effect has no meaning at this spacing (trading days of a weekly series)
 *  Trading days: Bell & Hillmer (1983), six contrasts; the length of the period is left to `perDay`.
 *  @example interventionColumns(levelShift("2024-02"), "shift", "2024-01", "P1M", 3).columns[0] // [0, 1, 1] */
export function interventionColumns(intervention: Intervention, name: string, start: string, every: string | null, n: number): Columns {
  const first = periodIndex(start, every);
  const byIndex = (value: (k: number) => number): Columns =>
    ({ names: [name], columns: [Float64Array.from({ length: n }, (_, t) => value(first + t))] });
  switch (intervention.intervention) {
    case "pulse": {
      const [from, to] = span(intervention.at, every);
      return byIndex((k) => (k >= from && k <= to ? 1 : 0));
    }
    case "levelShift": {
      const [from] = span(intervention.at, every);
      return byIndex((k) => (k >= from ? 1 : 0));
    }
    case "ramp": {
      const [from] = span(intervention.from, every), [, to] = span(intervention.to, every);
      if (to <= from) throw new RangeError(`ramp: it ends at ${intervention.to}, which is not after its start ${intervention.from}`);
      return byIndex((k) => Math.min(1, Math.max(0, (k - from) / (to - from))));
    }
    case "temporaryChange": {
      const [from] = span(intervention.at, every);
      return byIndex((k) => (k >= from ? intervention.decay ** (k - from) : 0));
    }
    case "harmonics": return harmonicColumns(intervention, name, first, n);
    case "tradingDays": return tradingDayColumns(name, bounds(start, every, n, "tradingDays"));
    case "easterEffect": return easterColumn(intervention.days, name, bounds(start, every, n, "easterEffect"));
  }
}

/** Numbers of the first and last period that a time text covers. */
function span(time: string, every: string | null): readonly [number, number] {
  const { from, to } = periodSpan(time, every);
  return [from, to - 1];
}

/** Where each of n periods starts, and where the last one ends: n + 1 instants in UTC milliseconds. */
function bounds(start: string, every: string | null, n: number, what: string): Float64Array {
  if (every === null) throw new RangeError(`${what}: the series is only numbered 1, 2, 3; a calendar effect needs dates`);
  return milliseconds(start, every, n + 1);
}

function harmonicColumns(wave: { readonly length: number; readonly count: number }, name: string, first: number, n: number): Columns {
  const names: string[] = [], columns: Float64Array[] = [];
  for (let j = 1; j <= wave.count; j++) {
    const angle = (2 * Math.PI * j) / wave.length;
    names.push(`${name}.cos${j}`);
    columns.push(Float64Array.from({ length: n }, (_, t) => Math.cos(angle * ((first + t) % wave.length))));
    // At the highest frequency of an even length the sine is 0 in every period.
    if (2 * j === wave.length) continue;
    names.push(`${name}.sin${j}`);
    columns.push(Float64Array.from({ length: n }, (_, t) => Math.sin(angle * ((first + t) % wave.length))));
  }
  return { names, columns };
}

function tradingDayColumns(name: string, edges: Float64Array): Columns {
  const n = edges.length - 1, columns = weekdays.map(() => new Float64Array(n));
  let whole = true;
  for (let t = 0; t < n; t++) {
    const days = Math.round((edges[t + 1] - edges[t]) / dayMs);
    if (days < 1) throw new RangeError("tradingDays: periods shorter than a day have no trading days");
    if (days % 7 !== 0) whole = false;
    const counts = new Float64Array(7).fill(Math.floor(days / 7));
    const opening = weekdayOf(edges[t]);
    for (let d = 0; d < days % 7; d++) counts[(opening + d) % 7]++;
    for (let d = 0; d < 6; d++) columns[d][t] = counts[d] - counts[6];
  }
  if (whole && n > 0) throw new RangeError("tradingDays: every period is made of whole weeks, so each has the same days; leave the effect out");
  return { names: weekdays.map((day) => `${name}.${day}`), columns };
}

/** Monday is 0. */
function weekdayOf(ms: number): number { return (new Date(ms).getUTCDay() + 6) % 7; }

function easterColumn(days: number, name: string, edges: Float64Array): Columns {
  const n = edges.length - 1, column = new Float64Array(n);
  if (n > 0 && (edges[n] - edges[0]) / n > 300 * dayMs) throw new RangeError("easterEffect: every year has one Easter, so yearly figures cannot show it; leave the effect out");
  for (let t = 0; t < n; t++) {
    for (let year = new Date(edges[t]).getUTCFullYear(); year <= new Date(edges[t + 1]).getUTCFullYear(); year++) {
      const to = easterMs(year), from = to - days * dayMs;
      column[t] += Math.max(0, Math.min(to, edges[t + 1]) - Math.max(from, edges[t])) / (days * dayMs);
    }
  }
  return { names: [name], columns: [column] };
}
