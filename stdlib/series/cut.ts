// The part of a series inside a window, in such a way that no step behind it saw what lies outside.

import { indexRange, positionIn } from "./calendar.ts";
import type { Series } from "./series.ts";
import { applyStep, stepOf } from "./steps.ts";

/** The part of a series inside a window, both ends included. The series that its steps remember are cut alike, and steps
 *  that look at the whole series (a trend, a season, a filling) are taken again on the part: nothing sees later data.
 *  @throws RangeError in words */
export function cut(series: Series, window: { readonly from?: string | null; readonly to?: string | null } | null | undefined): Series {
  if (!window || ((window.from ?? null) === null && (window.to ?? null) === null)) return series;
  const { from, to } = indexRange(series, window.from, window.to);
  return slice(series, from, to);
}

/** Positions from..to of a series, half open, 0 <= from <= to <= n, cut as `cut` does. */
export function slice(series: Series, from: number, to: number): Series {
  if (from < 0 || to > series.n || from > to) throw new RangeError(`slice: positions ${from} to ${to}, expected 0 to ${series.n}`);
  if (from === 0 && to === series.n) return series;
  const step = series.steps.at(-1);
  if (step === undefined) return { ...part(series, from, to), ...(to < series.n ? { later: after(series, to) } : {}) };
  if (step.step === "aggregate") return applyStep(slice(step.before, ...coveredBy(series, step.before, from, to)), stepOf(step));
  // A difference lost `lost` values at the start; the other steps lose none.
  const lost = step.before.n - series.n;
  const before = slice(step.before, from, to + lost);
  if (wholeStep(step.step) || before.steps.some((s) => wholeStep(s.step) || s.step === "aggregate")) return applyStep(before, stepOf(step));
  const { start, n, values, times } = part(series, from, to);
  return { ...series, start, n, values, times, steps: [...before.steps, { ...step, before }] };
}

function wholeStep(step: string): boolean {
  return step === "detrend" || step === "seasonallyAdjust" || step === "fill";
}

function part(series: Series, from: number, to: number): Series {
  const times = series.times.slice(from, to);
  const { later, ...own } = series;
  return { ...own, start: times[0] ?? series.start, n: to - from, values: series.values.slice(from, to), times, ...(later === undefined ? {} : { later }) };
}

/** What a cut leaves behind the end, with what an earlier cut left there. */
function after(series: Series, to: number): Series {
  const { later, ...own } = series;
  const rest = part(own, to, series.n);
  if (later === undefined) return rest;
  const values = new Float64Array(rest.n + later.n);
  values.set(rest.values);
  values.set(later.values, rest.n);
  return { ...rest, n: values.length, values, times: [...rest.times, ...later.times] };
}

function coveredBy(series: Series, before: Series, from: number, to: number): [number, number] {
  if (before.every === null || series.every === null) throw new RangeError("an aggregated series has dates, and one of these is only numbered");
  const low = positionIn(before, series.times[from] ?? series.start);
  const high = to < series.n ? positionIn(before, series.times[to]) : before.n;
  return [Math.max(0, low), Math.max(0, Math.min(before.n, high))];
}
