// What a distribution that is known by its quantiles gives: scores, and the probability of a value.

import { normalCdf } from "../distributions/normal.ts";
import { once } from "./once.ts";

/** CRPS as twice the mean pinball loss over all quantiles (Gneiting & Ranjan 2011), by the midpoint rule in the normal number.
 *  @param valueAt  the quantile with probability normalCdf(z) */
export function crpsOfNormals(valueAt: (z: number, index: number) => number, actual: number, step = 0.05): number {
  let sum = 0, weight = 0;
  const half = Math.round(8 / step);
  for (let i = -half; i < half; i++) {
    const z = (i + 0.5) * step, w = Math.exp(-0.5 * z * z), p = normalCdf(z), q = valueAt(z, i + half);
    sum += w * (actual >= q ? p * (actual - q) : (1 - p) * (q - actual)); weight += w;
  }
  return (2 * sum) / weight;
}

/** The same from quantiles by probability, on a coarser grid that is computed once for all periods: they may be dear. */
export function crpsOfQuantiles(quantile: (p: number) => Float64Array): (h: number, actual: number) => number {
  const step = 0.1, half = Math.round(8 / step), grid = once(() => Array.from({ length: 2 * half }, (_, i) => quantile(normalCdf((i - half + 0.5) * step))));
  return (h, actual) => crpsOfNormals((_, index) => grid()[index][h], actual, step);
}

/** The probability whose quantile is a value, by halving. */
export function levelOf(quantile: (p: number) => number, value: number): number {
  let low = 1e-9, high = 1 - 1e-9;
  if (quantile(low) > value) return 0;
  if (quantile(high) < value) return 1;
  for (let i = 0; i < 50; i++) { const middle = (low + high) / 2; if (quantile(middle) < value) low = middle; else high = middle; }
  return (low + high) / 2;
}
