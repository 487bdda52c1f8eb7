// The KPSS test, whose null hypothesis is stationarity.

import type { Test } from "../diagnostics/test.ts";
import { levelWords, printedP, rejects, unavailable } from "../diagnostics/test.ts";
import { leastSquares } from "../linear/leastSquares.ts";
import type { Series } from "../series/series.ts";
import type { Bandwidth } from "./longRunVariance.ts";
import { bandwidthOf, longRunVariance } from "./longRunVariance.ts";
import { checkTrend, trendTerm } from "./mackinnon.ts";
import { sampleOf } from "./sample.ts";

export interface KpssOptions {
  /** Stationary around a constant or around a straight trend. */
  readonly trend?: "constant" | "linear";
  readonly bandwidth?: Bandwidth | null;
  /** Confidence at which the sentence reads the test. */
  readonly level?: number;
}

// Kwiatkowski, Phillips, Schmidt & Shin (1992), table 1: upper tail critical values at 10%, 5%, 2.5%, 1%.
const levels = [0.1, 0.05, 0.025, 0.01];
const tables = { constant: [0.347, 0.463, 0.574, 0.739], linear: [0.119, 0.146, 0.176, 0.216] };

/** KPSS test of stationarity around the trend, against a unit root. Small p: not stationary.
 *  The long-run variance has Bartlett weights; p is interpolated in the printed table and ends at 0.01 and 0.10.
 *  @throws RangeError for another trend or bandwidth. Source: Kwiatkowski, Phillips, Schmidt & Shin (1992). */
export function kpss(x: Series | ArrayLike<number>, options: KpssOptions = {}): Test & { readonly longRunVariance?: number } {
  const trend = options.trend ?? "constant";
  checkTrend("kpss", trend, ["constant", "linear"]);
  const around = trend === "constant" ? "a constant" : "a straight trend";
  const nullHypothesis = `stationary around ${around}`, name = "KPSS eta";
  const { values, note, why } = sampleOf(x, trend === "constant" ? 4 : 5);
  if (why !== null) return unavailable(nullHypothesis, values.length, why, { name });
  const n = values.length, u = residuals(values, trend);
  const { lags, rule } = bandwidthOf("kpss", options.bandwidth ?? "short", u);
  const variance = longRunVariance(u, lags);
  let sum = 0, squares = 0, size = 0;
  for (let t = 0; t < n; t++) { sum += u[t]; squares += sum * sum; size += u[t] * u[t]; }
  const spread = values.reduce((s, v) => s + (v - values[0]) ** 2, 0);
  if (!(size > 1e-22 * spread) || !(variance > 0)) return unavailable(nullHypothesis, n, `the values lie exactly on ${around}`, { name, lags });
  const statistic = squares / (n * n * variance);
  const { p, bound } = tableP(statistic, tables[trend]);
  return {
    name, statistic, p, bound, lags, lagRule: rule, n, nullHypothesis, status: "ok", longRunVariance: variance,
    critical: { "10%": tables[trend][0], "5%": tables[trend][1], "2.5%": tables[trend][2], "1%": tables[trend][3] },
    ...(note === null ? {} : { note }),
    sentence: sentenceOf({ p, bound }, around, options.level),
  };
}

function sentenceOf(test: Pick<Test, "p" | "bound">, around: string, level = 0.95): string {
  const rejected = rejects(test, 1 - level), p = printedP(test.p, test.bound);
  if (rejected === null) return `The KPSS test cannot be read at the ${levelWords(level)}: its printed table ends before it (${p}).`;
  return rejected
    ? `The KPSS test rejects stationarity around ${around} at the ${levelWords(level)} (${p}).`
    : `The KPSS test does not reject stationarity around ${around} at the ${levelWords(level)} (${p}); that is no proof of it.`;
}

function residuals(values: Float64Array, trend: "constant" | "linear"): Float64Array {
  const n = values.length, cols = trend === "constant" ? 1 : 2;
  const X = new Float64Array(n * cols);
  for (let t = 0; t < n; t++) for (let k = 0; k < cols; k++) X[t * cols + k] = trendTerm(k, t, n);
  return leastSquares(X, values, n, cols).residuals;
}

/** Linear interpolation of p in a table of rising critical values at falling levels; clipped, and said to be. */
export function tableP(statistic: number, critical: readonly number[], at: readonly number[] = levels): { readonly p: number; readonly bound: Test["bound"] } {
  const last = critical.length - 1;
  if (statistic <= critical[0]) return { p: at[0], bound: "above" };
  if (statistic >= critical[last]) return { p: at[last], bound: "below" };
  const i = critical.findIndex((c) => statistic < c);
  return { p: at[i - 1] + ((at[i] - at[i - 1]) * (statistic - critical[i - 1])) / (critical[i] - critical[i - 1]), bound: null };
}
