// Scores of quantiles, bands and whole forecast distributions: smaller is better for each of them.

import { normalCdf, normalDensity } from "../distributions/normal.ts";
import { valuesOf } from "../series/series.ts";
import type { Numbers } from "./accuracy.ts";

/** Mean pinball (quantile) loss of forecasts of the quantile with probability `level`.
 *  @param quantile  the forecast quantiles, one an actual value, or one number for all
 *  @param level     the probability, in (0, 1); the median's loss is half the absolute error
 *  @example pinball([10], [8], 0.9) // 1.8 */
export function pinball(actual: Numbers | number, quantile: Numbers | number, level: number): number {
  if (!(level > 0 && level < 1)) throw new RangeError(`pinball: level is ${level}, expected between 0 and 1`);
  return meanOver("pinball", [actual, quantile], ([y, q]) => pinballLoss(y, q, level));
}

/** The pinball loss of one forecast quantile q of probability `level` in (0, 1), unit of the data; NaN in, NaN out. */
export function pinballLoss(y: number, q: number, level: number): number {
  return y >= q ? level * (y - q) : (1 - level) * (q - y);
}

/** Mean continuous ranked probability score of normal forecast distributions, unit of the data; with se = 0 the absolute error.
 *  Source: Gneiting & Raftery (2007), section 4.2. */
export function crps(actual: Numbers | number, mean: Numbers | number, se: Numbers | number): number {
  return meanOver("crps", [actual, mean, se], ([y, m, s]) => normalCrps(y, m, s));
}

/** CRPS of one normal distribution, unit of the data; with sd = 0 the absolute error, with a negative sd NaN. */
export function normalCrps(y: number, mean: number, sd: number): number {
  if (!(sd > 0)) return sd === 0 ? Math.abs(y - mean) : NaN;
  const z = (y - mean) / sd;
  return sd * (z * (2 * normalCdf(z) - 1) + 2 * normalDensity(z) - 1 / Math.sqrt(Math.PI));
}

/** CRPS of a lognormal distribution whose logarithm has mean m and standard deviation s.
 *  Source: Baran & Lerch (2015), closed form for the lognormal. */
export function lognormalCrps(y: number, m: number, s: number): number {
  const middle = Math.exp(m + (s * s) / 2);
  const w = y > 0 ? (Math.log(y) - m) / s : -Infinity;
  if (w === -Infinity) return -y + 2 * middle * normalCdf(-s / Math.SQRT2);
  return y * (2 * normalCdf(w) - 1) - 2 * middle * (normalCdf(w - s) + normalCdf(s / Math.SQRT2) - 1);
}

/** CRPS of a distribution known by equally likely draws, each pair compared.
 *  @param sorted  the draws, smallest first
 *  Cost O(n). Source: Gneiting & Raftery (2007), equation 21, in its sorted form. */
export function sampleCrps(y: number, sorted: Float64Array): number {
  const n = sorted.length;
  let distance = 0, spread = 0;
  for (let i = 0; i < n; i++) {
    distance += Math.abs(sorted[i] - y);
    spread += (2 * i + 1 - n) * sorted[i];
  }
  return distance / n - spread / (n * n);
}

/** Mean interval score of central bands: their width, plus 2 / (1 - level) times what each actual value lies outside.
 *  @param level  the band's confidence, in (0, 1)
 *  Source: Winkler (1972); Gneiting & Raftery (2007), equation 43. */
export function intervalScore(actual: Numbers | number, low: Numbers | number, high: Numbers | number, level: number): number {
  if (!(level > 0 && level < 1)) throw new RangeError(`intervalScore: level is ${level}, expected between 0 and 1`);
  return meanOver("intervalScore", [actual, low, high], ([y, a, b]) => intervalLoss(y, a, b, level));
}

/** The interval score of one central band of confidence `level` in (0, 1), unit of the data. */
export function intervalLoss(y: number, low: number, high: number, level: number): number {
  return high - low + (2 / (1 - level)) * (Math.max(0, low - y) + Math.max(0, y - high));
}

function meanOver(what: string, given: readonly (Numbers | number)[], loss: (values: readonly number[]) => number): number {
  const arrays = given.map((x) => (typeof x === "number" ? x : valuesOf(x)));
  const n = Math.max(...arrays.map((x) => (typeof x === "number" ? 1 : x.length)));
  for (const x of arrays) {
    if (typeof x !== "number" && x.length !== n) throw new RangeError(`${what}: found ${x.length} values where the others have ${n}; they must be of one length`);
  }
  let sum = 0, count = 0;
  for (let t = 0; t < n; t++) {
    const value = loss(arrays.map((x) => (typeof x === "number" ? x : x[t])));
    if (Number.isNaN(value)) continue;
    sum += value; count++;
  }
  return count === 0 ? NaN : sum / count;
}
