// The regression behind the augmented Dickey-Fuller tests, and the choice of its lags.

import type { LeastSquares } from "../linear/leastSquares.ts";
import { leastSquares } from "../linear/leastSquares.ts";
import type { Trend } from "./mackinnon.ts";
import { trendCount, trendTerm } from "./mackinnon.ts";

/** A number of lagged differences, or a criterion that chooses it. */
export type LagChoice = number | "aic" | "bic" | "maic";

export interface DickeyFullerRegression {
  /** t statistic of the lagged level; NaN where the regression fits exactly. */
  readonly statistic: number;
  readonly lags: number;
  /** Rows of the regression. */
  readonly n: number;
  /** Value of the criterion that chose the lags. */
  readonly criterion?: number;
}

/** Regresses the difference on the lagged level, `lags` lagged differences and the trend's terms.
 *  @param start  first row: differences from this position on (at least `lags`); rows y.length - 1 - start */
export function dickeyFullerFit(y: Float64Array, trend: Trend, lags: number, start = lags): { readonly fit: LeastSquares; readonly rows: number } {
  const terms = trendCount(trend), cols = 1 + lags + terms, rows = y.length - 1 - start;
  const X = new Float64Array(rows * cols), target = new Float64Array(rows);
  // With a constant the level may be measured from anywhere: from its first value, so that a large level keeps its digits.
  const origin = terms > 0 ? y[0] : 0;
  for (let i = 0; i < rows; i++) {
    const t = i + start, row = i * cols;
    target[i] = y[t + 1] - y[t];
    X[row] = y[t] - origin;
    for (let j = 1; j <= lags; j++) X[row + j] = y[t + 1 - j] - y[t - j];
    for (let k = 0; k < terms; k++) X[row + 1 + lags + k] = trendTerm(k, i, rows);
  }
  return { fit: leastSquares(X, target, rows, cols), rows };
}

/** The t statistic with a given or a chosen number of lags. A criterion compares all of 0..maxLags on the sample left by
 *  maxLags, and the chosen one is refitted on the longest sample. AIC and BIC count the regressors; MAIC is that of
 *  Ng & Perron (2001), which allows for the bias of the sum of autoregressive coefficients under a unit root. */
export function dickeyFullerRegression(y: Float64Array, trend: Trend, lags: LagChoice, maxLags: number): DickeyFullerRegression {
  if (typeof lags === "number") return statisticOf(y, trend, lags);
  let best = Infinity, chosen = 0;
  for (let k = 0; k <= maxLags; k++) {
    const value = criterionOf(y, trend, k, maxLags, lags);
    if (value < best) { best = value; chosen = k; }
  }
  return { ...statisticOf(y, trend, chosen), criterion: best };
}

/** Largest lag to compare: ceil(12 (n/100)^(1/4)) (Schwert 1989), and never more than the data carry. */
export function schwertLags(n: number, trend: Trend): number {
  return Math.max(0, Math.min(Math.ceil(12 * (n / 100) ** 0.25), Math.floor(n / 2) - trendCount(trend) - 2));
}

function criterionOf(y: Float64Array, trend: Trend, k: number, maxLags: number, which: "aic" | "bic" | "maic"): number {
  const { fit, rows } = dickeyFullerFit(y, trend, k, maxLags);
  if (which !== "maic") {
    const logLikelihood = (-rows / 2) * (Math.log(2 * Math.PI) + Math.log(fit.rss / rows) + 1);
    return -2 * logLikelihood + fit.rank * (which === "aic" ? 2 : Math.log(rows));
  }
  const sigma2 = fit.rss / rows;
  let levels = 0;
  for (let i = 0; i < rows; i++) levels += (y[i + maxLags] - (trendCount(trend) > 0 ? y[0] : 0)) ** 2;
  return Math.log(sigma2) + (2 * ((fit.beta[0] ** 2 * levels) / sigma2 + k)) / rows;
}

function statisticOf(y: Float64Array, trend: Trend, lags: number): DickeyFullerRegression {
  const { fit, rows } = dickeyFullerFit(y, trend, lags);
  let scale = 0;
  for (let t = 1; t < y.length; t++) scale += (y[t] - y[t - 1]) ** 2;
  // An exact fit has no errors to measure the statistic against.
  const exact = fit.df <= 0 || fit.aliased.includes(0) || fit.rss <= 1e-22 * scale;
  return { statistic: exact ? NaN : fit.beta[0] / fit.se[0], lags, n: rows };
}
