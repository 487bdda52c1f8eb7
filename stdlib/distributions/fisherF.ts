// Fisher's F distribution.

import { betaInc } from "./special.ts";

/** P(F > f) with df1 and df2 degrees of freedom, from that tail. @example fUpper(4, 5, 20) // 0.01118375 */
export function fUpper(f: number, df1: number, df2: number): number {
  return f <= 0 ? 1 : betaInc(df2 / (df2 + df1 * f), df2 / 2, df1 / 2);
}
