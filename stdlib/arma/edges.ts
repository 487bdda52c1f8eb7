// Where an estimate lies on the edge of the region, and what that leaves of the standard errors.

import { inversePositive } from "../linear/cholesky.ts";
import { BOUNDARY } from "./flags.ts";
import type { Prepared } from "./prepare.ts";
import { nearestRoot } from "./region.ts";
import { inverseRoots } from "./roots.ts";
import { denseFactor, type Factor } from "./shape.ts";

export interface Edges {
  /** "stationarity": nothing has a standard error; "invertibility": the factors concerned have none. */
  readonly side: "none" | "stationarity" | "invertibility";
  /** Rows over the free coefficients: the directions that would move a root off the circle. */
  readonly directions: readonly Float64Array[];
  /** Positions, among the free coefficients, of those without a standard error. */
  readonly without: readonly number[];
}

/** Estimated factors with a root on the unit circle.
 *  A moving-average root there is estimated with an error of order 1/n (Davis & Dunsmuir 1996), not 1/sqrt(n): seen from the
 *  other estimates it is known, so their standard errors are those with the root held. */
export function edgesOf(p: Prepared, x: Float64Array, free: Int32Array): Edges {
  const directions: Float64Array[] = [], without: number[] = [];
  for (const f of p.shape.factors) {
    const own = [...free.keys()].filter(i => free[i] >= f.from && free[i] < f.from + f.lags.length);
    if (own.length === 0 || nearestRoot(f, x) >= BOUNDARY) continue;
    if (f.sign > 0) return { side: "stationarity", directions: [], without: [...free.keys()] };
    without.push(...own);
    directions.push(...rootDirections(f, x, free));
  }
  return { side: without.length > 0 ? "invertibility" : "none", directions, without };
}

/** 1 + sum c_j z^-lag_j = 0 at an inverse root z on the circle: its derivative by c_j, real and imaginary part. */
function rootDirections(f: Factor, x: Float64Array, free: Int32Array): Float64Array[] {
  const z = inverseRoots(denseFactor(f, x)), step = f.lags.every(l => l % f.lags[0] === 0) ? f.lags[0] : 1;
  const out: Float64Array[] = [];
  for (let r = 0; r < z.re.length; r++) {
    if (Math.hypot(z.re[r], z.im[r]) < 1 / BOUNDARY || z.im[r] < 0) continue;
    const angle = Math.atan2(z.im[r], z.re[r]);
    for (const part of z.im[r] === 0 ? [Math.cos] : [Math.cos, Math.sin]) {
      out.push(Float64Array.from(free, at => at >= f.from && at < f.from + f.lags.length ? part(angle * f.lags[at - f.from] / step) : 0));
    }
  }
  return out;
}

/** Z (Z' H Z)^-1 Z' with Z a basis of what is orthogonal to the directions: the inverse of the curvature with these held.
 *  @returns null where the curvature is singular in what is left */
export function inverseBeside(hessian: Float64Array, k: number, directions: readonly Float64Array[]): Float64Array | null {
  if (directions.length === 0) return k === 0 ? new Float64Array(0) : inversePositive(hessian, k);
  const axes: Float64Array[] = [];
  const add = (v: Float64Array): boolean => {
    const u = Float64Array.from(v);
    for (let round = 0; round < 2; round++) for (const a of axes) { const share = product(u, a); for (let i = 0; i < k; i++) u[i] -= share * a[i]; }
    const size = Math.sqrt(product(u, u));
    if (size < 1e-8) return false;
    axes.push(u.map(c => c / size));
    return true;
  };
  directions.forEach(add);
  const held = axes.length;
  for (let i = 0; i < k; i++) { const unit = new Float64Array(k); unit[i] = 1; add(unit); }
  const z = axes.slice(held), m = z.length, inner = new Float64Array(m * m), out = new Float64Array(k * k);
  for (let a = 0; a < m; a++) for (let b = 0; b < m; b++) for (let i = 0; i < k; i++) for (let j = 0; j < k; j++) inner[a * m + b] += z[a][i] * hessian[i * k + j] * z[b][j];
  const inverse = m === 0 ? inner : inversePositive(inner, m);
  if (inverse === null) return null;
  for (let a = 0; a < m; a++) for (let b = 0; b < m; b++) for (let i = 0; i < k; i++) for (let j = 0; j < k; j++) out[i * k + j] += z[a][i] * inverse[a * m + b] * z[b][j];
  return out;
}

function product(a: Float64Array, b: Float64Array): number { let sum = 0; for (let i = 0; i < a.length; i++) sum += a[i] * b[i]; return sum; }
