// How far a share may stray by chance.

import { logGamma } from "../distributions/special.ts";

/** Range of the share of hits in n independent tries that a true probability p leaves with the given confidence:
 *  the smallest and largest count whose lower and upper tails are above (1 - level) / 2 each, over n. Exact.
 *  Overlapping forecasts are not independent: then the true range is wider, and the caller should say so.
 *  @example binomialRange(100, 0.8) // { low: 0.72, high: 0.87 } */
export function binomialRange(n: number, p: number, level = 0.95): { readonly low: number; readonly high: number } {
  if (!(n >= 1) || !(p > 0 && p < 1)) return { low: NaN, high: NaN };
  const tail = (1 - level) / 2, weight = (k: number): number =>
    Math.exp(logGamma(n + 1) - logGamma(k + 1) - logGamma(n - k + 1) + k * Math.log(p) + (n - k) * Math.log1p(-p));
  let low = 0, high = n;
  for (let below = weight(0); below <= tail && low < n; below += weight(low)) low++;
  for (let above = weight(n); above <= tail && high > 0; above += weight(high)) high--;
  return { low: low / n, high: high / n };
}
