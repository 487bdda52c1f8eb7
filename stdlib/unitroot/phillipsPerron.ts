// The Phillips-Perron test.

import type { Test } from "../diagnostics/test.ts";
import { unavailable } from "../diagnostics/test.ts";
import { leastSquares } from "../linear/leastSquares.ts";
import type { Series } from "../series/series.ts";
import { unitRootSentence } from "./adf.ts";
import type { Bandwidth } from "./longRunVariance.ts";
import { bandwidthOf, longRunVariance } from "./longRunVariance.ts";
import type { Trend } from "./mackinnon.ts";
import { checkTrend, dickeyFullerCritical, dickeyFullerP, trendCount, trendTerm } from "./mackinnon.ts";
import { sampleOf } from "./sample.ts";

export interface PhillipsPerronOptions { readonly trend?: Trend; readonly bandwidth?: Bandwidth | null; readonly level?: number }

/** Phillips-Perron test of a unit root: the Dickey-Fuller regression without lags, its t statistic corrected for
 *  autocorrelation by a long-run variance. Small p: no unit root. `statistic` is Z_tau, `zAlpha` the coefficient version.
 *  @throws RangeError for an unknown trend or bandwidth
 *  Source: Phillips & Perron (1988), in the form of Hamilton (1994), section 17.6; p by MacKinnon (1994). */
export function phillipsPerron(x: Series | ArrayLike<number>, options: PhillipsPerronOptions = {}): Test & { readonly zAlpha?: number; readonly longRunVariance?: number; readonly gamma0?: number } {
  const trend = options.trend ?? "constant";
  checkTrend("phillipsPerron", trend);
  const nullHypothesis = "a unit root: shocks never die out", name = "Phillips-Perron Z tau";
  const { values, note, why } = sampleOf(x, trendCount(trend) + 5);
  if (why !== null) return unavailable(nullHypothesis, values.length, why, { name });
  const n = values.length - 1, cols = 1 + trendCount(trend);
  const X = new Float64Array(n * cols), y = new Float64Array(n);
  const origin = cols > 1 ? values[0] : 0;
  for (let t = 0; t < n; t++) {
    y[t] = values[t + 1] - values[t];
    X[t * cols] = values[t] - origin;
    for (let k = 1; k < cols; k++) X[t * cols + k] = trendTerm(k - 1, t, n);
  }
  const fit = leastSquares(X, y, n, cols);
  const scale = y.reduce((s, v) => s + v * v, 0);
  if (fit.df <= 0 || fit.aliased.includes(0) || fit.rss <= 1e-22 * scale) return unavailable(nullHypothesis, n, "the regression fits the data exactly, so there are no errors to measure a unit root against", { name });
  const { lags, rule } = bandwidthOf("phillipsPerron", options.bandwidth ?? "short", fit.residuals);
  const gamma0 = fit.rss / n, lambda2 = longRunVariance(fit.residuals, lags);
  const se = fit.se[0], tau = fit.beta[0] / se, s2 = fit.sigma2;
  const statistic = Math.sqrt(gamma0 / lambda2) * tau - (0.5 * (lambda2 - gamma0) * n * se) / Math.sqrt(lambda2 * s2);
  const zAlpha = n * fit.beta[0] - (0.5 * n * n * se * se * (lambda2 - gamma0)) / s2;
  const p = dickeyFullerP(trend, statistic);
  return {
    name, statistic, p, bound: null, lags, lagRule: rule, critical: dickeyFullerCritical(trend, n), n, nullHypothesis, status: "ok", zAlpha, gamma0, longRunVariance: lambda2,
    ...(note === null ? {} : { note }), sentence: unitRootSentence("The Phillips-Perron test", { p, bound: null }, trend, options.level),
  };
}
