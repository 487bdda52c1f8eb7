// Student's t distribution.

import { betaInc } from "./special.ts";
import { solveUpperQuantile } from "./solveQuantile.ts";

/** P(T > t) with df > 0 degrees of freedom (not necessarily whole), from that tail. @example tUpper(2, 5) // 0.0509697 */
export function tUpper(t: number, df: number): number {
  if (t < 0) return 1 - tUpper(-t, df);
  const t2 = t * t;
  // Near the centre df / (df + t^2) is close to 1 and loses digits: use the other argument there.
  return t2 < df ? 0.5 - 0.5 * betaInc(t2 / (df + t2), 0.5, df / 2) : 0.5 * betaInc(df / (df + t2), df / 2, 0.5);
}

/** P(T <= t) with df degrees of freedom. */
export function tCdf(t: number, df: number): number {
  return tUpper(-t, df);
}

/** The t with P(T <= t) = p. @example tQuantile(0.975, 1) // 12.7062 */
export function tQuantile(p: number, df: number): number {
  if (!(p > 0 && p < 1)) return p === 0 ? -Infinity : p === 1 ? Infinity : NaN;
  if (p === 0.5) return 0;
  const t = solveUpperQuantile((x) => tUpper(x, df), Math.min(p, 1 - p), 0, 2);
  return p < 0.5 ? -t : t;
}
