// Standard errors: the inverse of the observed information of the exact likelihood, and the robust (sandwich) alternative.

import { inversePositive } from "../linear/cholesky.ts";
import { divideInto } from "./kernels.ts";
import { productJacobian, type Evaluate } from "./estimate.ts";
import type { Data, Work } from "./likelihood.ts";

export interface Information {
  /** Covariance of (free coefficients, data columns after the gaps), flat; null when the information is singular. */
  readonly covariance: Float64Array | null;
  readonly robust: Float64Array | null;
  readonly size: number;
  /** Second derivatives of the negative log-likelihood by the free coefficients, beta at its maximiser. */
  readonly hessian: Float64Array;
  /** Gradient by the free coefficients at x. */
  readonly gradient: Float64Array;
}

/** Central differences of the exact gradient, in steps of a two-hundredth of a
 *  standard error: truncation is then about 4e-6 of the curvature's own change over one standard error, rounding far less.
 *  The regression part is in closed form: by the gradient of its maximiser. Leaves `work` at x. */
export function informationAt(work: Work, data: Data, x: Float64Array, free: Int32Array, evaluate: Evaluate, rough: Float64Array): Information {
  const k = free.length, m = data.columns.length - data.gaps, size = k + m;
  const hessian = new Float64Array(k * k), slope = new Float64Array(m * k);
  const gradient = new Float64Array(x.length), up = new Float64Array(x.length), down = new Float64Array(x.length);
  const betaUp = new Float64Array(m), betaDown = new Float64Array(m);
  const point = Float64Array.from(x);
  for (let c = 0; c < k; c++) {
    const i = free[c];
    const curvature = rough[c * k + c];
    let h = curvature > 0 ? Math.min(0.005 / Math.sqrt(curvature), 5e-3) : 1e-4;
    let fine = false;
    for (let tries = 0; tries < 30 && !fine; tries++, h *= fine ? 1 : 0.3) {
      point[i] = x[i] + h;
      fine = Number.isFinite(evaluate.value(point));
      if (fine) { evaluate.gradientInto(point, up); betaUp.set(work.beta.subarray(data.gaps, data.gaps + m)); }
      point[i] = x[i] - h;
      fine = fine && Number.isFinite(evaluate.value(point));
      if (fine) { evaluate.gradientInto(point, down); betaDown.set(work.beta.subarray(data.gaps, data.gaps + m)); }
    }
    point[i] = x[i];
    for (let d = 0; d < k; d++) hessian[d * k + c] = fine ? (up[free[d]] - down[free[d]]) / (2 * h) : NaN;
    for (let j = 0; j < m; j++) slope[j * k + c] = (betaUp[j] - betaDown[j]) / (2 * h);
  }
  for (let a = 0; a < k; a++) for (let b = 0; b < a; b++) hessian[a * k + b] = hessian[b * k + a] = (hessian[a * k + b] + hessian[b * k + a]) / 2;
  evaluate.value(x);
  evaluate.gradientInto(x, gradient);
  const own = k === 0 ? new Float64Array(0) : inversePositive(hessian, k);
  const regression = regressionCovariance(work, data);
  if (own === null || regression === null) return { covariance: null, robust: null, size, hessian, gradient: pickFree(gradient, free) };
  const covariance = new Float64Array(size * size);
  for (let a = 0; a < k; a++) for (let b = 0; b < k; b++) covariance[a * size + b] = own[a * k + b];
  for (let j = 0; j < m; j++) {
    for (let b = 0; b < k; b++) {
      let sum = 0;
      for (let a = 0; a < k; a++) sum += slope[j * k + a] * own[a * k + b];
      covariance[(k + j) * size + b] = covariance[b * size + k + j] = sum;
    }
  }
  for (let i = 0; i < m; i++) {
    for (let j = 0; j < m; j++) {
      let sum = regression[i * m + j];
      for (let a = 0; a < k; a++) sum += covariance[(k + i) * size + a] * slope[j * k + a];
      covariance[(k + i) * size + k + j] = sum;
    }
  }
  return { covariance, robust: sandwich(work, data, x, free, covariance, size), size, hessian, gradient: pickFree(gradient, free) };
}

function pickFree(gradient: Float64Array, free: Int32Array): Float64Array { return Float64Array.from(free, i => gradient[i]); }

/** sigma2 times the columns' block of the inverse cross products, gaps integrated out. */
function regressionCovariance(work: Work, data: Data): Float64Array | null {
  const all = work.beta.length, gaps = data.gaps, m = all - gaps;
  if (m === 0) return new Float64Array(0);
  const inverse = inversePositive(work.q, all, 1e-15);
  if (inverse === null) return null;
  const out = new Float64Array(m * m);
  for (let i = 0; i < m; i++) for (let j = 0; j < m; j++) out[i * m + j] = work.sigma2 * inverse[(gaps + i) * all + gaps + j];
  return out;
}

/** A B A with B the sum of squared scores of the single innovations (White 1982): right also when the variance is not constant. */
function sandwich(work: Work, data: Data, x: Float64Array, free: Int32Array, covariance: Float64Array, size: number): Float64Array {
  const { shape, n, er, r, b, sigma2 } = work;
  const k = free.length, m = size - k;
  const fa = Float64Array.from(r), fe = Float64Array.from(er);
  divideInto(fa, n, shape.ma.lags, b);
  divideInto(fe, n, shape.ma.lags, b);
  const ar = shape.ar.lags, ma = shape.ma.lags;
  const jac = productJacobian(shape, x, free);
  const score = new Float64Array(size), meat = new Float64Array(size * size);
  for (let t = 0; t < n; t++) {
    score.fill(0);
    for (let i = 0; i < ar.length; i++) if (t >= ar[i]) for (let c = 0; c < k; c++) score[c] += jac[i * k + c] * fa[t - ar[i]];
    for (let i = 0; i < ma.length; i++) if (t >= ma[i]) for (let c = 0; c < k; c++) score[c] += jac[(ar.length + i) * k + c] * fe[t - ma[i]];
    for (let j = 0; j < m; j++) score[k + j] = work.e[data.gaps + j + 1] ? work.e[data.gaps + j + 1][t] : 0;
    const weight = (er[t] / sigma2) ** 2;
    if (weight === 0) continue;
    for (let a = 0; a < size; a++) { const s = weight * score[a]; for (let c = 0; c <= a; c++) meat[a * size + c] += s * score[c]; }
  }
  for (let a = 0; a < size; a++) for (let c = 0; c < a; c++) meat[c * size + a] = meat[a * size + c];
  return threefold(covariance, meat, size);
}

function threefold(a: Float64Array, b: Float64Array, size: number): Float64Array {
  const half = new Float64Array(size * size), out = new Float64Array(size * size);
  for (let i = 0; i < size; i++) for (let t = 0; t < size; t++) for (let j = 0; j < size; j++) half[i * size + j] += a[i * size + t] * b[t * size + j];
  for (let i = 0; i < size; i++) for (let t = 0; t < size; t++) for (let j = 0; j < size; j++) out[i * size + j] += half[i * size + t] * a[t * size + j];
  return out;
}
