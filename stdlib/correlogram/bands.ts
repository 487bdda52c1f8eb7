// Limits within which sample correlations stay at a given level, under two hypotheses.

import { normalQuantile } from "../distributions/normal.ts";

/** Half-width of the band for independent observations, z / sqrt(n), the same at every lag.
 *  @param level  confidence in (0, 1)   @example independentBand(100, 0.95) // 0.196 */
export function independentBand(n: number, level = 0.95): number {
  checkLevel("independentBand", level);
  return normalQuantile(0.5 + level / 2) / Math.sqrt(n);
}

/** Half-widths at lags 0..K under the hypothesis that lag k is the first one past the order of a moving average:
 *  z sqrt((1 + 2 sum of r_j^2, j < k) / n). Index 0 is 0: that correlation is 1 by definition.
 *  Source: Bartlett (1946).   @param correlations  sample autocorrelations from lag 0 */
export function bartlettBand(correlations: ArrayLike<number>, n: number, level = 0.95): Float64Array {
  checkLevel("bartlettBand", level);
  const z = normalQuantile(0.5 + level / 2), band = new Float64Array(correlations.length);
  let sum = 1;
  for (let k = 1; k < correlations.length; k++) {
    band[k] = z * Math.sqrt(sum / n);
    sum += 2 * correlations[k] * correlations[k];
  }
  return band;
}

/** @throws RangeError where the confidence is not strictly between 0 and 1 */
export function checkLevel(who: string, level: number): void {
  if (!(level > 0 && level < 1)) throw new RangeError(`${who}: level is ${level}, expected a confidence between 0 and 1, such as 0.95`);
}
