// The maximum of the likelihood over the ARMA coefficients: starts, search, and the choice among several maxima.

import { gradientInto } from "./gradient.ts";
import { valueAt } from "./likelihood.ts";
import { makeWork, type Work } from "./work.ts";
import { inverseRoots, reflected } from "./roots.ts";
import { isStable, movedInside, nearestRoot } from "./region.ts";
import { denseFactor, type Factor, type Shape } from "./shape.ts";
import { gaussNewtonInto } from "./gaussNewton.ts";
import type { Estimate, Evaluate, Search } from "./search.ts";
import { otherStarts, type Maximise } from "./otherStarts.ts";
import { hannanRissanen } from "./start.ts";
import { quasiNewton, type Minimum, type Problem } from "../optimize/quasiNewton.ts";

/** Maximises the exact likelihood. Cost: a start by regression and usually 4 to 10 passes; more starts where several maxima are likely. */
export function estimate(search: Search): Estimate {
  const { shape, data, held } = search;
  const work = search.work ?? makeWork(shape, data);
  const free = freeOf(held);
  const evaluate = search.evaluate ?? {
    value: (x: Float64Array) => valueAt(work, data, x),
    gradientInto: (x: Float64Array, g: Float64Array) => gradientInto(work, data, x, g),
  };
  const problem = makeProblem(search, work, free, evaluate), startOf = hannanRissanen(search.bridged);
  const maximise: Maximise = (small, rounds = 2 * SCOUT) => {
    const own = makeWork(small, data), none = new Float64Array(small.count).fill(NaN);
    const plain: Evaluate = { value: x => valueAt(own, data, x), gradientInto: (x, g) => gradientInto(own, data, x, g) };
    const known = search.smaller?.of(small);
    if (known) none.set(known);
    if (small.count === 0 || known) return Number.isFinite(plain.value(none)) ? { x: none, innovations: own.er, value: own.f, sigma2: own.sigma2 } : null;
    const found = quasiNewton(makeProblem({ ...search, shape: small, held: none }, own, Int32Array.from(none.keys()), plain), startOf(small), 1e-3, rounds);
    return Number.isFinite(plain.value(found.x)) ? { x: found.x, innovations: own.er, value: own.f, sigma2: own.sigma2 } : null;
  };
  if (free.length === 0) {
    const x = held.slice();
    return { x, value: evaluate.value(x), converged: true, passes: 1, hessian: new Float64Array(0), free };
  }
  let best: Minimum | null = null, passes = 0;
  const go = (from: Float64Array | Minimum, tolerance: number, rounds?: number): Minimum => {
    const found = quasiNewton(problem, from, tolerance, rounds);
    passes += found.passes;
    return found;
  };
  const run = (x: Float64Array, tolerance = TOLERANCE, rounds?: number) => go(pick(movedInside(shape, withHeld(x, held), held), free), tolerance, rounds);
  // On a ridge between maxima a search may crawl: it is left when at this pace it would not come as high as the best in four more bursts.
  const follow = (first: Minimum, rival: number, most: number): Minimum => {
    let at = first;
    for (let rounds = 0; rounds < most; rounds += BURST) {
      const before = at.value;
      at = go(at, TOLERANCE, BURST);
      if (at.converged) break;
      if (at.value > rival && before - at.value < (at.value - rival) / 4) break;
    }
    return at;
  };
  const keep = (found: Minimum) => { if (Number.isFinite(found.value) && (best === null || found.value < best.value)) best = found; };
  const stretch = search.near ? null : onStretch(search);
  keep(run(search.near ?? acrossGaps(search) ?? stretch ?? startOf(shape)));
  if (best === null) keep(run(new Float64Array(shape.count)));
  if (search.smaller && best !== null) {
    // A model is never worse than one that it contains.
    const x = search.smaller.within(shape), least = (best as Minimum).value;
    if (x !== null && evaluate.value(x) < least - TOLERANCE) keep(run(x));
  }
  if (!search.near && search.starts !== "one" && best !== null) {
    const at = full(best, free, held);
    const others = search.evaluate ? [startOf(shape), new Float64Array(shape.count)] : otherStarts(search, at, (best as Minimum).value, { ...suspicious(shape, at, data.n), hope: stretch === null }, maximise);
    for (const x of others) {
      // A few steps show whether a start leads anywhere new; only then is it followed to its end.
      const first = run(x, 1e-3, SCOUT);
      const rival = best as Minimum;
      if (first.value < rival.value + (search.evaluate ? 20 : 3) && apart(first, rival)) keep(follow(first, rival.value, shape.count > 6 ? LATER : MOST));
    }
  }
  if (best === null) return { x: withHeld(new Float64Array(shape.count), held), value: Infinity, converged: false, passes, hessian: new Float64Array(free.length ** 2), free };
  const found = best as Minimum;
  return { x: invertible(shape, full(found, free, held), held), value: found.value, converged: found.converged, passes, hessian: found.hessian, free };
}

/** With many gaps a pass costs much, so the places are sorted out on the series with its gaps bridged: its best is the start. */
function acrossGaps(search: Search): Float64Array | null {
  if (!search.evaluate) return null;
  const { x, value } = estimate({ ...search, evaluate: undefined, work: undefined });
  return Number.isFinite(value) ? x : null;
}

/** A long series is searched on its last stretch first, from all starts: a pass there costs a fraction of one over the whole,
 *  which then begins within a few standard errors of its maximum. */
function onStretch(search: Search): Float64Array | null {
  const { data, shape, bridged } = search, n = Math.max(STRETCH, data.n >> 4), meanAlone = data.columns.length === (data.constant ? 1 : 0);
  if (data.n < LONG || search.evaluate || !meanAlone || 50 * shape.memory > n) return null;
  const last = (x: Float64Array) => x.subarray(x.length - n);
  const { x, value } = estimate({ ...search, data: { ...data, n, y: last(data.y), columns: data.columns.map(last) }, bridged: last(bridged), work: undefined });
  return Number.isFinite(value) ? x : null;
}

/** From this length on a series is long, and this much of it is the least stretch. */
const LONG = 10_000;
const STRETCH = 3000;

/** Predicted gain in log-likelihood below which a search stops: far below the 1e-6 that anyone could notice. */
const TOLERANCE = 1e-9;

/** Most steps for a later start of a large model that looked promising: on a ridge between maxima more would not be noticed. */
const LATER = 60;

/** Most steps of any other, and steps between two looks at its progress. */
const MOST = 150, BURST = 10;

/** Steps given to a start before it is compared with the best so far. */
const SCOUT = 8;

/** Whether two points are more than a hundredth of a standard error apart, by the search's own curvature. */
function apart(a: Minimum, b: Minimum): boolean {
  const k = a.x.length;
  let sum = 0;
  for (let i = 0; i < k; i++) for (let j = 0; j < k; j++) sum += (a.x[i] - b.x[i]) * b.hessian[i * k + j] * (a.x[j] - b.x[j]);
  return !(Math.abs(sum) < 0.01);
}

/** Positions of the coefficients that are not held. */
function freeOf(held: Float64Array): Int32Array {
  const out = new Int32Array(held.length);
  let count = 0;
  for (let i = 0; i < held.length; i++) if (Number.isNaN(held[i])) out[count++] = i;
  return out.subarray(0, count);
}

function withHeld(x: Float64Array, held: Float64Array): Float64Array {
  const out = held.slice();
  for (let i = 0; i < out.length; i++) if (Number.isNaN(out[i])) out[i] = x[i];
  return out;
}

function pick(x: Float64Array, free: Int32Array): Float64Array {
  const out = new Float64Array(free.length);
  for (let i = 0; i < free.length; i++) out[i] = x[free[i]];
  return out;
}

function full(found: Minimum, free: Int32Array, held: Float64Array): Float64Array {
  const x = held.slice();
  for (let i = 0; i < free.length; i++) x[free[i]] = found.x[i];
  return x;
}

/** The moving-average side's reflection into the region, where the search ended a little outside. */
function invertible(shape: Shape, x: Float64Array, held: Float64Array): Float64Array {
  for (const f of shape.factors) {
    const c = x.subarray(f.from, f.from + f.lags.length);
    if (f.sign > 0 || f.lags.length === 0 || f.lags.some((_, i) => !Number.isNaN(held[f.from + i])) || isStable(f.lags, c, f.sign, true)) continue;
    c.set(reflected(c));
  }
  return x;
}

function makeProblem(search: Search, work: Work, free: Int32Array, evaluate: Evaluate): Problem {
  const { shape, held } = search;
  const parts = shape.factors;
  const x = held.slice(), gradient = new Float64Array(shape.count), views = parts.map(f => x.subarray(f.from, f.from + f.lags.length));
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
        const f = parts[p], c = views[p];
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

/** Several maxima are likely where a factor lies near the edge of the region, or where the two sides nearly cancel: where the
 *  data hardly tell a pair of factors from none (a chi-square of n d^2 / (1 - b^2), d the inverse roots' distance). */
function suspicious(shape: Shape, x: Float64Array, n: number): { plain: boolean; seasonal: boolean } {
  const parts = shape.factors;
  const near = (i: number) => nearestRoot(parts[i], x);
  const mixed = (i: number) => parts[i].lags.length > 0 && parts[i + 2].lags.length > 0;
  return {
    plain: near(2) < 1.07 || (mixed(0) && (near(0) < 1.01 || pairStatistic(parts[0], parts[2], x, n) < 25)),
    seasonal: near(3) < 1.03 || (mixed(1) && (near(1) < 1.01 || pairStatistic(parts[1], parts[3], x, n) < 25)),
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
