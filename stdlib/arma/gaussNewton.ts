// The Gauss-Newton information of the coefficients, and how the product's lags move with the factors' coefficients.

import { divideInto, lagDot } from "./kernels.ts";
import { residualsInto, type Data, type Work } from "./work.ts";
import type { Product, Shape } from "./shape.ts";

/** At most this many of the last observations are used. */
const STRETCH = 3000;

/** The information in the innovations' sensitivities de/dc, from lag sums of two filtered series over a capped stretch:
 *  de/da at lag i is that of fa = theta^-1 r, de/db at lag j that of fe = theta^-1 e. Uses up a0 and lambda of `work`. */
export function gaussNewtonInto(h: Float64Array, work: Work, data: Data, x: Float64Array, free: Int32Array): void {
  const { shape } = work;
  const n = Math.min(work.n, STRETCH), offset = work.n - n;
  const ar = shape.ar.lags, ma = shape.ma.lags, k = ar.length + ma.length;
  const fa = work.a0, fe = ma.length > 0 ? work.lambda : work.er;
  if (ar.length > 0) { residualsInto(fa, work, data, offset); divideInto(fa, n, ma, work.b); }
  if (ma.length > 0) { for (let t = 0; t < n; t++) fe[t] = work.er[offset + t]; divideInto(fe, n, ma, work.b); }
  const r = new Float64Array(k * k);
  for (let i = 0; i < k; i++) {
    for (let j = 0; j <= i; j++) {
      const v = sameLag(r, k, ar, ma, i, j) ?? (i < ar.length ? lagDot(fa, fa, n, ar[i] - ar[j])
        : j >= ar.length ? lagDot(fe, fe, n, ma[i - ar.length] - ma[j - ar.length])
        : crossDot(fa, fe, n, ma[i - ar.length] - ar[j]));
      r[i * k + j] = r[j * k + i] = v;
    }
  }
  const scale = (work.n / n) / (data.sigma2 ?? work.sum / work.nEffective);
  if (shape.ar.seasonal.length + shape.ma.seasonal.length === 0) {
    // Nothing is multiplied out: the lags are the coefficients.
    for (let a = 0; a < free.length; a++) for (let c = 0; c < free.length; c++) h[a * free.length + c] = r[free[a] * k + free[c]] * scale;
    return;
  }
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

/** Sum over t of a_t b_{t-lag}, the lag of either sign. */
function crossDot(a: Float64Array, b: Float64Array, n: number, lag: number): number {
  return lag >= 0 ? lagDot(a, b, n, lag) : lagDot(b, a, n, -lag);
}

/** The sum of an earlier pair of the same kind with the same distance, where there is one: dense lags have few distances. */
function sameLag(r: Float64Array, k: number, ar: Int32Array, ma: Int32Array, i: number, j: number): number | null {
  const p = ar.length, at = (c: number) => c < p ? ar[c] : ma[c - p];
  if (j === 0 || j === p || (i === p && j < p)) return null;
  return at(i) - at(j) === at(i - 1) - at(j - 1) ? r[(i - 1) * k + j - 1] : null;
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
