// Covariance of what the unknown past contributes to the first values of an ARMA process, and its reverse-mode derivative.
//
// Legend: w_t = sum a_i w_{t-i} + e_t + sum b_j e_{t-j}, var e = 1, p and q the degrees, g = max(p, q).
//   u_t     sum over i > t of a_i w_{t-i} plus sum over j > t of b_j e_{t-j}: the pre-sample's part in equation t, t = 0..g-1
//   omega   covariance of u, g x g, upper triangle by rows
//   gamma   autocovariances of w at lags 0..p;  psi  weights of the infinite moving average, lags 0..q
// omega has displacement rank three: omega[s][t] - omega[s+1][t+1] is made of its first row and of r_s = a_{s+1} + b_{s+1}.
// Source: Ljung & Box (1979) for the set-up; Akaike (1978) for the Markovian form whose stationary covariance omega is.

import { type Product } from "./shape.ts";

/** Work space of one model shape. */
export interface Presample {
  readonly p: number; readonly q: number; readonly g: number;
  /** Dense coefficients, index = lag (0 unused). */
  readonly a: Float64Array; readonly b: Float64Array;
  readonly psi: Float64Array; readonly gamma: Float64Array;
  readonly omega: Float64Array;
  /** Polynomials of all orders from the step-down, order m at (m - 1) m / 2, in the form 1 - sum a_i B^i. */
  readonly orders: Float64Array;
  readonly right: Float64Array; readonly next: Float64Array;
  readonly gammaBar: Float64Array; readonly psiBar: Float64Array; readonly aBar: Float64Array; readonly bBar: Float64Array;
}

/** @param p  longest autoregressive lag, 0 or more   @param q  longest moving-average lag, 0 or more */
export function makePresample(p: number, q: number): Presample {
  const g = Math.max(p, q);
  return {
    p, q, g, a: new Float64Array(g + 2), b: new Float64Array(g + 2), psi: new Float64Array(q + 1), gamma: new Float64Array(p + 1),
    omega: new Float64Array(g * g), orders: new Float64Array(p * (p + 1) / 2), right: new Float64Array(p + 1), next: new Float64Array(p + 1),
    gammaBar: new Float64Array(p + 1), psiBar: new Float64Array(q + 1), aBar: new Float64Array(g + 2), bBar: new Float64Array(g + 2),
  };
}

/** Fills `omega` for sparse coefficients.
 *  @returns false when the autoregressive side is not stationary: nothing else is then valid. Cost g^2 + p^2. */
export function presampleInto(w: Presample, ar: Product, arC: Float64Array, ma: Product, maC: Float64Array): boolean {
  const { p, q, g, a, b, psi, gamma, omega } = w;
  a.fill(0); b.fill(0);
  for (let i = 0; i < ar.lags.length; i++) a[ar.lags[i]] = arC[i];
  for (let j = 0; j < ma.lags.length; j++) b[ma.lags[j]] = maC[j];
  if (g === 0) return true;
  if (!stepDownInto(w.orders, a, p)) return false;
  psi[0] = 1;
  for (let j = 1; j <= q; j++) {
    let sum = b[j];
    for (let i = 0; i < ar.lags.length && ar.lags[i] <= j; i++) sum += arC[i] * psi[j - ar.lags[i]];
    psi[j] = sum;
  }
  autocovariances(w, ma, maC);
  for (let t = 0; t < g; t++) {
    let sum = 0;
    for (let i = 0; i < ar.lags.length; i++) if (ar.lags[i] > t) sum += arC[i] * gamma[ar.lags[i] - t];
    for (let j = 0; j < ma.lags.length; j++) if (ma.lags[j] > t) sum += maC[j] * psi[ma.lags[j] - t];
    omega[t] = sum;
  }
  for (let s = g - 1; s >= 1; s--) {
    const as = a[s + 1], rs = as + b[s + 1], row = s * g, below = row + g + 1;
    const first = s + 1 < g ? omega[s + 1] : 0;
    for (let t = s; t < g; t++) {
      const at = a[t + 1];
      const older = t + 1 < g ? (s + 1 < g ? omega[below + t] : 0) + as * omega[t + 1] : 0;
      omega[row + t] = older + at * (first + as * omega[0]) + rs * (at + b[t + 1]);
    }
  }
  return true;
}

/** gamma solves gamma_k - sum a_i gamma_|k-i| = sum over j >= k of b_j psi_{j-k}, by the polynomials of the step-down:
 *  the right-hand side is carried down through the orders, the autocovariances come back up. Cost p^2; keeps its digits
 *  near unit roots, because every division is by 1 - (partial autocorrelation)^2. */
function autocovariances(w: Presample, ma: Product, maC: Float64Array): void {
  const { p, gamma, psi, orders, next } = w;
  const right = w.right;
  for (let k = 0; k <= p; k++) {
    let sum = k === 0 ? 1 : 0;
    for (let j = 0; j < ma.lags.length; j++) if (ma.lags[j] >= k) sum += maC[j] * psi[ma.lags[j] - k];
    right[k] = sum;
  }
  for (let m = p; m >= 1; m--) {
    const c = -orders[m * (m - 1) / 2 + m - 1];
    const shrink = 1 / ((1 - c) * (1 + c));
    next[m] = right[m];
    for (let k = 0, l = m; k <= l; k++, l--) {
      const x = right[k], y = right[l];
      if (k < m) right[k] = (x - c * y) * shrink;
      if (l < m && l !== k) right[l] = (y - c * x) * shrink;
    }
  }
  gamma[0] = right[0];
  for (let m = 1; m <= p; m++) {
    const base = m * (m - 1) / 2;
    let sum = next[m];
    for (let i = 1; i <= m; i++) sum += orders[base + i - 1] * gamma[m - i];
    gamma[m] = sum;
  }
}

/** Polynomials of orders p..1 with the same leading autocorrelations (Durbin 1960, run backwards).
 *  @returns false as soon as a partial autocorrelation reaches 1 in size: not stationary. */
export function stepDownInto(orders: Float64Array, a: Float64Array, p: number): boolean {
  const top = p * (p - 1) / 2;
  for (let i = 1; i <= p; i++) orders[top + i - 1] = a[i];
  for (let m = p; m >= 1; m--) {
    const base = m * (m - 1) / 2;
    const k = orders[base + m - 1];
    if (!(Math.abs(k) < 1)) return false;
    const below = base - (m - 1);
    const shrink = 1 / ((1 - k) * (1 + k));
    for (let i = 1; i < m; i++) orders[below + i - 1] = (orders[base + i - 1] + k * orders[base + m - i - 1]) * shrink;
  }
  return true;
}

/** Reverse mode: from `bar` (g x g, derivative by the upper triangle of omega, off-diagonal entries counting both places;
 *  used up on the way) adds the derivatives by sparse coefficients to `arBar` and `maBar`. Cost g^2 + p^2. */
export function presampleBack(w: Presample, bar: Float64Array, ar: Product, arC: Float64Array, ma: Product, maC: Float64Array, arBar: Float64Array, maBar: Float64Array): void {
  const { q, g, a, b, psi, gamma, omega, gammaBar, psiBar, aBar, bBar } = w;
  if (g === 0) return;
  gammaBar.fill(0); psiBar.fill(0); aBar.fill(0); bBar.fill(0);
  for (let s = 1; s < g; s++) {
    const as = a[s + 1], rs = as + b[s + 1], row = s * g, below = row + g + 1;
    const first = s + 1 < g ? omega[s + 1] : 0;
    let asBar = 0, rsBar = 0, firstBar = 0, cornerBar = 0;
    for (let t = s; t < g; t++) {
      const x = bar[row + t];
      if (x === 0) continue;
      const at = a[t + 1], rt = at + b[t + 1];
      if (t + 1 < g) {
        if (s + 1 < g) bar[below + t] += x;
        asBar += x * omega[t + 1];
        bar[t + 1] += x * as;
      }
      aBar[t + 1] += x * (first + as * omega[0] + rs);
      bBar[t + 1] += x * rs;
      asBar += x * at * omega[0];
      firstBar += x * at;
      cornerBar += x * at * as;
      rsBar += x * rt;
    }
    aBar[s + 1] += asBar + rsBar;
    bBar[s + 1] += rsBar;
    if (s + 1 < g) bar[s + 1] += firstBar;
    bar[0] += cornerBar;
  }
  for (let t = 0; t < g; t++) {
    const x = bar[t];
    for (let i = 0; i < ar.lags.length; i++) {
      const lag = ar.lags[i];
      if (lag > t) { aBar[lag] += x * gamma[lag - t]; gammaBar[lag - t] += x * arC[i]; }
    }
    for (let j = 0; j < ma.lags.length; j++) {
      const lag = ma.lags[j];
      if (lag > t) { bBar[lag] += x * psi[lag - t]; psiBar[lag - t] += x * maC[j]; }
    }
  }
  autocovariancesBack(w, ar, ma, maC);
  for (let j = q; j >= 1; j--) {
    const x = psiBar[j];
    bBar[j] += x;
    for (let i = 0; i < ar.lags.length && ar.lags[i] <= j; i++) {
      aBar[ar.lags[i]] += x * psi[j - ar.lags[i]];
      psiBar[j - ar.lags[i]] += arC[i] * x;
    }
  }
  for (let i = 0; i < ar.lags.length; i++) arBar[i] += aBar[ar.lags[i]];
  for (let j = 0; j < ma.lags.length; j++) maBar[j] += bBar[ma.lags[j]];
}

/** The transposed solution of `autocovariances`, then the derivative of an implicit function. */
function autocovariancesBack(w: Presample, ar: Product, ma: Product, maC: Float64Array): void {
  const { p, gamma, psi, orders, gammaBar, psiBar, aBar, bBar } = w;
  const rightBar = w.right, nextBar = w.next;
  for (let m = p; m >= 1; m--) {
    const base = m * (m - 1) / 2, x = gammaBar[m];
    nextBar[m] = x;
    for (let i = 1; i <= m; i++) gammaBar[m - i] += orders[base + i - 1] * x;
  }
  rightBar.fill(0);
  rightBar[0] = gammaBar[0];
  for (let m = 1; m <= p; m++) {
    const c = -orders[m * (m - 1) / 2 + m - 1];
    const shrink = 1 / ((1 - c) * (1 + c));
    // Down-going step: right'[k] = (right[k] - c right[m-k]) shrink for k < m; right[m] itself went to next[m].
    rightBar[m] = 0;
    for (let k = 0, l = m; k <= l; k++, l--) {
      const x = rightBar[k] * shrink, y = l < m ? rightBar[l] * shrink : 0;
      if (k === l) rightBar[k] = x - c * x;
      else { rightBar[k] = x - c * y; rightBar[l] = y - c * x; }
    }
    rightBar[m] += nextBar[m];
  }
  for (let k = 0; k <= p; k++) {
    const x = rightBar[k];
    for (let i = 0; i < ar.lags.length; i++) aBar[ar.lags[i]] += x * gamma[Math.abs(k - ar.lags[i])];
    for (let j = 0; j < ma.lags.length; j++) {
      const lag = ma.lags[j];
      if (lag >= k) { bBar[lag] += x * psi[lag - k]; psiBar[lag - k] += x * maC[j]; }
    }
  }
}
