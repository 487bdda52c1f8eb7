// Impulse response of 1 / theta(B) and the cross products of its shifts, with their reverse-mode derivatives.
//
// Legend: h_0 = 1, h_t = -sum b_j h_{t-j}; V has columns h shifted down by 0..g-1 (cut at n rows); G = V'V.
// G[k][l] = c_{k-l}(n - 1 - k) for k >= l with c_d(m) = sum over s + d <= m + d, s <= m of h_s h_{s+d}: one sum a diagonal.
// Source: Ljung & Box (1979).

import { divideBackInto, lagDot } from "./kernels.ts";

export interface Response {
  readonly n: number; readonly g: number;
  /** Grows with the terms that are needed: most responses die out long before n. */
  h: Float64Array;
  /** Terms of h kept: the rest is below 1e-18 in size, or n. */
  length: number;
  /** Terms needed for G: below 1e-10 a product adds nothing in double precision. */
  short: number;
  readonly gram: Float64Array;
  hBar: Float64Array;
}

export function makeResponse(n: number, g: number): Response {
  const first = Math.min(n, 4096);
  return { n, g, h: new Float64Array(first), length: 0, short: 0, gram: new Float64Array(g * g), hBar: new Float64Array(first) };
}

/** Fills h and G (full, symmetric). Cost: (terms kept) * g. */
export function responseInto(r: Response, lags: Int32Array, b: Float64Array): void {
  const { n, g, gram } = r;
  impulseInto(r, lags, b);
  const h = r.h;
  const m = r.short;
  const base = n - g;
  if (m <= base + 1) {
    for (let d = 0; d < g; d++) {
      const c = d < m ? lagDot(h, h, m, d) : 0;
      for (let k = d; k < g; k++) gram[k * g + k - d] = gram[(k - d) * g + k] = c;
    }
    return;
  }
  // h does not die out in time: the sums shorten down the diagonals, one term a row.
  for (let d = 0; d < g; d++) {
    let c = 0;
    const full = Math.min(base + 1, m - d);
    for (let s = 0; s < full; s++) c += h[s] * h[s + d];
    gram[(g - 1) * g + g - 1 - d] = c;
    for (let k = g - 2; k >= d; k--) {
      const s = n - 1 - k;
      if (s + d < m) c += h[s] * h[s + d];
      gram[k * g + k - d] = c;
    }
    for (let k = d; k < g; k++) gram[(k - d) * g + k] = gram[k * g + k - d];
  }
}

function impulseInto(r: Response, lags: Int32Array, b: Float64Array): void {
  const { n } = r;
  let h = r.h;
  const count = lags.length;
  h[0] = 1;
  if (count === 0) { r.length = r.short = Math.min(1, n); return; }
  const q = lags[count - 1];
  let big = 0, medium = 0, t = 1;
  for (; t < n; t++) {
    if (t === h.length) { const more = new Float64Array(Math.min(n, 4 * t)); more.set(h); r.h = h = more; }
    let sum = 0;
    for (let j = 0; j < count && lags[j] <= t; j++) sum -= b[j] * h[t - lags[j]];
    h[t] = sum;
    const size = Math.abs(sum);
    if (size > 1e-10) medium = t;
    if (size > 1e-18) big = t;
    else if (t - big >= q) break;
  }
  r.length = Math.min(n, big + 1);
  r.short = Math.min(n, medium + 1);
  for (let s = r.length; s < Math.min(n, t + 1, h.length); s++) h[s] = 0;
}

/** Reverse mode: from `weights` (g x g symmetric, the derivative by G) adds the derivatives by the coefficients to `bBar`. */
export function responseBack(r: Response, weights: Float64Array, lags: Int32Array, b: Float64Array, bBar: Float64Array): void {
  const { n, g, h } = r;
  if (lags.length === 0) return;
  const m = r.short, base = n - g;
  if (r.hBar.length < m) r.hBar = new Float64Array(h.length);
  const hBar = r.hBar;
  for (let s = 0; s < m; s++) hBar[s] = 0;
  for (let d = 0; d < g; d++) {
    let weight = 0;
    for (let k = d; k < g; k++) weight += weights[k * g + k - d];
    if (d > 0) weight *= 2;
    const end = m - d;
    const full = Math.min(base + 1, end);
    if (d === 0) for (let s = 0; s < full; s++) hBar[s] += 2 * weight * h[s];
    else for (let s = 0; s < full; s++) { hBar[s] += weight * h[s + d]; hBar[s + d] += weight * h[s]; }
    for (let s = base + 1; s < end; s++) {
      weight -= (d > 0 ? 2 : 1) * weights[(n - s) * g + n - s - d];
      hBar[s] += weight * h[s + d]; hBar[s + d] += weight * h[s];
    }
  }
  divideBackInto(hBar, m, lags, b);
  for (let j = 0; j < lags.length; j++) bBar[j] -= lagDot(hBar, h, m, lags[j]);
}
