// Classical decomposition by moving averages, and the seasonal subseries.

import { defaultSeasonLength } from "../series/every.ts";
import type { Series } from "../series/series.ts";
import { isSeries, valuesOf } from "../series/series.ts";

export interface ClassicalDecomposition {
  readonly status: "ok" | "unavailable";
  readonly note?: string;
  readonly kind: "additive" | "multiplicative";
  readonly length: number;
  /** NaN for half a season at each end. */
  readonly trend: Float64Array; readonly seasonal: Float64Array; readonly remainder: Float64Array;
  /** The seasonal figure by position in the season, the first one that of the first value; mean 0 (additive) or 1. */
  readonly figure: Float64Array;
}

/** Trend by a centred moving average a season long, the figure the mean deviation by position, centred.
 *  @throws RangeError where no length is known. Source: Kendall & Stuart (1983), chapter 46. */
export function decompose(x: Series | ArrayLike<number>, { length: asked, kind = "additive" }: { readonly length?: number | null; readonly kind?: "additive" | "multiplicative" } = {}): ClassicalDecomposition {
  const values = valuesOf(x), n = values.length, length = asked ?? (isSeries(x) ? defaultSeasonLength(x.every) : null);
  if (length === null) throw new RangeError("decompose: the spacing of the series names no season: give its length in periods");
  if (!Number.isInteger(length) || length < 2) throw new RangeError(`decompose: length is ${length}, expected a whole number of periods from 2 on`);
  const times = kind === "multiplicative";
  const none = new Float64Array(0);
  if (n < 2 * length) return { status: "unavailable", note: `${n} values are fewer than two seasons of ${length}`, kind, length, trend: none, seasonal: none, remainder: none, figure: none };
  if (times && values.some((v) => v <= 0)) return { status: "unavailable", note: "a multiplicative season needs values above 0", kind, length, trend: none, seasonal: none, remainder: none, figure: none };
  const trend = centredAverage(values, length);
  const sums = new Float64Array(length), counts = new Float64Array(length);
  for (let t = 0; t < n; t++) {
    const d = times ? values[t] / trend[t] : values[t] - trend[t];
    if (!Number.isNaN(d)) { sums[t % length] += d; counts[t % length]++; }
  }
  const raw = sums.map((s, i) => s / counts[i]), centre = raw.reduce((a, b) => a + b, 0) / length;
  const figure = raw.map((f) => (times ? f / centre : f - centre));
  const seasonal = values.map((_, t) => figure[t % length]);
  const remainder = values.map((v, t) => (times ? v / (trend[t] * seasonal[t]) : v - trend[t] - seasonal[t]));
  return { status: "ok", kind, length, trend, seasonal, remainder, figure };
}

/** Average over one season, its ends at half weight where the length is even; NaN where it would pass an end or meets a gap. */
function centredAverage(values: Float64Array, length: number): Float64Array {
  const half = Math.floor(length / 2), even = length % 2 === 0, out = new Float64Array(values.length).fill(NaN);
  for (let t = half; t + half < values.length; t++) {
    let sum = 0;
    for (let k = -half; k <= half; k++) sum += (even && Math.abs(k) === half ? 0.5 : 1) * values[t + k];
    out[t] = sum / length;
  }
  return out;
}

/** One position of the season through the years. */
export interface Subseries {
  /** Position in the season, from 0 for that of the first value. */
  readonly position: number;
  readonly times: readonly string[];
  readonly values: Float64Array;
  /** Mean of the observed values; NaN where none is. */
  readonly mean: number;
}

/** The values by position in the season, each with its mean: the numbers of a seasonal subseries picture.
 *  @throws RangeError where no length is known */
export function subseries(x: Series | ArrayLike<number>, asked?: number | null): readonly Subseries[] {
  const values = valuesOf(x), length = asked ?? (isSeries(x) ? defaultSeasonLength(x.every) : null);
  if (length === null) throw new RangeError("subseries: the spacing of the series names no season: give its length in periods");
  if (!Number.isInteger(length) || length < 2) throw new RangeError(`subseries: length is ${length}, expected a whole number of periods from 2 on`);
  return Array.from({ length: Math.min(length, values.length) }, (_, position) => {
    const at = Array.from({ length: Math.ceil((values.length - position) / length) }, (_, k) => position + k * length);
    const own = Float64Array.from(at, (t) => values[t]), seen = own.filter((v) => !Number.isNaN(v));
    return { position, times: at.map((t) => (isSeries(x) ? x.times[t] : String(t + 1))), values: own, mean: seen.reduce((a, b) => a + b, 0) / seen.length };
  });
}
