// Did two forecasters differ in accuracy by more than chance?

import { normalUpper } from "../distributions/normal.ts";
import { tQuantile, tUpper } from "../distributions/studentT.ts";
import { unavailable, type Test } from "../diagnostics/test.ts";
import { valuesOf } from "../series/series.ts";
import type { Numbers } from "./accuracy.ts";

export type Loss = "squared" | "absolute";

export interface DieboldMariano extends Test {
  /** Mean of loss A less loss B: below 0 when A was the better one. */
  readonly meanDifference: number;
  readonly longRunVariance: number;
  /** The statistic before the small-sample correction, and its p-value from the normal distribution. */
  readonly dm: number; readonly pNormal: number;
}

const nullHypothesis = "the two forecast equally well on average";

/** Diebold-Mariano test with the correction of Harvey, Leybourne & Newbold (1997): two-sided, Student's t with n - 1 df.
 *  @param errorsA  forecast errors of A, in time order, one an origin; pairs with a missing value are left out
 *  @param horizon  steps ahead, h: autocovariances of the loss difference up to lag h - 1 are counted, divisor n
 *  @param loss     "squared" or "absolute"
 *  Where the long-run variance is not above 0 the test is "unavailable", with the reason.
 *  Source: Diebold & Mariano (1995). */
export function dieboldMariano(errorsA: Numbers, errorsB: Numbers, { horizon = 1, loss = "squared" }: { readonly horizon?: number; readonly loss?: Loss } = {}): DieboldMariano {
  const a = valuesOf(errorsA), b = valuesOf(errorsB);
  if (a.length !== b.length) throw new RangeError(`dieboldMariano: ${a.length} errors of one and ${b.length} of the other; they must come from the same origins`);
  const lossOf = loss === "squared" ? (e: number) => e * e : Math.abs;
  return lossDifferenceTest(Float64Array.from(a, (_, t) => lossOf(a[t]) - lossOf(b[t])), horizon);
}

/** The same test on loss differences (A less B) of any loss. */
export function lossDifferenceTest(difference: ArrayLike<number>, horizon: number): DieboldMariano {
  if (!Number.isInteger(horizon) || horizon < 1) throw new RangeError(`dieboldMariano: horizon is ${horizon}, expected a whole number from 1 on`);
  const d = Float64Array.from(difference).filter((x) => !Number.isNaN(x)), n = d.length;
  const mean = d.reduce((sum, x) => sum + x, 0) / n;
  const none = (note: string, longRunVariance = NaN): DieboldMariano =>
    ({ ...unavailable(nullHypothesis, n, note), meanDifference: n === 0 ? NaN : mean, longRunVariance, dm: NaN, pNormal: NaN });
  if (n < 2 || n <= horizon) return none(`${n} origin${n === 1 ? " is" : "s are"} too few for a test at horizon ${horizon}`);
  if (d.every((x) => x === 0)) return none("the two have the same loss at every origin: a tie", 0);
  const longRunVariance = longRun(d, mean, horizon);
  if (!(longRunVariance > 0)) return none("the estimated long-run variance of the loss difference is not above 0, as happens with few origins and a long horizon, so that there is no p-value; more origins or a shorter horizon may give one", longRunVariance);
  const dm = mean / Math.sqrt(longRunVariance / n);
  const statistic = dm * Math.sqrt((n + 1 - 2 * horizon + (horizon * (horizon - 1)) / n) / n);
  return {
    name: "Diebold-Mariano (Harvey-Leybourne-Newbold)", statistic, p: 2 * tUpper(Math.abs(statistic), n - 1), bound: null, df: n - 1, lags: horizon - 1, n,
    critical: { "10%": tQuantile(0.95, n - 1), "5%": tQuantile(0.975, n - 1), "1%": tQuantile(0.995, n - 1) },
    nullHypothesis, status: "ok", meanDifference: mean, longRunVariance, dm, pNormal: 2 * normalUpper(Math.abs(dm)),
  };
}

/** Rectangular weights up to lag horizon - 1: an h-step error of an optimal forecast has no more memory than that. */
function longRun(d: Float64Array, mean: number, horizon: number): number {
  let variance = 0;
  for (let lag = 0; lag < horizon; lag++) {
    let sum = 0;
    for (let t = lag; t < d.length; t++) sum += (d[t] - mean) * (d[t - lag] - mean);
    variance += ((lag === 0 ? 1 : 2) * sum) / d.length;
  }
  return variance;
}
