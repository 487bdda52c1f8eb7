// The maximum of the likelihood over the ARMA coefficients: starts, search, and the choice among several maxima.

import { gradientInto } from "./gradient.ts";
import { valueAt } from "./likelihood.ts";
import { makeWork } from "./work.ts";
import { reflected } from "./roots.ts";
import { isStable, movedInside } from "./region.ts";
import { makeProblem } from "./problem.ts";
import type { Shape } from "./shape.ts";
import { suspicious } from "./suspicious.ts";
import type { Estimate, Evaluate, Search } from "./search.ts";
import { otherStarts, type Maximise } from "./otherStarts.ts";
import { hannanRissanen } from "./start.ts";
import { newtonStep, quasiNewton, type Minimum } from "../optimize/quasiNewton.ts";

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
    const own = makeWork(small, data, work), none = new Float64Array(small.count).fill(NaN);
    const plain: Evaluate = { value: x => valueAt(own, data, x), gradientInto: (x, g) => gradientInto(own, data, x, g) };
    const known = search.smaller?.of(small);
    if (known) none.set(known);
    if (small.count === 0 || known) return Number.isFinite(plain.value(none)) ? { x: none, innovations: own.er, value: own.f, sigma2: own.sigma2 } : null;
    const found = quasiNewton(makeProblem({ ...search, shape: small, held: none }, own, Int32Array.from(none.keys()), plain), startOf(small), 1e-3, rounds);
    // Mostly the last point that was asked for is the one that was found.
    return Number.isFinite(own.f === found.value ? own.f : plain.value(found.x)) ? { x: found.x, innovations: own.er, value: own.f, sigma2: own.sigma2 } : null;
  };
  if (free.length === 0) {
    const x = held.slice();
    return { x, value: evaluate.value(x), converged: true, passes: 1, hessian: new Float64Array(0), free };
  }
  let passes = 0;
  const go = (from: Float64Array | Minimum, tolerance: number, rounds?: number): Minimum => {
    const found = quasiNewton(problem, from, tolerance, rounds);
    passes += found.passes;
    return found;
  };
  const run = (x: Float64Array, tolerance = TOLERANCE, rounds?: number) => go(pick(movedInside(shape, withHeld(x, held), held), free), tolerance, rounds);
  // Left when at its pace it would not come as high as the best in four more bursts, or when it is on its way there.
  const follow = (first: Minimum, rival: Minimum | null, most: number): Minimum => {
    let at = first;
    for (let rounds = 0; rounds < most && !(at.converged && at !== first); rounds += BURST) {
      if (rival !== null && at.value >= rival.value && !promising(at, rival)) break;
      const before = at.value;
      at = go(at, TOLERANCE, BURST);
      if (rival !== null && at.value > rival.value && before - at.value < (at.value - rival.value) / 4) break;
    }
    return at;
  };
  const stretch = search.near ? null : onStretch(search);
  const alone = search.near !== undefined || search.starts === "one";
  let first = run(search.near ?? acrossGaps(search) ?? stretch ?? startOf(shape), TOLERANCE, alone ? undefined : PATIENCE);
  if (!Number.isFinite(first.value)) first = run(new Float64Array(shape.count));
  // A few steps show whether a start leads anywhere new; only then is it followed to its end, the highest first.
  const scouts: Minimum[] = [];
  const scout = (x: Float64Array) => { const found = run(x, 1e-3, SCOUT); if (Number.isFinite(found.value)) scouts.push(found); };
  if (!Number.isFinite(first.value)) return { x: withHeld(new Float64Array(shape.count), held), value: Infinity, converged: false, passes, hessian: new Float64Array(free.length ** 2), free };
  // A model is never worse than one that it contains.
  const within = search.smaller?.within(shape) ?? null;
  if (within !== null && evaluate.value(within) < first.value - TOLERANCE) scout(within);
  if (!alone) {
    const at = full(first.x, free, held), doubt = suspicious(shape, at, data.n);
    const others = search.evaluate ? [startOf(shape), new Float64Array(shape.count)] : otherStarts(search, at, first.value, { ...doubt, plain: doubt.plain || !first.converged, hope: stretch === null }, maximise);
    for (const x of others) scout(x);
    if (!first.converged) scouts.push(first);
  }
  let best = first.converged || alone ? first : null;
  for (const s of scouts.sort((a, b) => a.value - b.value)) {
    if (best !== null && !(s.value < best.value + (search.evaluate ? 20 : 3))) break;
    const found = follow(s, best, best !== null && shape.count > 6 ? LATER : MOST);
    if (best === null || found.value < best.value) best = found;
  }
  const { x, value, converged, hessian } = best ?? first;
  return { x: invertible(shape, full(x, free, held), held), value, converged, passes, hessian, free };
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

/** Steps given to the first start before others are looked at. */
const PATIENCE = 16;

/** Steps given to a start before it is compared with the best so far. */
const SCOUT = 8;

/** Whether a search may yet end higher than another did: not where its curvature promises too little by far, nor where the next
 *  step leads to where the other ended, by its curvature: closer than would change the log-likelihood by a twentieth. */
function promising(at: Minimum, rival: Minimum): boolean {
  const d = newtonStep(at), k = d.length;
  let decrease = 0, sum = 0;
  for (let i = 0; i < k; i++) decrease -= d[i] * at.gradient[i] / 2;
  if (at.value - FAR * decrease > rival.value) return false;
  for (let i = 0; i < k; i++) for (let j = 0; j < k; j++) sum += (at.x[i] + d[i] - rival.x[i]) * rival.hessian[i * k + j] * (at.x[j] + d[j] - rival.x[j]);
  return !(Math.abs(sum) < NEAR);
}

/** A curvature learnt on a ridge may promise many times too little: with 8, four of 468 orders end 0.5 to 2.1 lower. */
const FAR = 30, NEAR = 0.1;

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

function full(z: Float64Array, free: Int32Array, held: Float64Array): Float64Array {
  const x = held.slice();
  for (let i = 0; i < free.length; i++) x[free[i]] = z[i];
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
