// The chi-square distribution.

import { gammaP, gammaQ } from "./special.ts";
import { solveUpperQuantile } from "./solveQuantile.ts";

/** P(X <= x) for a chi-square variable with df > 0 degrees of freedom. */
export function chiSquareCdf(x: number, df: number): number {
  return x <= 0 ? 0 : gammaP(df / 2, x / 2);
}

/** P(X > x) for a chi-square variable with df > 0 degrees of freedom, from that tail. @example chiSquareUpper(3.841459, 1) // 0.05 */
export function chiSquareUpper(x: number, df: number): number {
  return x <= 0 ? 1 : gammaQ(df / 2, x / 2);
}

/** The x with P(X <= x) = p, 0 < p < 1. @example chiSquareQuantile(0.95, 1) // 3.841459 */
export function chiSquareQuantile(p: number, df: number): number {
  if (!(p > 0 && p < 1)) return p === 0 ? 0 : p === 1 ? Infinity : NaN;
  return solveUpperQuantile((x) => chiSquareUpper(x, df), 1 - p, 0, df + 1);
}
