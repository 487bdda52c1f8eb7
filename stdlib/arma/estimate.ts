// The maximum of the likelihood over the ARMA coefficients: starts, search, and the choice among several maxima.

import { divideInto, lagDot } from "./kernels.ts";
import { gradientInto, makeWork, valueAt, type Data, type Work } from "./likelihood.ts";
import { inverseRoots, reflected } from "./roots.ts";
import { isStable } from "./region.ts";
import type { Factor, Product, Shape } from "./shape.ts";
import { otherStarts } from "./otherStarts.ts";
import { hannanRissanen } from "./start.ts";
import { quasiNewton, type Minimum, type Problem } from "../optimize/quasiNewton.ts";

export interface Estimate {
  /** phi, Phi, theta, Theta. */
  readonly x: Float64Array;
  /** Negative log-likelihood. */
  readonly value: number;
  readonly converged: boolean;
  /** Likelihood passes over all starts. */
  readonly passes: number;
  /** Second-derivative matrix of the search, by free coefficient: rough. */
  readonly hessian: Float64Array;
  /** Positions of the free coefficients in x. */
  readonly free: Int32Array;
}

export interface Search {
  readonly shape: Shape;
  readonly data: Data;
  /** NaN where a coefficient is free. */
  readonly held: Float64Array;
  /** Series without gaps for starting regressions (gaps bridged), mean corrected. */
  readonly bridged: Float64Array;
  /** Coefficients to start from instead of a regression, when they are known to be near. */
  readonly near?: Float64Array;
  readonly work?: Work;
  readonly evaluate?: Evaluate;
  /** "one": the first start only. */
  readonly starts?: "one";
}

/** Value and gradient of another likelihood (of the filter, where there are many gaps). */
export interface Evaluate {
  value(x: Float64Array): number;
  gradientInto(x: Float64Array, gradient: Float64Array): void;
}

/** The four factors, in the order of the parameters. */
export function factors(shape: Shape): readonly Factor[] { return shape.factors; }

/** Maximises the exact likelihood. Cost: a start by regression and usually 4 to 10 passes; more starts where several maxima are likely. */
export function estimate(search: Search): Estimate {
  const { shape, data, held } = search;
  const work = search.work ?? makeWork(shape, data.n, data.columns.length);
  const free = Int32Array.from([...held.keys()].filter(i => Number.isNaN(held[i])));
  const evaluate = search.evaluate ?? {
    value: (x: Float64Array) => valueAt(work, data, x),
    gradientInto: (x: Float64Array, g: Float64Array) => gradientInto(work, data, x, g),
  };
  const problem = makeProblem(search, work, free, evaluate);
  const maximise = (small: Shape): { x: Float64Array; innovations: Float64Array } | null => {
    const own = makeWork(small, data.n, data.columns.length), none = new Float64Array(small.count).fill(NaN);
    const plain: Evaluate = { value: x => valueAt(own, data, x), gradientInto: (x, g) => gradientInto(own, data, x, g) };
    if (small.count === 0) return Number.isFinite(plain.value(none)) ? { x: none, innovations: own.er } : null;
    const found = quasiNewton(makeProblem({ ...search, shape: small, held: none }, own, Int32Array.from(none.keys()), plain), hannanRissanen(small, search.bridged), 1e-3, 2 * SCOUT);
    return Number.isFinite(plain.value(found.x)) ? { x: found.x, innovations: own.er } : null;
  };
  if (free.length === 0) {
    const x = Float64Array.from(held);
    return { x, value: evaluate.value(x), converged: true, passes: 1, hessian: new Float64Array(0), free };
  }
  let best: Minimum | null = null, passes = 0;
  const run = (x: Float64Array, tolerance = TOLERANCE, rounds?: number): Minimum => {
    const found = quasiNewton(problem, pick(inside(shape, withHeld(x, held), held), free), tolerance, rounds);
    passes += found.passes;
    return found;
  };
  const keep = (found: Minimum) => { if (Number.isFinite(found.value) && (best === null || found.value < best.value)) best = found; };
  keep(run(search.near ?? hannanRissanen(shape, search.bridged)));
  if (best === null) keep(run(new Float64Array(shape.count)));
  if (!search.near && search.starts !== "one" && best !== null) {
    const at = full(best, free, held);
    for (const x of otherStarts(search, at, suspicious(shape, at, data.n), maximise)) {
      // A few steps show whether a start leads anywhere new; only then is it followed to its end.
      const first = run(x, 1e-3, SCOUT);
      const rival = best as Minimum;
      if (first.value < rival.value + 3 && apart(first, rival)) keep(run(full(first, free, held), TOLERANCE, shape.count > 6 ? LATER : undefined));
    }
  }
  if (best === null) return { x: withHeld(new Float64Array(shape.count), held), value: Infinity, converged: false, passes, hessian: new Float64Array(free.length ** 2), free };
  const found = best as Minimum;
  return { x: invertible(shape, full(found, free, held), held), value: found.value, converged: found.converged, passes, hessian: found.hessian, free };
}

/** Predicted gain in log-likelihood below which a search stops: far below the 1e-6 that anyone could notice. */
const TOLERANCE = 1e-9;

/** Most steps for a later start of a large model that looked promising: on a ridge between maxima more would not be noticed. */
const LATER = 60;

/** Steps given to a start before it is compared with the best so far. */
const SCOUT = 8;

/** Whether two points are more than a hundredth of a standard error apart, by the search's own curvature. */
function apart(a: Minimum, b: Minimum): boolean {
  const k = a.x.length;
  let sum = 0;
  for (let i = 0; i < k; i++) for (let j = 0; j < k; j++) sum += (a.x[i] - b.x[i]) * b.hessian[i * k + j] * (a.x[j] - b.x[j]);
  return !(Math.abs(sum) < 0.01);
}

function withHeld(x: Float64Array, held: Float64Array): Float64Array {
  return Float64Array.from(held, (v, i) => Number.isNaN(v) ? x[i] : v);
}

function pick(x: Float64Array, free: Int32Array): Float64Array { return Float64Array.from(free, i => x[i]); }

function full(found: Minimum, free: Int32Array, held: Float64Array): Float64Array {
  const x = Float64Array.from(held);
  free.forEach((at, i) => { x[at] = found.x[i]; });
  return x;
}

/** The moving-average side's reflection into the region, where the search ended a little outside. */
function invertible(shape: Shape, x: Float64Array, held: Float64Array): Float64Array {
  for (const f of factors(shape)) {
    const c = x.subarray(f.from, f.from + f.lags.length);
    if (f.sign > 0 || f.lags.length === 0 || f.lags.some((_, i) => !Number.isNaN(held[f.from + i])) || isStable(f.lags, c, f.sign, true)) continue;
    c.set(reflected(c));
  }
  return x;
}

/** Held coefficients may make a start unstable: the free ones give way. */
function inside(shape: Shape, x: Float64Array, held: Float64Array): Float64Array {
  for (const f of factors(shape)) {
    for (let tries = 0; tries < 60 && !isStable(f.lags, x.subarray(f.from, f.from + f.lags.length), f.sign, f.sign < 0); tries++) {
      for (let i = 0; i < f.lags.length; i++) if (Number.isNaN(held[f.from + i])) x[f.from + i] *= 0.9;
    }
  }
  return x;
}

function makeProblem(search: Search, work: Work, free: Int32Array, evaluate: Evaluate): Problem {
  const { shape, held } = search;
  const parts = factors(shape);
  const x = Float64Array.from(held), gradient = new Float64Array(shape.count);
  const dense = parts.map(f => f.lags.length > 0 && f.lags[f.lags.length - 1] / f.lags[0] === f.lags.length
    && f.lags.every((_, i) => Number.isNaN(held[f.from + i])));
  // A moving average held outside the region is the author's wish (the likelihood is then the filter's).
  const whole = parts.map(f => f.sign < 0 && f.lags.every((_, i) => !Number.isNaN(held[f.from + i])));
  // Across the circle the likelihood goes on smoothly (it is that of the reflection), and so may the search, a little: as far
  // as the recursion's growth costs no digits. Turning back at the edge would cost it the curvature it has learnt.
  const slack = parts.map((f, p) => f.sign < 0 && dense[p] ? Math.min(0.05, 4 * f.lags[0] / search.data.n) : 0);
  return {
    size: free.length,
    value(z) {
      for (let i = 0; i < free.length; i++) x[free[i]] = z[i];
      let mended = false;
      for (let p = 0; p < parts.length; p++) {
        const f = parts[p], c = x.subarray(f.from, f.from + f.lags.length);
        if (whole[p] || isStable(f.lags, c, f.sign, f.sign < 0, slack[p])) continue;
        // Outside: the likelihood of a moving average is that of its reflection, so go on from there; a process that is not
        // stationary has none, and the step is shortened.
        if (f.sign > 0 || !dense[p]) return Infinity;
        c.set(reflected(c));
        if (!isStable(f.lags, c, f.sign, true)) return Infinity;
        mended = true;
      }
      if (mended) for (let i = 0; i < free.length; i++) z[i] = x[free[i]];
      return evaluate.value(x);
    },
    gradientInto(g) {
      evaluate.gradientInto(x, gradient);
      for (let i = 0; i < free.length; i++) g[i] = gradient[free[i]];
    },
    curvatureInto(h) { gaussNewtonInto(h, work, search.data, x, free); },
  };
}

/** The information in the innovations' sensitivities de/dc, from lag sums of two filtered series over a capped stretch. */
export function gaussNewtonInto(h: Float64Array, work: Work, data: Data, x: Float64Array, free: Int32Array): void {
  const { shape } = work;
  const n = Math.min(work.n, 3000);
  const offset = work.n - n;
  const fa = Float64Array.from(work.r.subarray(offset)), fe = Float64Array.from(work.er.subarray(offset));
  divideInto(fa, n, shape.ma.lags, work.b);
  divideInto(fe, n, shape.ma.lags, work.b);
  const ar = shape.ar.lags, ma = shape.ma.lags, k = ar.length + ma.length;
  const cache = new Map<number, number>();
  const sum = (kind: number, lag: number) => {
    const key = kind * 1e6 + lag + 5e5;
    let v = cache.get(key);
    if (v === undefined) {
      v = kind === 0 ? lagDot(fa, fa, n, Math.abs(lag)) : kind === 1 ? lagDot(fe, fe, n, Math.abs(lag)) : lag >= 0 ? lagDot(fa, fe, n, lag) : lagDot(fe, fa, n, -lag);
      cache.set(key, v);
    }
    return v;
  };
  const r = new Float64Array(k * k);
  for (let i = 0; i < k; i++) {
    for (let j = 0; j <= i; j++) {
      const v = i < ar.length ? sum(0, ar[i] - ar[j]) : j >= ar.length ? sum(1, ma[i - ar.length] - ma[j - ar.length])
        // de/da at lag ar_j is fa_{t - ar_j}, de/db at lag ma_i is fe_{t - ma_i}: sum fa_{t - ar_j} fe_{t - ma_i}.
        : sum(2, ma[i - ar.length] - ar[j]);
      r[i * k + j] = r[j * k + i] = v;
    }
  }
  const scale = (work.n / n) / (data.sigma2 ?? work.sum / work.nEffective);
  const jac = productJacobian(shape, x, free);
  for (let a = 0; a < free.length; a++) {
    for (let b = 0; b < free.length; b++) {
      let v = 0;
      for (let i = 0; i < k; i++) {
        if (jac[i * free.length + a] === 0) continue;
        for (let j = 0; j < k; j++) v += jac[i * free.length + a] * r[i * k + j] * jac[j * free.length + b];
      }
      h[a * free.length + b] = v * scale;
    }
  }
}

/** d(product coefficients, both sides) / d(free factor coefficients), rows = product lags of ar then ma. */
export function productJacobian(shape: Shape, x: Float64Array, free: Int32Array): Float64Array {
  const rows = shape.ar.lags.length + shape.ma.lags.length;
  const out = new Float64Array(rows * free.length);
  const side = (p: Product, from: number, base: number) => {
    const plain = p.plain.length, seasonal = p.seasonal.length;
    free.forEach((at, column) => {
      const i = at - from;
      if (i < 0 || i >= plain + seasonal) return;
      const add = (row: number, v: number) => { out[(base + row) * free.length + column] += v; };
      if (i < plain) {
        add(p.atPlain[i], 1);
        for (let j = 0; j < seasonal; j++) add(p.atCross[i * seasonal + j], p.cross * x[from + plain + j]);
      } else {
        const j = i - plain;
        add(p.atSeasonal[j], 1);
        for (let l = 0; l < plain; l++) add(p.atCross[l * seasonal + j], p.cross * x[from + l]);
      }
    });
  };
  side(shape.ar, 0, 0);
  side(shape.ma, shape.ar.plain.length + shape.ar.seasonal.length, shape.ar.lags.length);
  return out;
}

/** Several maxima are likely where a factor lies near the edge of the region, or where the two sides nearly cancel: where the
 *  data hardly tell a pair of factors from none (a chi-square of n d^2 / (1 - b^2), d the inverse roots' distance). */
function suspicious(shape: Shape, x: Float64Array, n: number): { plain: boolean; seasonal: boolean } {
  const parts = factors(shape);
  const near = parts.map(f => edge(f, x));
  const mixed = (i: number) => parts[i].lags.length > 0 && parts[i + 2].lags.length > 0;
  return {
    plain: near[2] < 1.07 || (mixed(0) && (near[0] < 1.01 || pairStatistic(parts[0], parts[2], x, n) < 25)),
    seasonal: near[3] < 1.03 || (mixed(1) && (near[1] < 1.01 || pairStatistic(parts[1], parts[3], x, n) < 25)),
  };
}

function pairStatistic(ar: Factor, ma: Factor, x: Float64Array, n: number): number {
  const a = inverseRoots(denseFactor(ar, x)), b = inverseRoots(denseFactor(ma, x));
  let least = Infinity;
  for (let t = 0; t < b.re.length; t++) {
    const room = Math.max(1e-3, 1 - b.re[t] ** 2 - b.im[t] ** 2);
    for (let s = 0; s < a.re.length; s++) least = Math.min(least, n * ((a.re[s] - b.re[t]) ** 2 + (a.im[s] - b.im[t]) ** 2) / room);
  }
  return least;
}

/** Smallest modulus of a factor's roots, in its own step. */
function edge(f: Factor, x: Float64Array): number {
  if (f.lags.length === 0) return Infinity;
  const z = inverseRoots(denseFactor(f, x));
  let top = 0;
  for (let i = 0; i < z.re.length; i++) top = Math.max(top, Math.hypot(z.re[i], z.im[i]));
  return top > 0 ? 1 / top : Infinity;
}

/** Coefficients of a factor in 1 + c_1 B' + ..., B' its own step (a season for seasonal factors of full lag sets). */
export function denseFactor(f: Factor, x: Float64Array): Float64Array {
  const step = f.lags.length > 0 && f.lags.every(l => l % f.lags[0] === 0) ? f.lags[0] : 1;
  const c = new Float64Array(f.lags.length > 0 ? f.lags[f.lags.length - 1] / step : 0);
  f.lags.forEach((lag, i) => { c[lag / step - 1] = -f.sign * x[f.from + i]; });
  return c;
}
