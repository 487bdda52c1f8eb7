// The other ways to a pure autoregression: Yule-Walker, Burg, least squares.

import { leastSquares } from "../linear/leastSquares.ts";
import type { ConditionalSolution } from "./conditional.ts";
import type { Method } from "./model.ts";
import type { Numbers } from "./numbers.ts";

export interface AutoregressionFit {
  readonly phi: Float64Array;
  /** Partial autocorrelations (reflection coefficients) at lags 1..order. */
  readonly reflection: Float64Array;
  /** Innovation variance of each order 0..order. */
  readonly sigma2: Float64Array;
}

/** Yule-Walker by the Durbin-Levinson recursion, autocovariances with divisor n. sigma2 of order m is gamma0 prod (1 - k^2),
 *  without a degrees-of-freedom factor.
 *  @param y  mean already removed, no gaps */
export function yuleWalker(y: Float64Array, order: number): AutoregressionFit {
  const n = y.length;
  const gamma = new Float64Array(order + 1);
  for (let k = 0; k <= order; k++) { let sum = 0; for (let t = k; t < n; t++) sum += y[t] * y[t - k]; gamma[k] = sum / n; }
  return levinson(order, gamma[0], (phi, m, variance) => {
    let sum = gamma[m];
    for (let i = 1; i < m; i++) sum -= phi[i - 1] * gamma[m - i];
    return variance > 0 ? sum / variance : 0;
  });
}

/** Burg (1967): each reflection coefficient minimises the forward and backward errors together. sigma2 of order m is
 *  gamma0 prod (1 - k^2), gamma0 the mean square.
 *  @param y  mean already removed, no gaps */
export function burg(y: Float64Array, order: number): AutoregressionFit & { readonly residualVariance: number } {
  const n = y.length;
  const forward = Float64Array.from(y), backward = Float64Array.from(y);
  let square = 0;
  for (const v of y) square += v * v;
  let residualVariance = square / n;
  const fitted = levinson(order, square / n, (_phi, m) => {
    let top = 0, bottom = 0;
    for (let t = m; t < n; t++) { top += forward[t] * backward[t - 1]; bottom += forward[t] ** 2 + backward[t - 1] ** 2; }
    const k = bottom > 0 ? 2 * top / bottom : 0;
    let sum = 0;
    for (let t = n - 1; t >= m; t--) {
      const f = forward[t], b = backward[t - 1];
      forward[t] = f - k * b;
      backward[t] = b - k * f;
      sum += forward[t] ** 2 + backward[t] ** 2;
    }
    residualVariance = sum / (2 * (n - m));
    return k;
  });
  return { ...fitted, residualVariance };
}

function levinson(order: number, gamma0: number, next: (phi: Float64Array, m: number, variance: number) => number): AutoregressionFit {
  const phi = new Float64Array(order), old = new Float64Array(order), reflection = new Float64Array(order), sigma2 = new Float64Array(order + 1);
  let variance = gamma0;
  sigma2[0] = variance;
  for (let m = 1; m <= order; m++) {
    const k = next(phi, m, variance);
    old.set(phi);
    for (let i = 1; i < m; i++) phi[i - 1] = old[i - 1] - k * old[m - i - 1];
    phi[m - 1] = k;
    reflection[m - 1] = k;
    variance *= 1 - k * k;
    sigma2[m] = variance;
  }
  return { phi, reflection, sigma2 };
}

/** Least squares of y_t on its lags and a constant, rows order..n-1; sigma2 = RSS / rows. */
export function autoregressionByLeastSquares(y: Float64Array, lags: readonly number[], constant: boolean): { phi: Float64Array; se: Float64Array; intercept: number; interceptSe: number; sigma2: number; rows: number } {
  const p = lags.length > 0 ? lags[lags.length - 1] : 0;
  const rows = y.length - p, cols = lags.length + (constant ? 1 : 0);
  const x = new Float64Array(rows * cols), target = y.slice(p);
  for (let t = 0; t < rows; t++) {
    if (constant) x[t * cols] = 1;
    for (let i = 0; i < lags.length; i++) x[t * cols + (constant ? 1 : 0) + i] = y[t + p - lags[i]];
  }
  const fit = leastSquares(x, target, rows, cols);
  const from = constant ? 1 : 0;
  // The usual variance divides by rows; the errors use the divisor rows - cols.
  return { phi: fit.beta.slice(from), se: fit.se.slice(from), intercept: constant ? fit.beta[0] : 0, interceptSe: constant ? fit.se[0] : NaN, sigma2: fit.rss / rows, rows };
}

/** @throws RangeError where the request is more than a plain, complete autoregression */
export function autoregression(numbers: Numbers, method: Exclude<Method, "exact" | "restricted" | "conditional">): ConditionalSolution {
  const { prepared: p, data } = numbers;
  const word = `method: "${method}"`;
  const order = p.shape.ar.degree;
  if (p.shape.ma.lags.length > 0 || p.shape.ar.seasonal.length > 0) throw new RangeError(`fit: ${word} is for plain autoregressions (ar only); use method: "exact" for this model`);
  if (p.names.length > 0) throw new RangeError(`fit: ${word} takes no regressors; use method: "exact"`);
  if (p.held.some(v => !Number.isNaN(v)) || !Number.isNaN(p.heldSigma2)) throw new RangeError(`fit: ${word} estimates all coefficients; use method: "exact" to hold some`);
  if (numbers.gaps.length > 0) throw new RangeError(`fit: ${word} cannot step over missing values, and there ${numbers.gaps.length === 1 ? "is 1" : `are ${numbers.gaps.length}`}; use method: "exact", or fill them first`);
  const lags = [...p.shape.ar.plain];
  if (method !== "leastSquares" && lags.length !== order) throw new RangeError(`fit: ${word} needs all lags up to the last one; use method: "exact" or "leastSquares" for single lags`);
  const n = data.n, mean = data.columns.length > 0;
  if (n - order < lags.length + 2) throw new RangeError(`fit: ${word} with ${order} lags needs more than ${2 * order + 1} observations, and there are ${n}`);
  if (method === "leastSquares") {
    const found = autoregressionByLeastSquares(data.y, lags, mean);
    const left = 1 - found.phi.reduce((a, b) => a + b, 0);
    if (mean && Math.abs(left) < 1e-8) throw new RangeError(`fit: ${word} finds coefficients that add up to 1, so the process has no mean to return to; difference the series, or write mean: false`);
    const size = lags.length + (mean ? 1 : 0);
    const covariance = new Float64Array(size * size);
    found.se.forEach((v, i) => { covariance[i * size + i] = v * v; });
    // The process mean is intercept / (1 - sum phi); its error by the first-order rule at known phi.
    if (mean) covariance[size * size - 1] = (found.interceptSe / left) ** 2;
    return { ...solved(found.phi, found.sigma2, covariance, size), beta: mean ? Float64Array.of(found.intercept / left) : new Float64Array(0), notes: [remark(`Estimated by least squares on the last ${found.rows} values.`)] };
  }
  const found = method === "burg" ? burg(data.y, order) : yuleWalker(data.y, order);
  const sigma2 = found.sigma2[order];
  const size = order + (mean ? 1 : 0);
  return {
    ...solved(found.phi, sigma2, yuleWalkerCovariance(data.y, found, order, size, n), size), beta: new Float64Array(mean ? 1 : 0),
    notes: [remark(method === "burg" ? "Estimated by Burg's recursion on the series less its mean; the variance is that of the recursion." : "Estimated by the Yule-Walker equations on the series less its mean; the variance has no degrees-of-freedom factor.")],
  };
}

function solved(phi: Float64Array, sigma2: number, covariance: Float64Array, size: number) {
  return { x: phi, sigma2, converged: true, information: { covariance, robust: null, size, hessian: new Float64Array(0), gradient: new Float64Array(0) } };
}

function remark(text: string) { return { code: "method", tone: "note" as const, text }; }

/** sigma2 Gamma^-1 / n with the adjusted variance n / (n - p - 1); columns of the inverse by the recursion's own polynomials
 *  (Gamma^-1 = sum of outer products of the backward predictors, Brockwell & Davis 1991, section 8.2). */
function yuleWalkerCovariance(y: Float64Array, found: AutoregressionFit, order: number, size: number, n: number): Float64Array {
  const out = new Float64Array(size * size);
  const phi = new Float64Array(order), old = new Float64Array(order);
  const adjusted = found.sigma2[order] * n / (n - order - 1);
  const add = (m: number) => {
    // Backward predictor of order m: coefficient 1 at m, -phi_{m-i} at i = 0..m-1.
    const a = new Float64Array(order);
    a[m] = 1;
    for (let i = 0; i < m; i++) a[i] = -phi[m - 1 - i];
    for (let i = 0; i <= m; i++) for (let j = 0; j <= m; j++) out[i * size + j] += adjusted / n * a[i] * a[j] / found.sigma2[m];
  };
  for (let m = 0; m < order; m++) {
    add(m);
    const k = found.reflection[m];
    old.set(phi);
    for (let i = 0; i < m; i++) phi[i] = old[i] - k * old[m - 1 - i];
    phi[m] = k;
  }
  if (size > order) {
    let left = 1;
    for (const v of found.phi) left -= v;
    out[size * size - 1] = found.sigma2[order] / (n * left * left);
  }
  void y;
  return out;
}
