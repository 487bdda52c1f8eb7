// The door to the special functions that every distribution here rests on: nothing else imports the packages behind it.

import betainc from "@stdlib/math-base-special-betainc";
import erfcPackage from "@stdlib/math-base-special-erfc";
import gammainc from "@stdlib/math-base-special-gammainc";
import gammaln from "@stdlib/math-base-special-gammaln";

/** Complementary error function, 2/sqrt(pi) times the integral of exp(-t^2) from x on; keeps its digits far into the tail. */
export function erfc(x: number): number {
  return erfcPackage(x);
}

/** Natural logarithm of the gamma function, x > 0. @example logGamma(0.5) // 0.5723649429247 */
export function logGamma(x: number): number {
  return gammaln(x);
}

/** Regularised lower incomplete gamma function P(a, x), a > 0, x >= 0. */
export function gammaP(a: number, x: number): number {
  return x === Infinity ? 1 : gammainc(x, a, true, false);
}

/** Regularised upper incomplete gamma function Q(a, x) = 1 - P(a, x), computed without that subtraction. */
export function gammaQ(a: number, x: number): number {
  return x === Infinity ? 0 : gammainc(x, a, true, true);
}

/** Regularised incomplete beta function I_x(a, b), 0 <= x <= 1, a, b > 0. @example betaInc(0.5, 2, 2) // 0.5 */
export function betaInc(x: number, a: number, b: number): number {
  return betainc(x, a, b, true, false);
}
