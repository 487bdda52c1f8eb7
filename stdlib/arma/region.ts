// Is a factor's polynomial stationary (or invertible), and if not, how to get back inside.

import { stepDownInto } from "./presample.ts";
import { inverseRoots } from "./roots.ts";
import { denseFactor, type Factor, type Shape } from "./shape.ts";

/** Whether 1 - sum c_i B^lag_i has all roots outside the unit circle (on it too when `closed`). Lags ascending.
 *  @param slack  inverse roots up to 1 + slack (in the lags' common step) pass too */
export function isStable(lags: ArrayLike<number>, c: ArrayLike<number>, sign: 1 | -1, closed = false, slack = 0): boolean {
  return stabilityTest(lags, sign, closed, slack)(c);
}

/** The same question for one set of lags, asked many times: its arrays are made once, when first needed. */
export function stabilityTest(lags: ArrayLike<number>, sign: 1 | -1, closed: boolean, slack: number): (c: ArrayLike<number>) => boolean {
  const count = lags.length;
  let a: Float64Array | null = null, orders: Float64Array | null = null, step = 0;
  return c => {
    if (count === 0) return true;
    let total = 0;
    for (let i = 0; i < count; i++) total += Math.abs(c[i]);
    if (total < 1) return true;
    if (count === 1) return Math.abs(c[0]) < 1 || (closed && Math.abs(c[0]) <= 1 + slack);
    // On the circle the step-down ends in a partial autocorrelation of exactly 1: a hair's shrinking decides "closed".
    const shrink = closed ? (1 - 1e-12) / (1 + slack) : 1;
    if (count === 2 && lags[0] === 1 && lags[1] === 2) {
      // The triangle of the second order; on its edges when closed.
      const c1 = sign * c[0] * shrink, c2 = sign * c[1] * shrink * shrink;
      return Math.abs(c2) < 1 && Math.abs(c1) < 1 - c2;
    }
    // Common step: lags 12 and 24 are a polynomial of degree 2 in B^12.
    if (a === null || orders === null) {
      for (let i = 0; i < count; i++) step = gcd(step, lags[i]);
      const p = lags[count - 1] / step;
      a = new Float64Array(p + 1);
      orders = new Float64Array(p * (p + 1) / 2);
    }
    for (let i = 0; i < count; i++) a[lags[i] / step] = sign * c[i];
    let r = 1;
    if (closed) for (let i = 1; i < a.length; i++) { r *= shrink; a[i] *= r; }
    return stepDownInto(orders, a, a.length - 1);
  };
}

function gcd(a: number, b: number): number { return b === 0 ? a : gcd(b, a % b); }

/** Multiplies every root's modulus so that the polynomial becomes stable with a margin: c_i -> c_i r^lag_i. */
export function shrinkInto(lags: ArrayLike<number>, c: Float64Array, sign: 1 | -1, margin = 0.98): void {
  for (let tries = 0; tries < 60; tries++) {
    if (isStable(lags, c, sign)) {
      if (tries === 0) return;
      for (let i = 0; i < lags.length; i++) c[i] *= margin ** (lags[i] / lags[0]);
      return;
    }
    for (let i = 0; i < lags.length; i++) c[i] *= 0.95 ** (lags[i] / lags[0]);
  }
  c.fill(0);
}

/** Smallest modulus of a factor's roots, in its own step; Infinity for none. */
export function nearestRoot(f: Factor, x: Float64Array): number {
  if (f.lags.length === 0) return Infinity;
  // Asked several times a fit: the common small factors in closed form, without arrays.
  if (f.lags.length === 1) return 1 / Math.abs(x[f.from]);
  if (f.lags.length === 2 && f.lags[1] === 2 * f.lags[0]) {
    const half = Math.abs(x[f.from]) / 2, disc = half * half + f.sign * x[f.from + 1];
    return 1 / (disc < 0 ? Math.hypot(half, Math.sqrt(-disc)) : half + Math.sqrt(disc));
  }
  const z = inverseRoots(denseFactor(f, x));
  let top = 0;
  for (let i = 0; i < z.re.length; i++) top = Math.max(top, Math.hypot(z.re[i], z.im[i]));
  return top > 0 ? 1 / top : Infinity;
}

/** Held coefficients may make a start unstable: the free ones give way, or where nearer zero is no help, go where the roots are
 *  farthest out. Changes and returns x; it may stay outside when the held ones leave no place inside.
 *  @param held  NaN where free */
export function movedInside(shape: Shape, x: Float64Array, held: Float64Array): Float64Array {
  for (const f of shape.factors) {
    const c = x.subarray(f.from, f.from + f.lags.length), own = [...f.lags.keys()].filter(i => Number.isNaN(held[f.from + i]));
    const stable = () => isStable(f.lags, c, f.sign, f.sign < 0);
    for (let tries = 0; tries < 60 && !stable(); tries++) for (const i of own) c[i] *= 0.9;
    if (!stable()) moveRootsOut(f, x, own, stable);
  }
  return x;
}

/** Steps along each free coefficient of a factor that put its nearest root farther out, halved when none does. */
function moveRootsOut(f: Factor, x: Float64Array, own: readonly number[], done: () => boolean): void {
  let best = nearestRoot(f, x);
  for (let step = 0.4; step > 1e-3 && !done();) {
    let moved = false;
    for (const i of own) for (const by of [step, -step]) {
      x[f.from + i] += by;
      const modulus = nearestRoot(f, x);
      if (modulus > best) { best = modulus; moved = true; } else x[f.from + i] -= by;
    }
    if (!moved) step /= 2;
  }
}
