// Conditional sum of squares: innovations before the sample are zero, the first p + sP ones too.

import { quasiNewton } from "../optimize/quasiNewton.ts";
import { inversePositive } from "../linear/cholesky.ts";
import { productJacobian } from "./gaussNewton.ts";
import { divideInto, dot, subtractLagsInto } from "./kernels.ts";
import type { Note } from "./model.ts";
import type { Numbers } from "./numbers.ts";
import { isStable } from "./region.ts";
import { expandInto } from "./shape.ts";
import { hannanRissanen } from "./start.ts";
import type { Information } from "./information.ts";

export interface ConditionalSolution {
  readonly x: Float64Array;
  readonly beta: Float64Array;
  readonly sigma2: number;
  readonly information: Information | null;
  readonly converged: boolean;
  readonly notes: readonly Note[];
  /** The method's own innovations over the data's rows, NaN where it sets them to zero; left out: those of the exact filter. */
  readonly innovations?: Float64Array;
}

/** Minimises the conditional sum of squares over coefficients, mean and regressors together; sigma2 = SS / (n - nCond).
 *  Convention: e_t = 0 for the first nCond = p + sP values of w (Box & Jenkins 1976, section 7.1.2), w the differenced series.
 *  @throws RangeError where there are gaps: the recursion cannot step over them */
export function conditionalEstimate(numbers: Numbers): ConditionalSolution {
  const { prepared, data } = numbers;
  if (numbers.gaps.length > 0) throw new RangeError(`fit: method "conditional" cannot step over missing values, and there ${numbers.gaps.length === 1 ? "is 1" : `are ${numbers.gaps.length}`} inside the sample; use method: "exact", or fill them first`);
  const { shape } = prepared;
  const skip = shape.ar.degree, n = data.n, m = data.columns.length;
  if (n - skip < 2) throw new RangeError(`fit: method "conditional" leaves out the first ${skip} values, and there are only ${n}; use method: "exact"`);
  const free = [...prepared.held.keys()].filter(i => Number.isNaN(prepared.held[i]));
  const x = Float64Array.from(prepared.held), beta = new Float64Array(m);
  const a = new Float64Array(shape.ar.lags.length), b = new Float64Array(shape.ma.lags.length);
  const r = new Float64Array(n), e = new Float64Array(n);
  const size = free.length + m;
  const jac: Float64Array[] = Array.from({ length: size }, () => new Float64Array(n));
  const parts = shape.factors;
  const residuals = () => {
    for (let t = 0; t < n; t++) { r[t] = data.y[t]; for (let j = 0; j < m; j++) r[t] -= beta[j] * data.columns[j][t]; }
    expandInto(a, shape.ar, x, 0);
    expandInto(b, shape.ma, x, shape.ar.plain.length + shape.ar.seasonal.length);
    subtractLagsInto(e, r, n, shape.ar.lags, a);
    for (let t = 0; t < Math.min(skip, n); t++) e[t] = 0;
    divideInto(e, n, shape.ma.lags, b);
  };
  const sensitivities = () => {
    const product = productJacobian(shape, x, Int32Array.from(free));
    const lagged = [...shape.ar.lags].map(lag => ({ source: r, lag })).concat([...shape.ma.lags].map(lag => ({ source: e, lag })));
    for (let i = 0; i < free.length; i++) {
      const out = jac[i];
      out.fill(0);
      lagged.forEach(({ source, lag }, row) => {
        const w = product[row * free.length + i];
        if (w !== 0) for (let t = Math.max(lag, skip); t < n; t++) out[t] -= w * source[t - lag];
      });
      for (let t = 0; t < Math.min(skip, n); t++) out[t] = 0;
      divideInto(out, n, shape.ma.lags, b);
    }
    for (let j = 0; j < m; j++) {
      const out = jac[free.length + j];
      subtractLagsInto(out, data.columns[j], n, shape.ar.lags, a);
      for (let t = 0; t < n; t++) out[t] = t < skip ? 0 : -out[t];
      divideInto(out, n, shape.ma.lags, b);
    }
  };
  const used = n - skip;
  const set = (z: Float64Array) => { free.forEach((at, i) => { x[at] = z[i]; }); for (let j = 0; j < m; j++) beta[j] = z[free.length + j]; };
  const problem = {
    size,
    value(z: Float64Array) {
      set(z);
      // The recursion explodes where the moving average is not invertible; the autoregressive side needs no bound here.
      for (const f of parts) if (f.sign < 0 && !isStable(f.lags, x.subarray(f.from, f.from + f.lags.length), f.sign, true)) return Infinity;
      residuals();
      const sum = dot(e, e, n);
      return Number.isFinite(sum) && sum > 0 ? 0.5 * used * Math.log(sum / used) : Infinity;
    },
    gradientInto(g: Float64Array) {
      sensitivities();
      const sum = dot(e, e, n);
      for (let i = 0; i < size; i++) g[i] = used * dot(jac[i], e, n) / sum;
    },
    curvatureInto(h: Float64Array) {
      const sum = dot(e, e, n);
      for (let i = 0; i < size; i++) for (let j = 0; j < size; j++) h[i * size + j] = used * dot(jac[i], jac[j], n) / sum;
    },
  };
  const guess = hannanRissanen(numbers.bridged)(shape);
  const start = new Float64Array(size);
  free.forEach((at, i) => { start[i] = guess[at]; });
  let found = quasiNewton(problem, start, 1e-12);
  if (free.length > 1 || !found.converged) {
    const other = quasiNewton(problem, new Float64Array(size), 1e-12);
    if (other.value < found.value - 1e-9 || !Number.isFinite(found.value)) found = other;
  }
  problem.value(found.x);
  const value = dot(e, e, n);
  sensitivities();
  const hessian = new Float64Array(size * size);
  problem.curvatureInto(hessian);
  const covariance = size > 0 ? inversePositive(hessian, size) : new Float64Array(0);
  return {
    x: Float64Array.from(x), beta: Float64Array.from(beta), innovations: e.fill(NaN, 0, skip), sigma2: value / used, converged: found.converged || size === 0,
    information: { covariance, robust: null, size },
    notes: [{ code: "conditional", tone: "note", text: `Estimated by conditional least squares: innovations before the ${skip > 0 ? `value at place ${skip + 1}` : "sample"} count as zero.` }],
  };
}
