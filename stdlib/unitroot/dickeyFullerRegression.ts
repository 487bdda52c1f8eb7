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

/** Cross products of the regression's columns on one sample, scaled to a unit diagonal and factored: L L'. */
interface Factor {
  /** Trend terms, lagged level, lagged differences 1.., the difference: flat by rows, lower triangle. */
  readonly l: Float64Array;
  readonly size: number;
  /** First column whose pivot is not positive, or -1. */
  readonly stopped: number;
  /** Length of each column before scaling. */
  readonly scale: Float64Array;
  readonly rows: number;
  /** Place of the level among the columns. */
  readonly level: number;
}

function factored(y: Float64Array, trend: Trend, lags: number): Factor {
  const level = trendCount(trend), size = level + lags + 2, l = crossProducts(y, trend, lags);
  // Unit diagonal: the units of the level then do not decide what counts as singular.
  const scale = Float64Array.from({ length: size }, (_, i) => Math.sqrt(l[i * size + i]) || 1);
  for (let i = 0; i < size; i++) for (let j = 0; j < size; j++) l[i * size + j] /= scale[i] * scale[j];
  return { l, size, stopped: choleskyInto(l, size), scale, rows: y.length - 1 - lags, level };
}

/** The criterion at 0..maxLags lags on one sample. The regressions are nested, so that one factor of the cross products
 *  holds all their residual sums of squares. */
function criteria(y: Float64Array, trend: Trend, maxLags: number, which: "aic" | "bic" | "maic"): Float64Array {
  const factor = factored(y, trend, maxLags), { l, size, stopped, scale, rows, level } = factor;
  const end = (size - 1) * size, total = scale[size - 1] ** 2, out = new Float64Array(maxLags + 1).fill(Infinity);
  let explained = 0;
  for (let c = 0; c < level; c++) explained += l[end + c] ** 2;
  for (let k = 0; k <= maxLags; k++) {
    const cols = level + 1 + k;
    if (stopped >= 0 && stopped < cols) break; // these columns are exact combinations of each other
    explained += l[end + cols - 1] ** 2;
    const rss = total * Math.max(1e-300, 1 - explained);
    if (which === "maic") {
      const sigma2 = rss / rows;
      out[k] = Math.log(sigma2) + (2 * (((levelCoefficient(factor, cols) * scale[size - 1]) ** 2) / sigma2 + k)) / rows;
    } else out[k] = rows * (Math.log(2 * Math.PI) + Math.log(rss / rows) + 1) + cols * (which === "aic" ? 2 : Math.log(rows));
  }
  return out;
}

/** Coefficient of the scaled level in the regression of the scaled difference on the first `cols` columns. */
function levelCoefficient({ l, size, level }: Factor, cols: number): number {
  const beta = new Float64Array(cols), end = (size - 1) * size;
  for (let i = cols - 1; i >= level; i--) {
    let sum = l[end + i];
    for (let j = i + 1; j < cols; j++) sum -= l[j * size + i] * beta[j];
    beta[i] = sum / l[i * size + i];
  }
  return beta[level];
}

/** Cross products of trend terms, lagged level, lagged differences 1..lags and the difference, in that order, flat by rows.
 *  Those among the differences follow from each other by what enters and leaves at the ends: cost n (lags + 4), not n lags^2. */
function crossProducts(y: Float64Array, trend: Trend, lags: number): Float64Array {
  const terms = trendCount(trend), size = terms + lags + 2, rows = y.length - 1 - lags;
  const d = new Float64Array(y.length - 1), g = new Float64Array(size * size);
  for (let t = 0; t < d.length; t++) d[t] = y[t + 1] - y[t];
  const put = (i: number, j: number, v: number): void => { g[i * size + j] = v; g[j * size + i] = v; };
  // Lag 0, the target, stands last.
  const column = (lag: number): number => (lag === 0 ? size - 1 : terms + lag);
  const plain = [...trendColumns(terms, rows), withoutTrend(y, terms).subarray(lags, lags + rows)];
  for (let a = 0; a <= terms; a++) {
    for (let b = 0; b <= a; b++) put(a, b, product(plain[a], plain[b], 0, rows));
    for (let lag = 0; lag <= lags; lag++) put(a, column(lag), product(plain[a], d, lags - lag, rows));
  }
  for (let apart = 0; apart <= lags; apart++) {
    let sum = product(d.subarray(lags), d, lags - apart, rows);
    put(column(0), column(apart), sum);
    for (let lag = 1; lag + apart <= lags; lag++) {
      sum += d[lags - lag] * d[lags - lag - apart] - d[rows + lags - lag] * d[rows + lags - lag - apart];
      put(column(lag), column(lag + apart), sum);
    }
  }
  return g;
}

function trendColumns(terms: number, rows: number): Float64Array[] {
  return Array.from({ length: terms }, (_, c) => {
    const column = new Float64Array(rows);
    for (let i = 0; i < rows; i++) column[i] = trendTerm(c, i, rows);
    return column;
  });
}

/** The level less its trend: the regression, which has the same terms, does not change, and its cross products keep their digits. */
function withoutTrend(y: Float64Array, terms: number): Float64Array {
  if (terms === 0) return y;
  const n = y.length, X = new Float64Array(n * terms);
  for (let t = 0; t < n; t++) for (let k = 0; k < terms; k++) X[t * terms + k] = trendTerm(k, t, n);
  return leastSquares(X, y, n, terms).residuals;
}

function product(a: Float64Array, b: Float64Array, from: number, rows: number): number {
  let s0 = 0, s1 = 0, i = 0;
  for (; i + 1 < rows; i += 2) { s0 += a[i] * b[from + i]; s1 += a[i + 1] * b[from + i + 1]; }
  return i < rows ? s0 + a[i] * b[from + i] + s1 : s0 + s1;
}

/** Least share of a column's length, squared, that the columns before it leave unexplained for cross products to do: at
 *  least nine digits of the statistic are then right. Below it, reflections of the columns themselves are taken. */
const enough = 1e-6;

function statisticOf(y: Float64Array, trend: Trend, lags: number): DickeyFullerRegression {
  const factor = factored(y, trend, lags), { l, size, stopped, rows, level } = factor, df = rows - (size - 1);
  const left = (i: number): number => l[i * size + i] ** 2;
  if (df <= 0 || stopped >= 0 || Array.from({ length: size }, (_, i) => left(i)).some((share) => share < enough)) return statisticByReflections(y, trend, lags);
  // Variance factor of the level's coefficient: the squared length of its column of the inverse factor.
  const column = new Float64Array(size - 1);
  let variance = 0;
  for (let i = level; i < size - 1; i++) {
    let sum = i === level ? 1 : 0;
    for (let j = level; j < i; j++) sum -= l[i * size + j] * column[j];
    column[i] = sum / l[i * size + i];
    variance += column[i] ** 2;
  }
  return { statistic: levelCoefficient(factor, size - 1) / Math.sqrt((left(size - 1) / df) * variance), lags, n: rows };
}

function statisticByReflections(y: Float64Array, trend: Trend, lags: number): DickeyFullerRegression {
  const { fit, rows } = dickeyFullerFit(y, trend, lags);
  let scale = 0;
  for (let t = 1; t < y.length; t++) scale += (y[t] - y[t - 1]) ** 2;
  // An exact fit has no errors to measure the statistic against.
  const exact = fit.df <= 0 || fit.aliased.includes(0) || fit.rss <= 1e-22 * scale;
  return { statistic: exact ? NaN : fit.beta[0] / fit.se[0], lags, n: rows };
}
