// The DF-GLS test: Dickey-Fuller after the trend is estimated as if the series were nearly integrated.

import type { Test } from "../diagnostics/test.ts";
import { unavailable } from "../diagnostics/test.ts";
import { leastSquares } from "../linear/leastSquares.ts";
import type { Series } from "../series/series.ts";
import { checkedLags, lagRule, unitRootSentence } from "./adf.ts";
import type { LagChoice } from "./dickeyFullerRegression.ts";
import { dickeyFullerRegression } from "./dickeyFullerRegression.ts";
import { tableP } from "./kpss.ts";
import { checkTrend, dickeyFullerCritical, dickeyFullerP } from "./mackinnon.ts";
import { sampleOf } from "./sample.ts";

export interface DfGlsOptions { readonly trend?: "constant" | "linear"; readonly lags?: LagChoice | null; readonly maxLags?: number | null; readonly level?: number }

// Elliott, Rothenberg & Stock (1996), table I.C (linear trend): 1%, 2.5%, 5%, 10% at T = 50, 100, 200 and without end.
const printed = { sizes: [50, 100, 200, Infinity], rows: [[-3.77, -3.46, -3.19, -2.89], [-3.58, -3.29, -3.03, -2.74], [-3.46, -3.18, -2.93, -2.64], [-3.48, -3.15, -2.89, -2.57]] };

/** DF-GLS test of a unit root; lags by BIC unless given, as in the source: with AIC, which takes more, the test loses its power.
 *  It is more powerful than the Dickey-Fuller test where the first values lie near the trend. Small p: no unit root.
 *  With a constant the statistic has the Dickey-Fuller distribution without deterministic terms, so p is MacKinnon's (1994)
 *  and, like it, of the limit: at n = 100 it rejects 7.8% of random walks at 5% (test/bench/identify.txt);
 *  with a trend p is interpolated in the printed table and ends at 0.01 and 0.10.
 *  @throws RangeError for another trend, or lags out of range. Source: Elliott, Rothenberg & Stock (1996). */
export function dfGls(x: Series | ArrayLike<number>, options: DfGlsOptions = {}): Test {
  const trend = options.trend ?? "constant", asked = options.lags ?? "bic";
  checkTrend("dfGls", trend, ["constant", "linear"]);
  const nullHypothesis = "a unit root: shocks never die out", name = "DF-GLS tau";
  const { values, note, why } = sampleOf(x, 8 + (typeof asked === "number" ? 2 * asked : 0));
  if (why !== null) return unavailable(nullHypothesis, values.length, why, { name });
  const maxLags = checkedLags("dfGls", asked, options.maxLags, values.length, trend);
  const { statistic, lags, n } = dickeyFullerRegression(glsDetrended(values, trend), "none", asked, maxLags);
  if (Number.isNaN(statistic)) return unavailable(nullHypothesis, n, "the regression fits the data exactly, so there are no errors to measure a unit root against", { name, lags });
  const critical = trend === "constant" ? dickeyFullerCritical("none", n) : interpolated(n);
  const { p, bound } = trend === "constant"
    ? { p: dickeyFullerP("none", statistic), bound: null }
    : tableP(-statistic, ["10%", "5%", "2.5%", "1%"].map((level) => -(critical as Record<string, number>)[level]));
  return {
    name, statistic, p, bound, lags, lagRule: lagRule(asked, maxLags), critical, n, nullHypothesis, status: "ok",
    ...(note === null ? {} : { note }), sentence: unitRootSentence("The DF-GLS test", { p, bound }, trend, options.level),
  };
}

/** The series less its trend, estimated on quasi-differences with a = 1 - 7/T (constant) or 1 - 13.5/T (trend). */
function glsDetrended(y: Float64Array, trend: "constant" | "linear"): Float64Array {
  const n = y.length, cols = trend === "constant" ? 1 : 2, a = 1 - (trend === "constant" ? 7 : 13.5) / n;
  const X = new Float64Array(n * cols), target = new Float64Array(n);
  for (let t = 0; t < n; t++) {
    target[t] = t === 0 ? y[0] : y[t] - a * y[t - 1];
    X[t * cols] = t === 0 ? 1 : 1 - a;
    if (cols === 2) X[t * cols + 1] = t === 0 ? 1 : t + 1 - a * t;
  }
  const { beta } = leastSquares(X, target, n, cols);
  return y.map((v, t) => v - beta[0] - (cols === 2 ? beta[1] * (t + 1) : 0));
}

/** Printed critical values, straight in 1/T between the sizes. */
function interpolated(n: number): Record<string, number> {
  const { sizes, rows } = printed;
  const i = Math.min(sizes.length - 2, Math.max(0, sizes.findLastIndex((s) => s <= n)));
  const share = Math.min(1, Math.max(0, (1 / sizes[i] - 1 / n) / (1 / sizes[i] - 1 / sizes[i + 1])));
  return Object.fromEntries(["1%", "2.5%", "5%", "10%"].map((level, k) => [level, rows[i][k] + share * (rows[i + 1][k] - rows[i][k])]));
}
