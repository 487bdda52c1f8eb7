// Innovations of one series: the recursion from a past of zeros, then the correction for what the past may have been.

import { posteriorInto } from "./gain.ts";
import { divideBackInto, divideInto, lagDot, smallForwardInto, subtractLagged, subtractLagsInto, total } from "./kernels.ts";
import { scratch, type Work } from "./work.ts";

/** a0 = theta(B)^-1 phi(B) x from zero pre-sample values; returns the sum of its values from `from` on. */
export function recursionInto(a0: Float64Array, x: Float64Array, work: Work, from: number): number {
  const { n, shape, a, b } = work;
  if (work.small) return smallForwardInto(a0, x, n, a.length > 0 ? a[0] : 0, a.length > 1 ? a[1] : 0, b[0], b.length > 1 ? b[1] : 0, from);
  subtractLagsInto(a0, x, n, shape.ar.lags, a);
  divideInto(a0, n, shape.ma.lags, b);
  return total(a0, from, n);
}

/** Up to this memory, V is applied column by column: its columns are shifts of one response, and no recursion has to wait for itself. */
const SHORT = 6;

/** e = a0 - V K V'a0 in place; returns the past's own sum of squares. Only the first values change where 1/theta dies out. */
export function correctInto(e: Float64Array, work: Work): number {
  const { n, g, u, v, response, shape, b } = work, { h, length } = response;
  if (g === 0) return 0;
  if (g <= SHORT) {
    for (let i = 0; i < g; i++) v[i] = lagDot(e, h, Math.min(n, length + i), i);
    const squares = posteriorInto(u, v, work);
    for (let i = 0; i < g; i++) subtractLagged(e, h, u[i], i, Math.min(n, length + i));
    return squares;
  }
  const lags = shape.ma.lags, reach = Math.min(n, g + length), delta = scratch(work, reach);
  for (let t = 0; t < reach; t++) delta[t] = e[t];
  divideBackInto(delta, reach, lags, b);
  for (let i = 0; i < g; i++) v[i] = delta[i];
  const squares = posteriorInto(u, v, work);
  for (let i = 0; i < g; i++) delta[i] = u[i];
  for (let t = g; t < reach; t++) delta[t] = 0;
  divideInto(delta, reach, lags, b);
  for (let t = 0; t < reach; t++) e[t] -= delta[t];
  return squares;
}

/** Both for a column of the data. */
export function columnInto(work: Work, x: Float64Array, j: number): void {
  recursionInto(work.columnA0[j], x, work, work.n);
  work.columnE[j].set(work.columnA0[j]);
  correctInto(work.columnE[j], work);
}

/** The same for a first column that is c throughout: `flat` values, then `level`. */
export function constantColumnInto(work: Work, c: number): void {
  const { n, shape, a, b } = work;
  const ar = shape.ar.lags, p = shape.ar.degree;
  // After the longest autoregressive lag and the length of 1/theta nothing changes any more.
  const reach = Math.min(n, p + work.response.length + 1), flat = Math.min(n, Math.max(reach, work.g + work.response.length));
  for (const list of [work.columnA0, work.columnE]) if (list[0].length < flat) list[0] = new Float64Array(Math.min(n, 2 * flat));
  const a0 = work.columnA0[0], e = work.columnE[0];
  let level = c;
  for (let t = 0, i = 0; t < reach; t++) {
    if (i < ar.length && ar[i] === t) level -= a[i++] * c;
    a0[t] = level;
  }
  divideInto(a0, reach, shape.ma.lags, b);
  work.flat = flat;
  work.level = a0[reach - 1];
  for (let t = reach; t < flat; t++) a0[t] = work.level;
  for (let t = 0; t < flat; t++) e[t] = a0[t];
  correctInto(e, work);
}
