// Series against each other and against themselves: lags, and sums or ratios period by period.

import { positionIn } from "./calendar.ts";
import { everyInWords } from "./every.ts";
import { isSeries, withValues, type Series } from "./series.ts";

/** The same times, each with the value k periods earlier; the first k (or, k negative, the last -k) are missing. */
export function lagged(series: Series, k: number): Series {
  if (!Number.isInteger(k)) throw new RangeError(`lagged: k is ${k}; give a whole number of periods`);
  const values = Float64Array.from({ length: series.n }, (_, t) => series.values[t - k] ?? NaN);
  return withValues(series, values, { name: k === 0 ? series.name : `${series.name}, ${Math.abs(k)} ${k > 0 ? "earlier" : "later"}` });
}

/** A function of two series, period by period, over the periods that both have. One of them may be a plain number.
 *  The result has no name; its unit is that of both where they share one.
 *  @throws RangeError where the spacings differ or no period is shared */
export function combine(a: Series | number, b: Series | number, f: (x: number, y: number) => number): Series {
  const call = (x: number, y: number): number => {
    const value = f(x, y);
    if (typeof value !== "number") throw new RangeError(`combine: the function gives ${value === null ? "null" : `a ${typeof value}`} where a number belongs`);
    return value;
  };
  if (!isSeries(a)) {
    if (!isSeries(b)) throw new RangeError("combine: give at least one series");
    return withValues(b, b.values.map((y) => call(a, y)), { name: "", unit: "" });
  }
  if (!isSeries(b)) return withValues(a, a.values.map((x) => call(x, b)), { name: "", unit: "" });
  const offset = offsetBetween(a, b);
  const from = Math.max(0, offset), to = Math.min(a.n, offset + b.n);
  if (to <= from) throw new RangeError(`combine: ${a.name || "the first series"} (${a.start} on) and ${b.name || "the second"} (${b.start} on) share no period`);
  const values = Float64Array.from({ length: to - from }, (_, i) => call(a.values[from + i], b.values[from + i - offset]));
  const times = a.times.slice(from, to);
  return { name: "", unit: a.unit === b.unit ? a.unit : "", every: a.every, start: times[0], n: values.length, values, times, steps: [] };
}

/** Position in `a` at which `b` starts; may be negative.
 *  @throws RangeError where the spacings differ */
export function offsetBetween(a: Series, b: Series): number {
  if (a.every !== b.every) throw new RangeError(`${a.name || "the first series"} comes every ${everyInWords(a.every)} and ${b.name || "the second"} every ${everyInWords(b.every)}; aggregate one of them first`);
  return positionIn(a, b.start);
}
