// Critical values and p-values of Dickey-Fuller t statistics: response surfaces printed by MacKinnon.

import { normalCdf } from "../distributions/normal.ts";

/** Deterministic terms of a unit-root regression. */
export type Trend = "none" | "constant" | "linear" | "quadratic";

// MacKinnon (2010), Critical values for cointegration tests, table 2, N = 1: b0 + b1/T + b2/T^2 + b3/T^3 at 1%, 5%, 10%.
const surfaces: Readonly<Record<Trend, readonly (readonly number[])[]>> = {
  none: [[-2.56574, -2.2358, -3.627, 0], [-1.941, -0.2686, -3.365, 31.223], [-1.61682, 0.2656, -2.714, 25.364]],
  constant: [[-3.43035, -6.5393, -16.786, -79.433], [-2.86154, -2.8903, -4.234, -40.04], [-2.56677, -1.5384, -2.809, 0]],
  linear: [[-3.95877, -9.0531, -28.428, -134.155], [-3.41049, -4.3904, -9.036, -45.374], [-3.12705, -2.5856, -3.925, -22.38]],
  quadratic: [[-4.37113, -11.5882, -35.819, -334.047], [-3.83239, -5.9057, -12.49, -118.284], [-3.55326, -3.6596, -5.293, -63.559]],
};

// MacKinnon (1994), J. Business & Economic Statistics 12, tables 3 and 4, N = 1: the normal quantile of p as a polynomial in
// the statistic, one for small p (up to `star`), one for large; below `min` p is 0, above `max` it is 1.
const tails: Readonly<Record<Trend, { readonly star: number; readonly min: number; readonly max: number; readonly small: readonly number[]; readonly large: readonly number[] }>> = {
  none: { star: -1.04, min: -19.04, max: Infinity, small: [0.6344, 1.2378, 0.032496], large: [0.4797, 0.93557, -0.06999, 0.033066] },
  constant: { star: -1.61, min: -18.83, max: 2.74, small: [2.1659, 1.4412, 0.038269], large: [1.7339, 0.93202, -0.12745, -0.010368] },
  linear: { star: -2.89, min: -16.18, max: 0.7, small: [3.2512, 1.6047, 0.049588], large: [2.5261, 0.61654, -0.37956, -0.060285] },
  quadratic: { star: -3.21, min: -17.17, max: 0.54, small: [4.0003, 1.658, 0.048288], large: [3.0778, 0.49529, -0.41477, -0.059359] },
};

/** Critical values at 1%, 5% and 10% of the t statistic from a regression on `n` observations.
 *  @example dickeyFullerCritical("constant", 100)["5%"] // -2.8909 */
export function dickeyFullerCritical(trend: Trend, n: number): Record<"1%" | "5%" | "10%", number> {
  const [one, five, ten] = surfaces[trend].map(([b0, b1, b2, b3]) => b0 + b1 / n + b2 / n ** 2 + b3 / n ** 3);
  return { "1%": one, "5%": five, "10%": ten };
}

/** Asymptotic P(tau <= t) under a unit root. @example dickeyFullerP("constant", -2.86) // 0.0502 */
export function dickeyFullerP(trend: Trend, t: number): number {
  const { star, min, max, small, large } = tails[trend];
  if (Number.isNaN(t)) return NaN;
  if (t > max) return 1;
  if (t < min) return 0;
  return normalCdf((t <= star ? small : large).reduceRight((sum, c) => sum * t + c, 0));
}

/** @throws RangeError where the trend is none of the four */
export function checkTrend(who: string, trend: string, allowed: readonly Trend[] = ["none", "constant", "linear", "quadratic"]): void {
  if (!(allowed as readonly string[]).includes(trend)) {
    throw new RangeError(`${who}: trend is "${trend}", expected ${allowed.map((t) => `"${t}"`).join(", ").replace(/, ([^,]*)$/, " or $1")}`);
  }
}

/** How many deterministic terms a trend has: none 0, constant 1, linear 2, quadratic 3. */
export function trendCount(trend: Trend): number {
  return { none: 0, constant: 1, linear: 2, quadratic: 3 }[trend];
}

/** A deterministic term at position t of n: a power of t, with t counted from -1 to 1 so that long series keep their digits. */
export function trendTerm(power: number, t: number, n: number): number {
  return power === 0 ? 1 : ((2 * t) / Math.max(n - 1, 1) - 1) ** power;
}

/** What a series would be stationary around, for sentences. */
export function trendWords(trend: Trend): string {
  return { none: "around zero", constant: "around a constant", linear: "around a straight trend", quadratic: "around a curved trend" }[trend];
}
