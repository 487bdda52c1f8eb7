// Ordered values against normal quantiles, with a band that a whole normal sample keeps to.

import { betaInc, logGamma } from "../distributions/special.ts";
import { normalQuantile } from "../distributions/normal.ts";
import { observedOf } from "./subject.ts";

export interface Quantiles {
  /** Normal quantiles at (i - 0.5) / n of the points shown, rising. */
  readonly theoretical: Float64Array;
  /** The ordered values there, mean 0 and standard deviation 1. */
  readonly sample: Float64Array;
  /** Limits that all points of a normal sample keep to at once, with probability `level`. */
  readonly low: Float64Array; readonly high: Float64Array;
  readonly level: number;
  /** How many of all n points are outside; the limits between the points shown are straight lines. */
  readonly outside: number;
}

// Local level at which each order statistic's beta limits are drawn so that a whole standardised normal sample keeps inside
// with probability 0.90, 0.95, 0.99, by n: simulated, 20,000 samples for small n to 1,000 (test/bench/localLevels.ts, seed 7).
const levels = [0.9, 0.95, 0.99];
const sizes = [5, 10, 20, 50, 100, 200, 500, 1000, 3000];
const table = [
  [0.301, 0.252, 0.172], [0.179, 0.144, 0.0941], [0.111, 0.0836, 0.0425], [0.0638, 0.0426, 0.0164], [0.0516, 0.0353, 0.0135],
  [0.0348, 0.021, 0.0069], [0.0208, 0.0111, 0.00273], [0.0156, 0.00706, 0.00172], [0.009, 0.00476, 0.00121],
];

/** Points of a normal quantile plot with a simultaneous band of equal local levels: every order statistic has the same chance
 *  of passing its limits (Aldor-Noiman et al. 2013), tuned for values standardised by their own mean and deviation.
 *  Empty where fewer than five values vary.
 *  @param most  points shown; all of the ends and an even thinning of the middle where n is larger */
export function quantiles(values: Float64Array, level = 0.95, most = 120): Quantiles {
  const seen = Float64Array.from(observedOf(values)).sort(), n = seen.length;
  const mean = seen.reduce((s, v) => s + v, 0) / n, sd = Math.sqrt(seen.reduce((s, v) => s + (v - mean) ** 2, 0) / (n - 1));
  const none = new Float64Array(0);
  if (n < 5 || !(sd > 0) || seen[0] === seen[n - 1]) return { theoretical: none, sample: none, low: none, high: none, level, outside: 0 };
  const shown = places(n, most), local = localLevel(n, level);
  const theoretical = Float64Array.from(shown, (i) => normalQuantile((i + 0.5) / n)), sample = Float64Array.from(shown, (i) => (seen[i] - mean) / sd);
  // Order statistics of uniform numbers are beta distributed; the upper limits are the lower ones mirrored.
  const low = Float64Array.from(shown, (i) => normalQuantile(betaQuantile(local / 2, i + 1, n - i)));
  const high = low.map((_, k) => -low[low.length - 1 - k]);
  let outside = 0;
  for (let i = 0, k = 0; i < n; i++) {
    while (k < shown.length - 2 && shown[k + 1] <= i) k++;
    const share = (i - shown[k]) / (shown[k + 1] - shown[k]), z = (seen[i] - mean) / sd;
    if (z < low[k] + share * (low[k + 1] - low[k]) || z > high[k] + share * (high[k + 1] - high[k])) outside++;
  }
  return { theoretical, sample, low, high, level, outside };
}

/** Positions to show, the same seen from either end: all where few; else the outer fifth of `most` at each end whole, the middle
 *  thinned evenly. */
function places(n: number, most: number): number[] {
  if (n <= most) return Array.from({ length: n }, (_, i) => i);
  const end = Math.floor(most / 5), half = Math.floor(most / 2) - end;
  const left = [...Array.from({ length: end }, (_, i) => i), ...Array.from({ length: half }, (_, k) => end + Math.floor(((k + 0.5) * (n / 2 - end)) / half))];
  return [...left, ...left.map((i) => n - 1 - i).reverse()];
}

/** The x with I_x(a, b) = p, a, b >= 1: Newton steps on the logit scale, kept inside a shrinking bracket.
 *  @example betaQuantile(0.025, 1, 9) // 1 - 0.975^(1/9) = 0.002809 */
export function betaQuantile(p: number, a: number, b: number): number {
  if (a === 1) return -Math.expm1(Math.log1p(-p) / b);
  if (b === 1) return p ** (1 / a);
  const logBeta = logGamma(a) + logGamma(b) - logGamma(a + b);
  let low = -745, high = 37; // logits of the smallest and the largest share below 1
  // The logit of a beta variable is nearly normal.
  let y = Math.log((a - 0.5) / (b - 0.5)) + normalQuantile(p) * Math.sqrt(1 / (a - 0.5) + 1 / (b - 0.5));
  for (let i = 0; i < 100; i++) {
    const x = 1 / (1 + Math.exp(-y)), miss = betaInc(x, a, b) - p;
    if (miss < 0) low = y; else high = y;
    const slope = Math.exp(a * Math.log(x) + b * Math.log1p(-x) - logBeta); // d I / d y = x (1 - x) times the density
    let next = y - miss / slope;
    if (!(next > low && next < high)) next = (low + high) / 2;
    if (Math.abs(next - y) < 1e-10) return 1 / (1 + Math.exp(-next));
    y = next;
  }
  return 1 / (1 + Math.exp(-y));
}

/** The tabled local level, straight in log n and in the normal quantile of the level. */
function localLevel(n: number, level: number): number {
  const x = Math.log(Math.min(Math.max(n, sizes[0]), sizes[sizes.length - 1]));
  const i = Math.min(sizes.length - 2, Math.max(0, sizes.findLastIndex((s) => Math.log(s) <= x)));
  const share = (x - Math.log(sizes[i])) / (Math.log(sizes[i + 1]) - Math.log(sizes[i]));
  const at = levels.map((_, k) => Math.log(table[i][k]) + share * (Math.log(table[i + 1][k]) - Math.log(table[i][k])));
  const z = Math.log(1 - level), zs = levels.map((l) => Math.log(1 - l));
  const k = z > zs[1] ? 0 : 1;
  return Math.min(0.5, Math.exp(at[k] + ((z - zs[k]) / (zs[k + 1] - zs[k])) * (at[k + 1] - at[k])));
}
