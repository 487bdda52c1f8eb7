// Standard errors: the inverse of the observed information of the exact likelihood, and the robust (sandwich) alternative.

import { inversePositive } from "../linear/cholesky.ts";
import { inverseBeside, type Edges } from "./edges.ts";
import { divideInto, dot } from "./kernels.ts";
import { productJacobian } from "./gaussNewton.ts";
import type { Evaluate } from "./search.ts";
import { columnBlockInto, residualsInto, type Data, type Work } from "./work.ts";

export interface Information {
  /** Covariance of (free coefficients, data columns after the gaps), flat; null when the information is singular. */
  readonly covariance: Float64Array | null;
  readonly robust: Float64Array | null;
  readonly size: number;
}

/** From this length on one-sided differences are exact enough: the curvature's own change over a thousandth of a standard
 *  error is below 1e-3 / sqrt(n) of it. They halve the passes. */
const LONG = 5000;

/** Central differences of the exact gradient, in steps of a two-hundredth of a
 *  standard error: truncation is then about 4e-6 of the curvature's own change over one standard error, rounding far less.
 *  The regression part is in closed form: by the gradient of its maximiser. Coefficients at the edge have NaN for a variance.
 *  Leaves `work` at x. */
export function informationAt(work: Work, data: Data, x: Float64Array, free: Int32Array, evaluate: Evaluate, rough: Float64Array, edges: Edges): Information {
  const k = free.length, m = data.columns.length - data.gaps, size = k + m;
  const hessian = new Float64Array(k * k), slope = new Float64Array(m * k);
  const gradient = new Float64Array(x.length), up = new Float64Array(x.length), down = new Float64Array(x.length);
  const beta = () => work.beta.slice(data.gaps, data.gaps + m);
  const point = x.slice();
  const oneSided = work.n >= LONG;
  if (oneSided) { evaluate.value(x); evaluate.gradientInto(x, gradient); }
  const here = oneSided ? beta() : new Float64Array(m);
  for (let c = 0; c < k; c++) {
    const i = free[c], curvature = rough[c * k + c];
    let h = curvature > 0 ? Math.min((oneSided ? 1e-3 : 5e-3) / Math.sqrt(curvature), 5e-3) : 1e-4;
    let above: Float64Array | null = null, below: Float64Array | null = null;
    for (let tries = 0; tries < 30; tries++, h *= 0.3) {
      const ahead = (step: number, into: Float64Array) => {
        point[i] = x[i] + step;
        if (!Number.isFinite(evaluate.value(point))) return null;
        evaluate.gradientInto(point, into);
        return beta();
      };
      above = ahead(h, up);
      below = above === null ? null : oneSided ? here : ahead(-h, down);
      if (above !== null && below !== null) break;
    }
    point[i] = x[i];
    const width = oneSided ? h : 2 * h, base = oneSided ? gradient : down;
    const fine = above !== null && below !== null;
    for (let d = 0; d < k; d++) hessian[d * k + c] = fine ? (up[free[d]] - base[free[d]]) / width : NaN;
    for (let j = 0; j < m; j++) slope[j * k + c] = fine ? (above![j] - below![j]) / width : NaN;
  }
  for (let a = 0; a < k; a++) for (let b = 0; b < a; b++) hessian[a * k + b] = hessian[b * k + a] = (hessian[a * k + b] + hessian[b * k + a]) / 2;
  evaluate.value(x);
  const own = inverseBeside(hessian, k, edges.directions);
  const regression = regressionCovariance(work, data);
  if (own === null || regression === null) return { covariance: null, robust: null, size };
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
  const robust = sandwich(work, data, x, free, covariance, size);
  for (const i of edges.without) covariance[i * size + i] = robust[i * size + i] = NaN;
  return { covariance, robust, size };
}

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
  const { shape, n, er, b, sigma2 } = work;
  const k = free.length, ar = shape.ar.lags, ma = shape.ma.lags;
  // a0 of the series is no longer needed, nor lambda: their places serve for the two filtered series.
  const fa = work.a0, fe = work.lambda;
  if (ar.length > 0) { residualsInto(fa, work, data, 0); divideInto(fa, n, ma, b); }
  if (ma.length > 0) { fe.set(er); divideInto(fe, n, ma, b); }
  const jac = productJacobian(shape, x, free), rows = Math.min(n, BLOCK);
  const meat = new Float64Array(size * size), all = new Float64Array(size * rows), scores: Float64Array[] = [];
  for (let c = 0; c < size; c++) scores.push(all.subarray(c * rows, (c + 1) * rows));
  for (let start = 0; start < n; start += BLOCK) {
    const length = Math.min(BLOCK, n - start);
    for (let c = 0; c < size; c++) {
      const out = scores[c];
      out.fill(0);
      if (c >= k) columnBlockInto(out, work, data, data.gaps + c - k, start, length);
      else {
        for (let i = 0; i < ar.length; i++) if (jac[i * k + c] !== 0) addLagged(out, fa, jac[i * k + c], ar[i], start, length);
        for (let i = 0; i < ma.length; i++) if (jac[(ar.length + i) * k + c] !== 0) addLagged(out, fe, jac[(ar.length + i) * k + c], ma[i], start, length);
      }
      for (let t = 0; t < length; t++) out[t] *= er[start + t];
    }
    for (let a = 0; a < size; a++) for (let c = 0; c <= a; c++) meat[a * size + c] += dot(scores[a], scores[c], length);
  }
  for (let a = 0; a < size; a++) for (let c = 0; c <= a; c++) meat[c * size + a] = meat[a * size + c] /= sigma2 ** 2;
  return threefold(covariance, meat, size);
}

/** out_t += c source_{start+t-lag}. */
function addLagged(out: Float64Array, source: Float64Array, c: number, lag: number, start: number, length: number): void {
  for (let t = Math.max(0, lag - start), from = start - lag; t < length; t++) out[t] += c * source[from + t];
}

/** Rows of scores held at a time. */
const BLOCK = 4096;

function threefold(a: Float64Array, b: Float64Array, size: number): Float64Array {
  const half = new Float64Array(size * size), out = new Float64Array(size * size);
  for (let i = 0; i < size; i++) for (let t = 0; t < size; t++) for (let j = 0; j < size; j++) half[i * size + j] += a[i * size + t] * b[t * size + j];
  for (let i = 0; i < size; i++) for (let t = 0; t < size; t++) for (let j = 0; j < size; j++) out[i * size + j] += half[i * size + t] * a[t * size + j];
  return out;
}
