// Small questions to a series or a list of numbers: mean, spread, ends.

import { indexRange } from "./calendar.ts";
import { cut } from "./cut.ts";
import { valuesOf, type Series } from "./series.ts";

type Numbers = Series | ArrayLike<number | null>;

/** Mean of the observed values; NaN where there are none. */
export function mean(x: Numbers): number {
  const values = valuesOf(x);
  let sum = 0, count = 0;
  for (const v of values) if (!Number.isNaN(v)) { sum += v; count++; }
  if (count === 0) return NaN;
  const rough = sum / count;
  let rest = 0; // second pass takes back what rounding lost
  for (const v of values) if (!Number.isNaN(v)) rest += v - rough;
  return rough + rest / count;
}

/** Variance of the observed values with divisor n - 1; NaN below two of them. */
export function variance(x: Numbers): number {
  const values = valuesOf(x);
  const centre = mean(values);
  let squares = 0, rest = 0, count = 0;
  for (const v of values) if (!Number.isNaN(v)) { squares += (v - centre) ** 2; rest += v - centre; count++; }
  return count < 2 ? NaN : (squares - (rest * rest) / count) / (count - 1);
}

/** Standard deviation of the observed values with divisor n - 1; NaN below two of them. */
export function sd(x: Numbers): number {
  return Math.sqrt(variance(x));
}

/** The first value, missing or not; NaN of an empty list. */
export function first(x: Numbers): number {
  const values = valuesOf(x);
  return values.length > 0 ? values[0] : NaN;
}

/** The last value, missing or not; NaN of an empty list. */
export function last(x: Numbers): number {
  const values = valuesOf(x);
  return values.length > 0 ? values[values.length - 1] : NaN;
}

/** The value at a time.
 *  @throws RangeError where the time covers several periods, or none */
export function at(series: Series, time: string): number {
  const { from, to } = indexRange(series, time, time);
  if (to - from !== 1) throw new RangeError(`at: ${time} covers ${to - from} periods of ${series.name || "the series"}; name one, such as "${series.times[from]}", or use mean(between(…))`);
  return series.values[from];
}

/** The part between two times, both ends included. Either may be null: from the start, to the end. */
export function between(series: Series, from?: string | null, to?: string | null): Series {
  return cut(series, { from, to });
}
