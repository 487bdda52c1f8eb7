// What the sample tells about its unknown past: K = (Omega^-1 + G)^-1 and its determinant, by factors.
//
// Legend: Omega = L L', possibly singular; C C' = I + L'G L; W = C^-1 L', so that K = W'W.

import { choleskyInto } from "../linear/cholesky.ts";
import { lowerSolveRowsInto, rowProductsInto, transposeInto } from "../linear/products.ts";
import type { Work } from "./work.ts";

/** Fills W and C; returns the log determinant of I + V Omega V', NaN when it is lost to rounding. Cost g^3. */
export function gainInto(work: Work): number {
  const { g, l, d, wk, s1, pre } = work;
  if (g === 0) return 0;
  const gram = work.response.gram, omega = pre.omega, G = pre.g;
  if (g === 1) {
    const det = 1 + omega[0] * gram[0];
    d[0] = Math.sqrt(det);
    wk[0] = Math.sqrt(Math.max(0, omega[0] / det));
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

/** u = K v, the past's posterior mean from v = V'a0; returns its sum of squares u'Omega^-1 u = |C^-T W v|^2. `v` is used up. */
export function posteriorInto(u: Float64Array, v: Float64Array, work: Work): number {
  const { g, wk, d } = work;
  u.fill(0);
  for (let i = 0; i < g; i++) {
    const row = i * g;
    let sum = 0;
    for (let j = 0; j < g; j++) sum += wk[row + j] * v[j];
    for (let j = 0; j < g; j++) u[j] += wk[row + j] * sum;
    work.s1[i] = sum;
  }
  let squares = 0;
  for (let i = g - 1; i >= 0; i--) {
    let z = work.s1[i];
    for (let t = i + 1; t < g; t++) z -= d[t * g + i] * v[t];
    v[i] = z /= d[i * g + i];
    squares += z * z;
  }
  return squares;
}

/** Derivatives of half the log determinant: by G into `k` (symmetric), by Omega into `omegaBar` (upper triangle, entries off the
 *  diagonal counting both places). Cost g^3. */
export function gainBackInto(work: Work): void {
  const { g, l, d, wk, k, s1, omegaBar, response } = work;
  const G = work.pre.g, gram = response.gram;
  // K = W'W (halved: the derivative of half a log determinant), Z = W G, M = G - Z'Z.
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
}
