// The regression behind the augmented Dickey-Fuller tests, and the choice of its lags.

import { choleskyInto } from "../linear/cholesky.ts";
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
  criteria(y, trend, maxLags, lags).forEach((value, k) => { if (value < best) { best = value; chosen = k; } });
  return { ...statisticOf(y, trend, chosen), criterion: best };
}

/** Largest lag to compare: ceil(12 (n/100)^(1/4)) (Schwert 1989), and never more than the data carry. */
export function schwertLags(n: number, trend: Trend): number {
  return Math.max(0, Math.min(Math.ceil(12 * (n / 100) ** 0.25), Math.floor(n / 2) - trendCount(trend) - 2));
}

/** The criterion at 0..maxLags lags on one sample. The regressions are nested, so that one Cholesky factor of the cross
 *  products, trend terms and level first, holds all their residual sums of squares. */
function criteria(y: Float64Array, trend: Trend, maxLags: number, which: "aic" | "bic" | "maic"): Float64Array {
  const first = trendCount(trend) + 1, size = first + maxLags + 1, rows = y.length - 1 - maxLags;
  const l = crossProducts(y, trend, maxLags), total = l[size * size - 1], levels = l[(first - 1) * size + first - 1];
  // Unit diagonal: the units of the level then do not decide what counts as singular.
  const scale = Float64Array.from({ length: size }, (_, i) => Math.sqrt(l[i * size + i]) || 1);
  for (let i = 0; i < size; i++) for (let j = 0; j < size; j++) l[i * size + j] /= scale[i] * scale[j];
  const usable = choleskyInto(l, size), end = (size - 1) * size, out = new Float64Array(maxLags + 1).fill(Infinity);
  let explained = 0;
  for (let c = 0; c < first - 1; c++) explained += l[end + c] ** 2;
  for (let k = 0; k <= maxLags; k++) {
    const cols = first + k;
    if (usable >= 0 && usable < cols) break; // these columns are exact combinations of each other
    explained += l[end + cols - 1] ** 2;
    const rss = total * Math.max(1e-300, 1 - explained);
    if (which === "maic") {
      const beta = (levelCoefficient(l, size, first - 1, cols) * scale[size - 1]) / scale[first - 1], sigma2 = rss / rows;
      out[k] = Math.log(sigma2) + (2 * ((beta ** 2 * levels) / sigma2 + k)) / rows;
    } else out[k] = rows * (Math.log(2 * Math.PI) + Math.log(rss / rows) + 1) + cols * (which === "aic" ? 2 : Math.log(rows));
  }
  return out;
}

/** Coefficient of column `at` in the regression on the first `cols`, from the factor whose last row belongs to the target. */
function levelCoefficient(l: Float64Array, size: number, at: number, cols: number): number {
  const beta = new Float64Array(cols), end = (size - 1) * size;
  for (let i = cols - 1; i >= at; i--) {
    let sum = l[end + i];
    for (let j = i + 1; j < cols; j++) sum -= l[j * size + i] * beta[j];
    beta[i] = sum / l[i * size + i];
  }
  return beta[at];
}

/** Cross products of trend terms, lagged level, lagged differences 1..maxLags and the difference, in that order, flat by rows.
 *  Those among the differences follow from each other by what enters and leaves at the ends: cost n (maxLags + 4), not n maxLags^2. */
function crossProducts(y: Float64Array, trend: Trend, maxLags: number): Float64Array {
  const terms = trendCount(trend), size = terms + 1 + maxLags + 1, rows = y.length - 1 - maxLags, origin = terms > 0 ? y[0] : 0;
  const d = Float64Array.from({ length: y.length - 1 }, (_, t) => y[t + 1] - y[t]), g = new Float64Array(size * size);
  const put = (i: number, j: number, v: number): void => { g[i * size + j] = v; g[j * size + i] = v; };
  // Lag 0, the target, stands last.
  const column = (lag: number): number => (lag === 0 ? size - 1 : terms + lag);
  const plain = Array.from({ length: terms + 1 }, (_, c) => Float64Array.from({ length: rows }, (__, i) => (c < terms ? trendTerm(c, i, rows) : y[i + maxLags] - origin)));
  for (let a = 0; a <= terms; a++) {
    for (let b = 0; b <= a; b++) put(a, b, plain[a].reduce((s, v, i) => s + v * plain[b][i], 0));
    for (let lag = 0; lag <= maxLags; lag++) {
      let sum = 0;
      for (let i = 0; i < rows; i++) sum += plain[a][i] * d[i + maxLags - lag];
      put(a, column(lag), sum);
    }
  }
  for (let apart = 0; apart <= maxLags; apart++) {
    let sum = 0;
    for (let i = 0; i < rows; i++) sum += d[i + maxLags] * d[i + maxLags - apart];
    put(column(0), column(apart), sum);
    for (let lag = 1; lag + apart <= maxLags; lag++) {
      sum += d[maxLags - lag] * d[maxLags - lag - apart] - d[rows + maxLags - lag] * d[rows + maxLags - lag - apart];
      put(column(lag), column(lag + apart), sum);
    }
  }
  return g;
}

function statisticOf(y: Float64Array, trend: Trend, lags: number): DickeyFullerRegression {
  const { fit, rows } = dickeyFullerFit(y, trend, lags);
  let scale = 0;
  for (let t = 1; t < y.length; t++) scale += (y[t] - y[t - 1]) ** 2;
  // An exact fit has no errors to measure the statistic against.
  const exact = fit.df <= 0 || fit.aliased.includes(0) || fit.rss <= 1e-22 * scale;
  return { statistic: exact ? NaN : fit.beta[0] / fit.se[0], lags, n: rows };
}
