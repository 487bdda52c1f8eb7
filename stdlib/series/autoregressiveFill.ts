// Missing values by least squares under an autoregression.

import { defaultSeasonLength } from "./every.ts";

/** Fills missing values so that the errors of an autoregression have the least sum of squares, the autoregression being
 *  estimated from the filled series in turn. Source: Janssen, Veldhuis and Vries (1986), with Burg's estimates.
 *  The order reaches over one usual season where the series is long enough.
 *  @returns the values with every NaN replaced; observed values are unchanged */
export function autoregressiveFill(values: Float64Array, every: string | null): Float64Array {
  const n = values.length;
  const gaps: number[] = [];
  let sum = 0;
  for (let t = 0; t < n; t++) if (Number.isNaN(values[t])) gaps.push(t); else sum += values[t];
  const observed = n - gaps.length;
  const mean = sum / observed;
  const x = values.map((v) => (Number.isNaN(v) ? 0 : v - mean));
  if (gaps.length === 0) return values.slice();
  if (observed < 4) return values.map((v) => (Number.isNaN(v) ? mean : v)); // too few for any autoregression
  const order = Math.min(Math.floor(observed / 4), Math.max(Math.round(10 * Math.log10(n)), (defaultSeasonLength(every) ?? 0) + 1));
  for (let pass = 0; pass < 8; pass++) {
    const change = solveGaps(x, gaps, burg(x, order));
    if (change < 1e-8) break;
  }
  return values.map((v, t) => (Number.isNaN(v) ? x[t] + mean : v));
}

/** Coefficients a[1..order] of x[t] = sum a[k] x[t-k] + e, by Burg's recursion; always stationary. */
function burg(x: Float64Array, order: number): Float64Array {
  const n = x.length;
  const a = new Float64Array(order + 1);
  const forward = x.slice(), backward = x.slice();
  for (let m = 1; m <= order; m++) {
    let product = 0, power = 0;
    for (let t = m; t < n; t++) {
      product += forward[t] * backward[t - 1];
      power += forward[t] * forward[t] + backward[t - 1] * backward[t - 1];
    }
    const k = power === 0 ? 0 : (2 * product) / power;
    const before = a.slice();
    a[m] = k;
    for (let j = 1; j < m; j++) a[j] = before[j] - k * before[m - j];
    for (let t = n - 1; t >= m; t--) {
      const f = forward[t];
      forward[t] = f - k * backward[t - 1];
      backward[t] = backward[t - 1] - k * f;
    }
  }
  return a;
}

/** Sets the gaps to minimise the sum of squared errors over order..n-1, by conjugate gradients (the normal equations are banded
 *  and positive definite but for gaps near the start, where a little of the identity keeps them so).
 *  @returns the largest change, relative to the spread of x */
function solveGaps(x: Float64Array, gaps: readonly number[], a: Float64Array): number {
  const order = a.length - 1, n = x.length;
  const ridge = 1e-9;
  const errors = (v: Float64Array): Float64Array => {
    const e = new Float64Array(n);
    for (let t = order; t < n; t++) {
      let s = v[t];
      for (let k = 1; k <= order; k++) s -= a[k] * v[t - k];
      e[t] = s;
    }
    return e;
  };
  const atGaps = (e: Float64Array): Float64Array => Float64Array.from(gaps, (g) => {
    let s = g >= order ? e[g] : 0;
    for (let k = 1; k <= order; k++) if (g + k >= order && g + k < n) s -= a[k] * e[g + k];
    return s;
  });
  const spread = (z: Float64Array): Float64Array => {
    const v = new Float64Array(n);
    gaps.forEach((g, i) => { v[g] = z[i]; });
    return v;
  };
  const normal = (z: Float64Array): Float64Array => atGaps(errors(spread(z))).map((v, i) => v + ridge * z[i]);
  let residual = atGaps(errors(x)).map((v) => -v);
  let direction = residual.slice();
  const step = new Float64Array(gaps.length);
  let size = dot(residual, residual);
  const goal = size * 1e-24;
  for (let pass = 0; pass < 4 * gaps.length + 20 && size > goal; pass++) {
    const image = normal(direction);
    const alpha = size / dot(direction, image);
    for (let i = 0; i < step.length; i++) step[i] += alpha * direction[i];
    residual = residual.map((v, i) => v - alpha * image[i]);
    const next = dot(residual, residual);
    direction = residual.map((v, i) => v + (next / size) * direction[i]);
    size = next;
  }
  gaps.forEach((g, i) => { x[g] += step[i]; });
  const scale = Math.sqrt(dot(x, x) / n) || 1;
  return step.reduce((m, v) => Math.max(m, Math.abs(v)), 0) / scale;
}

function dot(a: Float64Array, b: Float64Array): number {
  let s = 0;
  for (let i = 0; i < a.length; i++) s += a[i] * b[i];
  return s;
}
