// The Gauss-Newton information of the coefficients, and how the product's lags move with the factors' coefficients.

import { divideInto, lagDot } from "./kernels.ts";
import type { Data, Work } from "./likelihood.ts";
import type { Product, Shape } from "./shape.ts";

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
