// Impulse response of 1 / theta(B) and the cross products of its shifts, with their reverse-mode derivatives.
//
// Legend: h_0 = 1, h_t = -sum b_j h_{t-j}; V has columns h shifted down by 0..g-1 (cut at n rows); G = V'V.
// G[k][l] = c_{k-l}(n - 1 - k) for k >= l with c_d(m) = sum over s + d <= m + d, s <= m of h_s h_{s+d}: one sum a diagonal.
// Source: Ljung & Box (1979).

import { divideBackInto, divideInto, lagDot } from "./kernels.ts";

export interface Response {
  readonly n: number; readonly g: number;
  /** Grows with the terms that are needed: most responses die out long before n. */
  h: Float64Array;
  /** Terms of h kept: the rest is below 1e-16 in size, or n. */
  length: number;
  /** Terms needed for G: below 1e-10 a product adds nothing in double precision. */
  short: number;
  readonly gram: Float64Array;
  hBar: Float64Array;
}

/** @param take  gives an array of a length, filled with zeros */
export function makeResponse(n: number, g: number, take: (length: number) => Float64Array): Response {
  const first = Math.min(n, FIRST);
  return { n, g, h: take(first), length: 0, short: 0, gram: take(g * g), hBar: take(first) };
}

/** Arrays that grow start at this length, or at n. */
export const FIRST = 4096;

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

/** Terms that are made before it is looked whether any more are needed. */
const CHUNK = 64;

function impulseInto(r: Response, lags: Int32Array, b: Float64Array): void {
  const { n } = r, count = lags.length;
  r.h[0] = 1;
  if (count === 0) { r.length = r.short = Math.min(1, n); return; }
  const q = lags[count - 1];
  let big = 0, end = 1;
  while (end < n && end - 1 - big < q) {
    const from = end;
    end = Math.min(n, from + Math.max(q, CHUNK));
    if (end > r.h.length) { const more = new Float64Array(Math.min(n, Math.max(end, 4 * from))); more.set(r.h); r.h = more; }
    const h = r.h;
    h.fill(0, from, end);
    divideInto(h, end, lags, b, from);
    for (let t = end - 1; t >= from; t--) if (!(Math.abs(h[t]) <= 1e-16)) { big = t; break; }
  }
  let medium = big;
  while (medium > 0 && Math.abs(r.h[medium]) <= 1e-10) medium--;
  r.length = Math.min(n, big + 1);
  r.short = Math.min(n, medium + 1);
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
