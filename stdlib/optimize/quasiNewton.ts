// Minimisation of a smooth function of a few variables with gradients, inside a region known only by asking.

import { choleskyInto, choleskySolveInto } from "../linear/cholesky.ts";

export interface Problem {
  readonly size: number;
  /** Value at x; Infinity outside the region. May mend x in place (to a point of equal value inside) and then returns the value there. */
  value(x: Float64Array): number;
  /** Gradient at the last point that `value` was asked for. */
  gradientInto(g: Float64Array): void;
  /** A first positive definite guess of the second derivatives at the last point asked for, size x size. */
  curvatureInto(h: Float64Array): void;
}

export interface Minimum {
  readonly x: Float64Array;
  readonly value: number;
  readonly gradient: Float64Array;
  readonly hessian: Float64Array;
  /** Values asked for. */
  readonly passes: number;
  readonly converged: boolean;
}

/** BFGS on the Hessian with Powell's damping, started from a curvature the caller knows (Gauss-Newton, say).
 *  Steps that leave the region or do not lower the value enough are shortened.
 *  @param start      a point, or where an earlier search of the same problem stopped: it goes on from there with what it has learnt
 *  @param tolerance  stop when the predicted decrease, in units of the value, is below it
 *  Sources: Nocedal & Wright (2006), procedure 18.2 (damping) and algorithm 3.1 (backtracking, with a quadratic through the slope). */
export function quasiNewton(problem: Problem, start: Float64Array | Minimum, tolerance = 1e-10, rounds = 150): Minimum {
  const k = problem.size, from = start instanceof Float64Array ? null : start;
  let x = Float64Array.from(from?.x ?? (start as Float64Array));
  let f = from ? from.value : problem.value(x), passes = from ? 0 : 1;
  const g = from ? Float64Array.from(from.gradient) : new Float64Array(k), h = from ? Float64Array.from(from.hessian) : new Float64Array(k * k);
  if (!Number.isFinite(f)) return { x, value: f, gradient: g, hessian: h, passes, converged: false };
  if (!from) {
    problem.gradientInto(g);
    problem.curvatureInto(h);
  }
  let trial = new Float64Array(k);
  const factor = new Float64Array(k * k), d = new Float64Array(k), gNew = new Float64Array(k), s = new Float64Array(k), y = new Float64Array(k), hs = new Float64Array(k);
  let converged = false, stalled = 0;
  for (let round = 0; round < rounds; round++) {
    directionInto(d, h, g, factor, k);
    let slope = 0;
    for (let i = 0; i < k; i++) slope += d[i] * g[i];
    if (-slope / 2 < tolerance) { converged = true; break; }
    // Along a ridge the curvature says little, and a full step would leave by far the part that it describes.
    let longest = 0;
    for (let i = 0; i < k; i++) longest = Math.max(longest, Math.abs(d[i]));
    let step = Math.min(1, LONGEST / longest), fNew = Infinity, mended = false, tries = 0;
    for (; tries < 40; tries++) {
      for (let i = 0; i < k; i++) trial[i] = x[i] + step * d[i];
      fNew = problem.value(trial);
      passes++;
      mended = false;
      for (let i = 0; i < k; i++) if (trial[i] !== x[i] + step * d[i]) mended = true;
      if (fNew <= f + 1e-4 * step * slope) break;
      if (fNew <= f && -step * slope < 1e-9 * (1 + Math.abs(f))) break;
      const curve = 2 * (fNew - f - step * slope);
      const guess = Number.isFinite(fNew) && curve > 0 ? -slope * step * step / curve : 0;
      step = Math.min(0.5 * step, Math.max(0.1 * step, guess));
    }
    if (!(fNew < f) || tries === 40) {
      // No descent left along this direction: try once more with fresh curvature, then accept what rounding allows.
      problem.value(Float64Array.from(x));
      passes++;
      converged = -slope / 2 < 1e-7 * (1 + Math.abs(f) * 1e-3);
      if (stalled++ > 0 || converged) break;
      problem.gradientInto(g);
      problem.curvatureInto(h);
      continue;
    }
    problem.gradientInto(gNew);
    for (let i = 0; i < k; i++) { s[i] = trial[i] - x[i]; y[i] = gNew[i] - g[i]; }
    if (mended) problem.curvatureInto(h); else updateInto(h, s, y, hs, k);
    [x, trial] = [trial, x];
    f = fNew;
    g.set(gNew);
    stalled = 0;
  }
  return { x, value: f, gradient: g, hessian: h, passes, converged };
}

/** Largest change of a variable in one step; the variables here are of the order of one. */
const LONGEST = 0.5;

/** The step to where the curvature that a search has learnt puts the minimum. */
export function newtonStep(at: Minimum): Float64Array {
  const k = at.x.length, d = new Float64Array(k);
  directionInto(d, Float64Array.from(at.hessian), at.gradient, new Float64Array(k * k), k);
  return d;
}

/** d = -h^-1 g, with as little of the identity added to h as makes it positive definite. */
function directionInto(d: Float64Array, h: Float64Array, g: Float64Array, factor: Float64Array, k: number): void {
  let top = 0, finite = true;
  for (let i = 0; i < k; i++) top = Math.max(top, Math.abs(h[i * k + i]));
  for (let i = 0; i < k * k; i++) if (!Number.isFinite(h[i])) finite = false;
  if (!finite) {
    // Curvature that overflowed says nothing: go straight down.
    h.fill(0);
    for (let i = 0; i < k; i++) h[i * k + i] = top = 1;
  }
  for (let ridge = 0; ; ridge = ridge === 0 ? 1e-10 * (top || 1) : ridge * 100) {
    factor.set(h);
    for (let i = 0; i < k; i++) factor[i * k + i] += ridge;
    if (choleskyInto(factor, k) < 0 || ridge > 1e6 * (top || 1)) break;
  }
  for (let i = 0; i < k; i++) d[i] = -g[i];
  choleskySolveInto(factor, k, d);
}

function updateInto(h: Float64Array, s: Float64Array, y: Float64Array, hs: Float64Array, k: number): void {
  let shs = 0, sy = 0;
  for (let i = 0; i < k; i++) {
    let sum = 0;
    for (let j = 0; j < k; j++) sum += h[i * k + j] * s[j];
    hs[i] = sum;
    shs += s[i] * sum;
    sy += s[i] * y[i];
  }
  if (!(shs > 0)) return;
  const damp = sy >= 0.2 * shs ? 1 : 0.8 * shs / (shs - sy);
  let sr = 0;
  for (let i = 0; i < k; i++) { y[i] = damp * y[i] + (1 - damp) * hs[i]; sr += s[i] * y[i]; }
  if (!(sr > 0)) return;
  for (let i = 0; i < k; i++) for (let j = 0; j < k; j++) h[i * k + j] += y[i] * y[j] / sr - hs[i] * hs[j] / shs;
}
