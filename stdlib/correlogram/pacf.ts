// Partial autocorrelations by three methods, which differ in small samples and near the unit circle.

import type { Series } from "../series/series.ts";
import { valuesOf } from "../series/series.ts";
import { acf } from "./acf.ts";
import { centre, checkLags } from "./autocovariance.ts";
import { regressionPartials } from "./regressionPartials.ts";

export type PartialMethod = "levinson" | "regression" | "burg";

/** Sample partial autocorrelations at lags 0..lags; index 0 is 1, like every correlation here.
 *  @param how  "levinson": from the autocorrelations, always within (-1, 1); "regression": last coefficient of least
 *              squares with a constant on lags 1..k, all rows available; "burg": least forward and backward errors
 *  @returns    length lags + 1; NaN where a lag has no answer (constant values, too few rows)
 *  @throws RangeError if lags is out of range, or Burg's method meets a gap
 *  Sources: Brockwell & Davis (1991), sections 5.2 and 8.2. Cost: levinson O(lags^2) after `acf`; regression O(n lags + lags^4).
 *  @example pacf([1, 2, 3, 4], 1) // [1, 0.25] */
export function pacf(x: Series | ArrayLike<number>, lags: number, how: PartialMethod = "levinson"): Float64Array {
  const values = valuesOf(x);
  checkLags("pacf", lags, values.length);
  if (how === "levinson") return partialFrom(acf(values, lags));
  if (how === "burg") return burgPartials(values, lags);
  if (how === "regression") return regressionPartials(values, lags);
  throw new RangeError(`pacf: "${String(how)}" is not a method: use "levinson", "regression" or "burg"`);
}

/** Partial autocorrelations from autocorrelations 0..K by the Durbin-Levinson recursion. */
export function partialFrom(correlations: ArrayLike<number>): Float64Array {
  const lags = correlations.length - 1;
  const partial = new Float64Array(lags + 1), phi = new Float64Array(lags + 1), before = new Float64Array(lags + 1);
  partial[0] = 1;
  let error = 1; // prediction error variance over the variance
  for (let k = 1; k <= lags; k++) {
    let top = correlations[k];
    for (let j = 1; j < k; j++) top -= before[j] * correlations[k - j];
    const last = top / error;
    partial[k] = phi[k] = last;
    for (let j = 1; j < k; j++) phi[j] = before[j] - last * before[k - j];
    before.set(phi);
    error *= 1 - last * last;
  }
  return partial;
}

/** Burg's reflection coefficients, mean removed: each minimises forward plus backward error squares (Burg 1967). */
function burgPartials(values: Float64Array, lags: number): Float64Array {
  const { deviations, seen } = centre(values);
  if (seen !== null) throw new RangeError('pacf: Burg\'s method needs a series without gaps; "levinson" allows them');
  const n = deviations.length, partial = new Float64Array(lags + 1);
  partial[0] = 1;
  const forward = Float64Array.from(deviations), backward = Float64Array.from(deviations);
  for (let k = 1; k <= lags; k++) {
    let top = 0, bottom = 0;
    for (let t = k; t < n; t++) {
      top += forward[t] * backward[t - 1];
      bottom += forward[t] * forward[t] + backward[t - 1] * backward[t - 1];
    }
    const last = (2 * top) / bottom;
    partial[k] = last;
    for (let t = n - 1; t >= k; t--) {
      const f = forward[t], b = backward[t - 1];
      forward[t] = f - last * b;
      backward[t] = b - last * f;
    }
  }
  return partial;
}
