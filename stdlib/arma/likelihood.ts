// Exact Gaussian likelihood of a multiplicative seasonal ARMA process, complete or with a few gaps, and its exact gradient.
//
// Legend: a0 = theta(B)^-1 phi(B) w from zero pre-sample values; u the pre-sample's part in the first g equations, covariance
// Omega (presample.ts); V its response in the innovations, G = V'V (response.ts). Then w has the density of a0 ~ N(0, I + V Omega V'):
//   sum of squares  S = e'e + u'Omega^-1 u at e = a0 - V u, u = K V'a0, K = (Omega^-1 + G)^-1 (Omega may be singular)
//   determinant     |I + L'G L|, Omega = L L'
// sigma2 is concentrated out, or held. Regression coefficients enter by generalised least squares inside. A missing value is a
// column with a pulse whose coefficient is integrated out (flat): exactly the density of what was observed, and with
// differences exactly that of the later levels given the first ones (diffuse start).
// Reverse mode: dS = -2 sum lambda_t (da_i w_{t-i} + db_j e_{t-j}) - lambda' dOmega lambda, lambda = theta(F)^-1 e (first g entries),
// d log det = tr(K dG) + tr((G^-1 + Omega)^-1 dOmega).
// Sources: Newbold (1974); Ljung & Box (1979); Harvey & Phillips (1979) for the concentration.

import { divideBackInto, divideInto, dot, lagDot, smallBackwardInto, smallForwardInto, subtractColumn, subtractLagsInto, total } from "./kernels.ts";
import { makePresample, presampleBack, presampleInto, type Presample } from "./presample.ts";
import { makeResponse, responseBack, responseInto, type Response } from "./response.ts";
import { contractInto, expandInto, type Shape } from "./shape.ts";
import { choleskyInto } from "../linear/cholesky.ts";
import { lowerSolveRowsInto, rowProductsInto, transposeInto } from "../linear/products.ts";

/** What is fitted: w - X beta, the first `gaps` columns being pulses of missing values. */
export interface Data {
  readonly n: number;
  readonly y: Float64Array;
  readonly columns: readonly Float64Array[];
  readonly gaps: number;
  /** Whether the first column is the same number throughout (there are then no gaps): its innovations are constant after a
   *  while, and cost next to nothing. */
  readonly constant?: boolean;
  /** Innovation variance, or null when it is estimated. */
  readonly sigma2: number | null;
}

/** Work arrays of one model shape and length; filled by `valueAt`, read by `gradientInto` and by who wants residuals. */
export interface Work {
  readonly shape: Shape; readonly n: number;
  /** min(memory, n). */
  readonly g: number;
  readonly a: Float64Array; readonly b: Float64Array;
  readonly aBar: Float64Array; readonly bBar: Float64Array;
  readonly pre: Presample; readonly response: Response;
  /** L, then D = I + L'GL and its factor, W = C^-1 L', K, scratch; g x g each. */
  readonly l: Float64Array; readonly d: Float64Array; readonly wk: Float64Array; readonly k: Float64Array; readonly s1: Float64Array;
  readonly omegaBar: Float64Array;
  /** a0 and e of y, then of each column. */
  readonly a0: Float64Array[]; readonly e: Float64Array[];
  readonly u: Float64Array; readonly v: Float64Array;
  /** Residual series, its innovations, lambda. */
  readonly r: Float64Array; readonly er: Float64Array; readonly lambda: Float64Array; delta: Float64Array;
  readonly q: Float64Array; readonly qy: Float64Array; readonly chol: Float64Array;
  readonly beta: Float64Array;
  /** Dense lags 1..2 on both sides: the fused kernels serve. */
  readonly small: boolean;
  readonly sums: Float64Array;
  /** From where the constant column's innovations no longer change. */
  flat: number;
  /** Whether lambda is complete, and `sums` with it. */
  swept: boolean;
  /** Sum of squares, log determinant (gaps included), effective n, and the negative log-likelihood at the last `valueAt`. */
  sum: number; logDet: number; nEffective: number; f: number; sigma2: number;
}

export function makeWork(shape: Shape, n: number, columns: number): Work {
  const g = Math.min(shape.memory, n);
  const big = () => new Float64Array(n);
  const square = () => new Float64Array(g * g);
  const dense = (lags: Int32Array) => lags.length <= 2 && lags.every((l, i) => l === i + 1);
  return {
    shape, n, g,
    a: new Float64Array(shape.ar.lags.length), b: new Float64Array(shape.ma.lags.length),
    aBar: new Float64Array(shape.ar.lags.length), bBar: new Float64Array(shape.ma.lags.length),
    pre: makePresample(shape.ar.degree, shape.ma.degree), response: makeResponse(n, g),
    l: square(), d: square(), wk: square(), k: square(), s1: square(), omegaBar: new Float64Array(shape.memory ** 2),
    a0: Array.from({ length: columns + 1 }, big), e: Array.from({ length: columns + 1 }, big),
    u: new Float64Array(g), v: new Float64Array(g), r: big(), er: big(), lambda: big(), delta: new Float64Array(Math.min(n, 4096)),
    q: new Float64Array(columns * columns), qy: new Float64Array(columns), chol: new Float64Array(columns * columns),
    beta: new Float64Array(columns),
    small: shape.ma.lags.length > 0 && dense(shape.ar.lags) && dense(shape.ma.lags), sums: new Float64Array(4), flat: 0, swept: false, sum: 0, logDet: 0, nEffective: n, f: Infinity, sigma2: NaN,
  };
}

/** Negative log-likelihood at coefficients x (phi, Phi, theta, Theta), beta and sigma2 at their maximisers.
 *  Infinity where the autoregressive side is not stationary. The moving-average side must not be explosive (roots inside the
 *  circle make the recursion grow: see filter.ts for those). Cost n * (lags) a column + g^3. */
export function valueAt(work: Work, data: Data, x: Float64Array): number {
  const { shape, n, g } = work;
  work.f = Infinity;
  expandInto(work.a, shape.ar, x, 0);
  expandInto(work.b, shape.ma, x, shape.ar.plain.length + shape.ar.seasonal.length);
  if (!presampleInto(work.pre, shape.ar, work.a, shape.ma, work.b)) return Infinity;
  responseInto(work.response, shape.ma.lags, work.b);
  const logDet = gainInto(work);
  if (!Number.isFinite(logDet)) return Infinity;
  innovationsInto(work, data.y, 0);
  const m = data.columns.length;
  for (let j = 0; j < m; j++) if (j > 0 || !data.constant) innovationsInto(work, data.columns[j], j + 1);
  if (data.constant) constantInto(work, data.columns[0][0]);
  const gapDet = regress(work, data);
  if (!Number.isFinite(gapDet)) return Infinity;
  work.logDet = logDet + gapDet;
  work.nEffective = n - data.gaps;
  work.sum = Math.max(0, work.sum + presampleSquares(work, g));
  const free = data.sigma2 === null;
  work.sigma2 = free ? work.sum / work.nEffective : data.sigma2!;
  const ne = work.nEffective;
  work.f = 0.5 * (ne * Math.log(2 * Math.PI * work.sigma2) + work.logDet + (free ? ne : work.sum / work.sigma2));
  if (Number.isNaN(work.f)) work.f = Infinity;
  return work.f;
}

/** K, W and the log determinant of I + V Omega V'. */
function gainInto(work: Work): number {
  const { g, l, d, wk, k, s1, pre } = work;
  if (g === 0) return 0;
  const gram = work.response.gram, omega = pre.omega, G = pre.g;
  if (g === 1) {
    const det = 1 + omega[0] * gram[0];
    k[0] = omega[0] / det;
    wk[0] = Math.sqrt(Math.max(0, k[0]));
    return Math.log(det);
  }
  semiFactorInto(l, omega, g, G);
  transposeInto(wk, l, g);
  // s1 = L'G, d = I + L'G L.
  rowProductsInto(s1, wk, gram, g, false, true);
  rowProductsInto(d, s1, wk, g, true, false);
  for (let i = 0; i < g; i++) d[i * g + i] += 1;
  if (choleskyInto(d, g) >= 0) return NaN;
  let logDet = 0;
  for (let i = 0; i < g; i++) logDet += Math.log(d[i * g + i]);
  lowerSolveRowsInto(wk, d, g);
  return 2 * logDet;
}

/** Lower factor of the leading g x g block of a semidefinite matrix (upper triangle given): a vanishing pivot gives an empty column. */
function semiFactorInto(l: Float64Array, omega: Float64Array, g: number, stride: number): void {
  let top = 0;
  for (let i = 0; i < g; i++) top = Math.max(top, omega[i * stride + i]);
  const floor = 4e-16 * top * g;
  for (let i = 0; i < g; i++) {
    const row = i * g;
    for (let j = i + 1; j < g; j++) l[row + j] = 0;
    for (let j = 0; j <= i; j++) {
      const other = j * g;
      let sum = omega[j * stride + i];
      for (let t = 0; t < j; t++) sum -= l[row + t] * l[other + t];
      if (i === j) l[row + i] = sum > floor ? Math.sqrt(sum) : 0;
      else l[row + j] = l[other + j] > 0 ? sum / l[other + j] : 0;
    }
  }
}

/** a0 and e of one series. */
function innovationsInto(work: Work, x: Float64Array, index: number): void {
  const { n, shape, a, b } = work;
  const a0 = work.a0[index];
  if (work.small) smallForwardInto(a0, x, n, a.length > 0 ? a[0] : 0, a.length > 1 ? a[1] : 0, b[0], b.length > 1 ? b[1] : 0);
  else {
    subtractLagsInto(a0, x, n, shape.ar.lags, a);
    divideInto(a0, n, shape.ma.lags, b);
  }
  correctInto(work, work.e[index], a0);
}

/** The same for a column that is c throughout. */
function constantInto(work: Work, c: number): void {
  const { n, shape, a, b } = work;
  const a0 = work.a0[1];
  const ar = shape.ar.lags, p = shape.ar.degree;
  // After the longest autoregressive lag and the length of 1/theta nothing changes any more.
  const reach = Math.min(n, p + work.response.length + 1);
  let level = c;
  for (let t = 0, i = 0; t < reach; t++) {
    if (i < ar.length && ar[i] === t) level -= a[i++] * c;
    a0[t] = level;
  }
  divideInto(a0, reach, shape.ma.lags, b);
  if (reach < n) a0.fill(a0[reach - 1], reach, n);
  correctInto(work, work.e[1], a0);
  work.flat = Math.min(n, Math.max(reach, work.g + work.response.length));
}

/** e = a0 - V K V'a0: only the first values change where 1/theta dies out. */
function correctInto(work: Work, e: Float64Array, a0: Float64Array): void {
  const { n, g, u, v, response, shape, b } = work;
  e.set(a0);
  if (g === 0) return;
  const m = response.length;
  const reach = Math.min(n, g + m);
  const delta = deltaOf(work, reach);
  for (let t = 0; t < reach; t++) delta[t] = a0[t];
  divideBackInto(delta, reach, shape.ma.lags, b);
  for (let i = 0; i < g; i++) v[i] = delta[i];
  gainTimesInto(work, u, v);
  for (let t = 0; t < reach; t++) delta[t] = t < g ? u[t] : 0;
  divideInto(delta, reach, shape.ma.lags, b);
  for (let t = 0; t < reach; t++) e[t] -= delta[t];
}

/** Scratch of at least the length asked for. */
function deltaOf(work: Work, length: number): Float64Array {
  if (work.delta.length < length) work.delta = new Float64Array(Math.min(work.n, 2 * length));
  return work.delta;
}

/** out = K x = W'(W x). */
function gainTimesInto(work: Work, out: Float64Array, x: Float64Array): void {
  const { g, wk } = work;
  out.fill(0);
  for (let i = 0; i < g; i++) {
    const row = i * g;
    let sum = 0;
    for (let j = 0; j < g; j++) sum += wk[row + j] * x[j];
    for (let j = 0; j < g; j++) out[j] += wk[row + j] * sum;
  }
}

/** beta by generalised least squares; residual series and innovations; the log determinant of the gaps' information. */
function regress(work: Work, data: Data): number {
  const { n, a0, e, r, er, q, qy, chol, beta } = work;
  const m = data.columns.length;
  if (m === 0) { r.set(data.y); er.set(e[0]); work.sum = dot(er, er, n); return 0; }
  for (let i = 0; i < m; i++) {
    for (let j = 0; j <= i; j++) q[i * m + j] = q[j * m + i] = dot(e[i + 1], a0[j + 1], i === 0 && data.constant ? work.flat : n);
    qy[i] = dot(e[i + 1], a0[0], i === 0 && data.constant ? work.flat : n);
  }
  if (data.constant && work.flat < n) {
    const level = e[1][n - 1];
    q[0] += (n - work.flat) * level * a0[1][n - 1];
    qy[0] += level * total(a0[0], work.flat, n);
  }
  chol.set(q);
  if (choleskyInto(chol, m) >= 0) return NaN;
  let gapDet = 0;
  for (let i = 0; i < data.gaps; i++) gapDet += 2 * Math.log(chol[i * m + i]);
  for (let i = 0; i < m; i++) {
    let sum = qy[i];
    for (let t = 0; t < i; t++) sum -= chol[i * m + t] * beta[t];
    beta[i] = sum / chol[i * m + i];
  }
  for (let i = m - 1; i >= 0; i--) {
    let sum = beta[i];
    for (let t = i + 1; t < m; t++) sum -= chol[t * m + i] * beta[t];
    beta[i] = sum / chol[i * m + i];
  }
  let squares = 0;
  for (let j = 0; j < m; j++) squares = subtractColumn(er, j === 0 ? e[0] : er, e[j + 1], r, j === 0 ? data.y : r, data.columns[j], beta[j], n);
  work.sum = squares;
  return gapDet;
}

/** u'Omega^-1 u = u'V'e from the first entries of lambda: further on lambda is only swept for a gradient. */
function presampleSquares(work: Work, g: number): number {
  const { n, lambda, er, shape, b, u, response } = work;
  work.swept = false;
  if (g === 0) return 0;
  const reach = Math.min(n, g + response.length);
  for (let t = 0; t < reach; t++) lambda[t] = er[t];
  divideBackInto(lambda, reach, shape.ma.lags, b);
  // u of the residual series = Omega (V'e), from the first entries of lambda.
  const { omega, g: G } = work.pre;
  let sum = 0;
  for (let i = 0; i < g; i++) {
    let ui = 0;
    for (let j = 0; j < g; j++) ui += (j >= i ? omega[i * G + j] : omega[j * G + i]) * lambda[j];
    u[i] = ui;
    sum += ui * lambda[i];
  }
  return sum;
}

/** Gradient of the last value by the coefficients (phi, Phi, theta, Theta). Cost about that of a value. */
export function gradientInto(work: Work, data: Data, x: Float64Array, gradient: Float64Array): void {
  const { shape, g, aBar, bBar, omegaBar, k, s1, wk, l, d, response } = work;
  aBar.fill(0); bBar.fill(0); omegaBar.fill(0); gradient.fill(0);
  const G = work.pre.g;
  if (g > 0) {
    // K = W'W (halved: the derivative of half a log determinant), Z = W G, M = G - Z'Z.
    const gram = response.gram;
    transposeInto(l, wk, g);
    rowProductsInto(k, l, l, g, true, false);
    rowProductsInto(s1, wk, gram, g, false, false);
    transposeInto(l, s1, g);
    rowProductsInto(d, l, l, g, true, false);
    for (let i = 0; i < g; i++) {
      for (let j = 0; j < i; j++) {
        k[j * g + i] = k[i * g + j] *= 0.5;
        omegaBar[j * G + i] = gram[i * g + j] - d[i * g + j];
      }
      k[i * g + i] *= 0.5;
      omegaBar[i * G + i] = 0.5 * (gram[i * g + i] - d[i * g + i]);
    }
    responseBack(response, k, shape.ma.lags, work.b, bBar);
  }
  const weight = data.sigma2 === null ? work.nEffective / (2 * work.sum) : 1 / (2 * work.sigma2);
  sweep(work);
  if (work.small) {
    for (let i = 0; i < aBar.length; i++) aBar[i] -= 2 * weight * work.sums[i];
    for (let j = 0; j < bBar.length; j++) bBar[j] -= 2 * weight * work.sums[2 + j];
  } else addLagSums(work, work.r, work.er, work.lambda, weight);
  addOuter(work, work.lambda, weight);
  if (data.gaps > 0) addGaps(work, data);
  presampleBack(work.pre, omegaBar, shape.ar, work.a, shape.ma, work.b, aBar, bBar);
  contractInto(gradient, shape.ar, x, 0, aBar);
  contractInto(gradient, shape.ma, x, shape.ar.plain.length + shape.ar.seasonal.length, bBar);

}

/** lambda of the residual series, whole. */
function sweep(work: Work): void {
  if (work.swept) return;
  const { n, lambda, er, r, shape, b } = work;
  if (work.small) smallBackwardInto(lambda, er, r, n, b[0], b.length > 1 ? b[1] : 0, work.sums);
  else { lambda.set(er); divideBackInto(lambda, n, shape.ma.lags, b); }
  work.swept = true;
}

/** Adds weight * d(quadratic form of the series r), whose innovations and lambda are given: the lag sums of both sides. */
function addLagSums(work: Work, r: Float64Array, e: Float64Array, lambda: Float64Array, weight: number): void {
  const { shape, n, aBar, bBar } = work;
  for (let i = 0; i < aBar.length; i++) aBar[i] -= 2 * weight * lagDot(lambda, r, n, shape.ar.lags[i]);
  for (let j = 0; j < bBar.length; j++) bBar[j] -= 2 * weight * lagDot(lambda, e, n, shape.ma.lags[j]);
}

/** The same for what hangs on Omega. */
function addOuter(work: Work, lambda: Float64Array, weight: number): void {
  const { g, omegaBar } = work;
  const G = work.pre.g;
  for (let i = 0; i < g; i++) {
    const x = weight * lambda[i];
    omegaBar[i * G + i] -= x * lambda[i];
    for (let j = i + 1; j < g; j++) omegaBar[i * G + j] -= 2 * x * lambda[j];
  }
}

/** Half the log determinant of the gaps' information C: tr(C^-1 dC) is a sum of quadratic forms of the columns of X C^(-T/2). */
function addGaps(work: Work, data: Data): void {
  const { n, shape, b, e, chol } = work;
  const delta = deltaOf(work, n);
  const m = data.columns.length;
  const series = new Float64Array(n), innovations = new Float64Array(n);
  const c = new Float64Array(data.gaps);
  for (let j = 0; j < data.gaps; j++) {
    // Column j of Lc^-T: solve Lc' c = unit_j.
    c.fill(0);
    c[j] = 1 / chol[j * m + j];
    for (let i = j - 1; i >= 0; i--) {
      let sum = 0;
      for (let t = i + 1; t <= j; t++) sum -= chol[t * m + i] * c[t];
      c[i] = sum / chol[i * m + i];
    }
    series.fill(0); innovations.fill(0);
    for (let i = 0; i <= j; i++) {
      const x = data.columns[i], ex = e[i + 1], ci = c[i];
      for (let t = 0; t < n; t++) { series[t] += ci * x[t]; innovations[t] += ci * ex[t]; }
    }
    for (let t = 0; t < n; t++) delta[t] = innovations[t];
    divideBackInto(delta, n, shape.ma.lags, b);
    addLagSums(work, series, innovations, delta, 0.5);
    addOuter(work, delta, 0.5);
  }
}
