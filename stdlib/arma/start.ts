// Starting values by regression: Hannan & Rissanen (1982), with seasonal and cross lags as regressors.

import { lagDot, subtractLagsInto } from "./kernels.ts";
import { shrinkInto } from "./region.ts";
import type { Product, Shape } from "./shape.ts";
import { choleskyInto, choleskySolveInto } from "../linear/cholesky.ts";

/** At most this many of the last observations are used: a start need not be better than the first steps that follow. */
const STRETCH = 800;

/** Gives starts for models of one series: coefficients in the order phi, Phi, theta, Theta, inside the region.
 *  A long autoregression (Levinson) estimates the innovations, once for all models that ask for one as long; the second
 *  regression is on lags of both.
 *  @param y  mean-corrected, without gaps */
export function hannanRissanen(y: Float64Array): (shape: Shape) => Float64Array {
  const series = y.length > STRETCH ? y.subarray(y.length - STRETCH) : y, n = series.length;
  const known = new Map<number, Float64Array>();
  return shape => {
    const x = new Float64Array(shape.count);
    if (shape.count === 0) return x;
    const ar = shape.ar.lags, ma = shape.ma.lags;
    let innovations: Float64Array | null = null, skip = shape.ar.degree;
    if (ma.length > 0) {
      const order = longOrder(shape, n);
      if (order < 1) return x;
      innovations = known.get(order) ?? longResiduals(series, order);
      known.set(order, innovations);
      skip = Math.max(skip, Math.min(order, n >> 2) + shape.ma.degree > n >> 1 ? Math.min(order, shape.ma.degree) : order + shape.ma.degree);
    }
    const c = laggedRegression(series, innovations, ar, ma, Math.min(skip, n >> 1));
    if (c === null) return x;
    take(x, 0, shape.ar, c, 0);
    take(x, shape.ar.plain.length + shape.ar.seasonal.length, shape.ma, c, ar.length);
    return x;
  };
}

function take(x: Float64Array, from: number, p: Product, c: Float64Array, base: number): void {
  const plain = p.plain.length, seasonal = p.seasonal.length;
  for (let i = 0; i < plain; i++) x[from + i] = c[base + p.atPlain[i]];
  for (let j = 0; j < seasonal; j++) x[from + plain + j] = c[base + p.atSeasonal[j]];
  // A lag that both factors own is given to the plain one only.
  for (let j = 0; j < seasonal; j++) if (p.atPlain.includes(p.atSeasonal[j])) x[from + plain + j] = 0;
  const sign = p.cross === 1 ? -1 : 1;
  if (plain > 0) shrinkInto(p.plain, x.subarray(from, from + plain), sign);
  if (seasonal > 0) shrinkInto(p.seasonal, x.subarray(from + plain, from + plain + seasonal), sign);
}

function longOrder(shape: Shape, n: number): number {
  const wanted = Math.max(Math.ceil(7 * Math.log10(n + 1)), Math.ceil(1.5 * shape.memory), 2 * shape.ma.plain.length + 4);
  return Math.min(wanted, Math.floor(n / 3));
}

/** Residuals of a Yule-Walker autoregression of a long order, from zero pre-sample values. */
function longResiduals(y: Float64Array, order: number): Float64Array {
  const n = y.length;
  const c = new Float64Array(order + 1);
  for (let k = 0; k <= order; k++) c[k] = lagDot(y, y, n, k);
  const phi = new Float64Array(order), old = new Float64Array(order);
  let v = c[0] || 1;
  for (let m = 0; m < order; m++) {
    let sum = c[m + 1];
    for (let i = 0; i < m; i++) sum -= phi[i] * c[m - i];
    const k = sum / v;
    if (!(Math.abs(k) < 1)) break;
    old.set(phi);
    for (let i = 0; i < m; i++) phi[i] -= k * old[m - 1 - i];
    phi[m] = k;
    v *= 1 - k * k;
  }
  const e = new Float64Array(n);
  const lags = new Int32Array(order);
  for (let i = 0; i < order; i++) lags[i] = i + 1;
  subtractLagsInto(e, y, n, lags, phi);
  return e;
}

/** Least squares of y_t on its lags and on lags of e, rows skip..n-1; null when the cross products are singular. */
function laggedRegression(y: Float64Array, e: Float64Array | null, ar: Int32Array, ma: Int32Array, skip: number): Float64Array | null {
  const n = y.length, k = ar.length + ma.length;
  if (n - skip < k + 2) return null;
  const a = new Float64Array(k * k), b = new Float64Array(k);
  const column = (i: number): [Float64Array, number] => i < ar.length ? [y, ar[i]] : [e!, ma[i - ar.length]];
  // Sum over t >= skip of u_{t-lu} v_{t-lv}: values before the start are zero.
  const product = (u: Float64Array, lu: number, v: Float64Array, lv: number) =>
    lu <= lv ? lagDot(u, v, n - lu, lv - lu, Math.max(skip, lv) - lu) : lagDot(v, u, n - lv, lu - lv, Math.max(skip, lu) - lv);
  for (let i = 0; i < k; i++) {
    const [u, lu] = column(i);
    for (let j = 0; j <= i; j++) { const [v, lv] = column(j); a[i * k + j] = a[j * k + i] = product(u, lu, v, lv); }
    b[i] = product(u, lu, y, 0);
    a[i * k + i] *= 1 + 1e-8;
  }
  if (choleskyInto(a, k) >= 0) return null;
  choleskySolveInto(a, k, b);
  return b.every(Number.isFinite) ? b : null;
}
