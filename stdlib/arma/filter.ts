// The exact filter in levels: prediction errors with their variances, through gaps and differences.
//
// Legend: A(B) y_t = theta(B) e_t with A = phi times the differences, coefficients A_i at y_t = sum A_i y_{t-i} + ...
//   U_k   what everything before time t contributes to equation t + k (k = 0..size-1): the state
//   y_t = U_0 + e_t;  next U_k = U_{k+1} + A_{k+1} y_t + b_{k+1} e_t
//   P     covariance of U over sigma2 given the past, upper triangle; F_t = P_00 + 1; v_t = y_t - U_0
// The first d levels (d = the order of all differences together) are given, not predicted: U starts at phi(B) kappa, kappa
// their part in the differences, with the stationary covariance Omega of presample.ts. An unknown one among them has a very
// large variance (diffuse), and the observation that settles it is left out of the sums.
// Once P has settled the gain is constant, and a step costs the length of the state; a gap wakes it up again.
// Sources: Akaike (1978), Harvey & Phillips (1979); switching to the constant gain as Gardner, Harvey & Phillips (1980).

import type { LevelModel } from "./levelModel.ts";

export interface Filtered {
  /** Prediction errors of each series, length n; NaN before d and where nothing was observed. */
  readonly v: readonly Float64Array[];
  /** Their variance over sigma2; NaN likewise. */
  readonly f: Float64Array;
  /** State of each series after the last value, and its covariance (size x size, upper triangle). */
  readonly state: readonly Float64Array[];
  readonly p: Float64Array;
  readonly size: number;
  /** Sum of log F over the observations predicted. */
  readonly logDet: number;
  readonly count: number;
}

/** Relative variance from which an observation counts as settling an unknown start. */
const DIFFUSE = 1e9;

/** @param series  level arrays of one length; where the first one is NaN, all count as not observed. The others go through the
 *                 same gains (regressors).
 *  Cost n * size^2 while the variances move, n * size after. */
export function filterLevels(model: LevelModel, series: readonly Float64Array[]): Filtered {
  const { a, b, size, lost } = model;
  const n = series[0].length, y = series[0];
  const p = new Float64Array(size * size);
  const state = series.map(x => startState(model, x, p, x === y));
  const v = series.map(() => new Float64Array(n).fill(NaN)), f = new Float64Array(n).fill(NaN);
  const sparse = { arLags: lagsOf(a), maLags: lagsOf(b), a, b };
  const gain = new Float64Array(size), row = new Float64Array(size + 1);
  let logDet = 0, count = 0, settled = false, last = NaN;
  let reach = model.known ? Math.max(model.g, model.q) : size;
  for (let t = lost; t < n; t++) {
    if (Number.isNaN(y[t])) {
      settled = false;
      reach = size;
      missInto(p, row, a, b, size);
      for (const u of state) advanceInto(u, a, u[0], null, 0, size);
      continue;
    }
    if (!settled) {
      const variance = (size > 0 ? p[0] : 0) + 1;
      const moved = observeInto(p, gain, b, size, reach, variance);
      settled = moved < 1e-15 * variance && Math.abs(variance - last) < 1e-15 * variance;
      last = variance;
    }
    if (settled && last - 1 < 1e-14 && t >= lost + size && model.known) {
      // Nothing of the past is unknown any more: the prediction errors are those of the plain recursion, up to the next gap.
      let end = t;
      while (end < n && !Number.isNaN(y[end])) end++;
      for (let i = 0; i < series.length; i++) recurInto(v[i], series[i], t, end, sparse);
      for (let i = 0; i < series.length; i++) rebuildInto(state[i], series[i], v[i], end, sparse, size);
      f.fill(1, t, end);
      count += end - t;
      t = end - 1;
      continue;
    }
    f[t] = last;
    for (let i = 0; i < state.length; i++) {
      const u = state[i], error = series[i][t] - (size > 0 ? u[0] : 0);
      v[i][t] = error;
      advanceInto(u, a, series[i][t], gain, error / last, size);
    }
    if (last > DIFFUSE * model.scale) { f[t] = NaN; for (const x of v) x[t] = NaN; continue; }
    logDet += Math.log(last);
    count++;
  }
  return { v, f, state, p, size, logDet, count };
}

interface Sparse { readonly arLags: Int32Array; readonly maLags: Int32Array; readonly a: Float64Array; readonly b: Float64Array }

function lagsOf(c: Float64Array): Int32Array { return Int32Array.from([...c.keys()].filter(lag => lag > 0 && c[lag] !== 0)); }

/** v_t = y_t - sum A_i y_{t-i} - sum b_j v_{t-j} over from..to. */
function recurInto(v: Float64Array, y: Float64Array, from: number, to: number, { arLags, maLags, a, b }: Sparse): void {
  for (let t = from; t < to; t++) v[t] = y[t];
  for (const lag of arLags) { const c = a[lag]; for (let t = from; t < to; t++) v[t] -= c * y[t - lag]; }
  if (maLags.length === 1) { const lag = maLags[0], c = b[lag]; for (let t = from; t < to; t++) v[t] -= c * v[t - lag]; return; }
  if (maLags.length === 0) return;
  for (let t = from; t < to; t++) {
    let sum = v[t];
    for (let j = 0; j < maLags.length; j++) sum -= b[maLags[j]] * v[t - maLags[j]];
    v[t] = sum;
  }
}

/** The state before time `end` from the last values and errors. */
function rebuildInto(u: Float64Array, y: Float64Array, v: Float64Array, end: number, { arLags, maLags, a, b }: Sparse, size: number): void {
  for (let k = 0; k < size; k++) {
    let sum = 0;
    for (const lag of arLags) if (lag > k) sum += a[lag] * y[end + k - lag];
    for (const lag of maLags) if (lag > k) sum += b[lag] * v[end + k - lag];
    u[k] = sum;
  }
}

/** u_k <- u_{k+1} + A_{k+1} value + gain_k scaledError. */
function advanceInto(u: Float64Array, a: Float64Array, value: number, gain: Float64Array | null, scaledError: number, size: number): void {
  for (let k = 0; k < size; k++) u[k] = (k + 1 < size ? u[k + 1] : 0) + a[k + 1] * value + (gain === null ? 0 : gain[k] * scaledError);
}

/** P after an observation; the gains' numerators Cov(U', v) on the way. Returns the largest change of P. */
function observeInto(p: Float64Array, gain: Float64Array, b: Float64Array, size: number, reach: number, variance: number): number {
  for (let k = 0; k < size; k++) gain[k] = (k + 1 < size ? p[k + 1] : 0) + b[k + 1];
  let moved = 0;
  for (let s = 0; s < reach; s++) {
    const row = s * size, below = row + size + 1;
    const gs = gain[s] / variance, bs = b[s + 1];
    for (let t = s; t < reach; t++) {
      const older = s + 1 < size && t + 1 < size ? p[below + t] : 0;
      const now = older + bs * b[t + 1] - gs * gain[t];
      const change = Math.abs(now - p[row + t]);
      if (change > moved) moved = change;
      p[row + t] = now;
    }
    if (p[row + s] < 0) p[row + s] = 0;
  }
  return moved;
}

/** P after a period without an observation. */
function missInto(p: Float64Array, row: Float64Array, a: Float64Array, b: Float64Array, size: number): void {
  for (let k = 0; k < size; k++) row[k] = p[k];
  row[size] = 0;
  for (let s = 0; s < size; s++) {
    const base = s * size, below = base + size + 1, as = a[s + 1], rs = as + b[s + 1];
    for (let t = s; t < size; t++) {
      const older = s + 1 < size && t + 1 < size ? p[below + t] : 0;
      const at = a[t + 1];
      p[base + t] = older + as * row[t + 1] + at * row[s + 1] + as * at * row[0] + rs * (at + b[t + 1]);
    }
  }
}

/** The state after the given first levels; Omega and, for the observed series, what unknown ones add go to p. */
function startState(model: LevelModel, x: Float64Array, p: Float64Array, observed: boolean): Float64Array {
  const { size, lost, delta, phi, omega, g } = model;
  const u = new Float64Array(size);
  if (observed) for (let s = 0; s < g; s++) for (let t = s; t < g; t++) p[s * size + t] = omega[s * g + t];
  const spread = (weights: Float64Array) => {
    // phi(B) kappa: kappa_k is the given levels' part in the difference at lost + k.
    const out = new Float64Array(size);
    for (let k = 0; k < lost; k++) {
      let kappa = 0;
      for (let i = k + 1; i <= lost; i++) kappa += delta[i - 1] * weights[lost + k - i];
      if (kappa === 0) continue;
      out[k] += kappa;
      for (let i = 1; i < phi.length; i++) if (phi[i] !== 0 && k + i < size) out[k + i] -= phi[i] * kappa;
    }
    return out;
  };
  u.set(spread(x.subarray(0, lost).map(value => Number.isNaN(value) ? 0 : value)));
  if (!observed) return u;
  const one = new Float64Array(lost);
  for (let i = 0; i < lost; i++) {
    if (!Number.isNaN(x[i])) continue;
    model.known = false;
    one.fill(0);
    one[i] = 1;
    const direction = spread(one);
    for (let s = 0; s < size; s++) for (let t = s; t < size; t++) p[s * size + t] += DIFFUSE * 1e3 * model.scale * direction[s] * direction[t];
  }
  return u;
}
