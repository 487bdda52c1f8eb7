// Autocorrelations and cross-correlations of what was observed.

import type { Series } from "../series/series.ts";
import { autocovariance, centre, checkLags, crossCovariance } from "./autocovariance.ts";
import { commonStretch } from "./commonStretch.ts";

/** Sample autocorrelations at lags 0..lags (divisor n; the rule for gaps is that of `autocovariance`).
 *  @returns length lags + 1, first one 1; all NaN where the values do not vary: a correlation is not defined there
 *  @throws RangeError if lags is out of range
 *  @example acf([1, 2, 3, 4], 1) // [1, 0.25] */
export function acf(x: Series | ArrayLike<number>, lags: number): Float64Array {
  const gamma = autocovariance(x, lags);
  return scaled(gamma, gamma[0]);
}

/** Sample cross-correlations: index k is the correlation of x at t with y at t + k, k = 0..lags (x leads y by k).
 *  For y leading x, exchange them. Divisor n, each about its own mean; complete pairs where there are gaps.
 *  Two series are aligned by their times, over the periods that both have.
 *  @throws RangeError where they share no period, bare numbers are not equally many, or lags is out of range
 *  @example ccf([1, 2, 3, 5], [0, 1, 2, 3], 1)[1] // 0.132 */
export function ccf(x: Series | ArrayLike<number>, y: Series | ArrayLike<number>, lags: number): Float64Array {
  const { x: a, y: b } = commonStretch("ccf", x, y);
  checkLags("ccf", lags, a.length);
  const ca = centre(a), cb = centre(b);
  const scale = Math.sqrt(crossCovariance(ca, ca, 0)[0] * crossCovariance(cb, cb, 0)[0]);
  return scaled(crossCovariance(ca, cb, lags), scale);
}

function scaled(gamma: Float64Array, by: number): Float64Array {
  return gamma.map((g) => (by > 0 ? g / by : NaN));
}
