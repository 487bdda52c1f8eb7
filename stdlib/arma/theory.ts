// What a model implies: weights, correlations, spectrum, memory.

import { expandedPolynomials, type ArmaModel } from "./coefficients.ts";
import type { Fit } from "./model.ts";
import { differencePolynomial, undifferenced } from "./prepare.ts";
import { makePresample, presampleInto } from "./presample.ts";
import { inverseRoots, roots } from "./roots.ts";
import { makeShape } from "./shape.ts";

/** Weights of the infinite moving average at lags 0..n: w - mean = sum psi_j e_{t-j}. psi[0] = 1. For a fit these are of the
 *  differenced series; `impulseResponse` carries them through the differences.
 *  @example psi({ phi: [0.5] }, 2) // [1, 0.5, 0.25] */
export function psi(model: ArmaModel, n: number): Float64Array {
  const { phi, theta } = expandedPolynomials(model);
  return weights(phi, theta, count(n, "psi"));
}

/** Weights of the infinite autoregression at lags 1..n (index 0 is lag 1): e_t = x_t - sum pi_j x_{t-j}. */
export function piWeights(model: ArmaModel, n: number): Float64Array {
  const { phi, theta } = expandedPolynomials(model);
  return weights(theta.map(v => -v), phi.map(v => -v), count(n, "piWeights")).slice(1).map(v => -v || 0);
}

/** Effect of a shock of one unit after 0..n periods on the scale before the differences: a fit's own, or those given by their
 *  lags beside the coefficients.
 *  @example impulseResponse({ theta: [-0.4], differences: [1] }, 2) // [1, 0.6, 0.6] */
export function impulseResponse(model: Fit | ArmaModel & { readonly differences?: readonly number[] }, n: number): Float64Array {
  const { phi, theta } = expandedPolynomials(model);
  const differences = "series" in model ? undifferenced(model.series).differences : model.differences ?? [];
  if (differences.some(lag => !Number.isInteger(lag) || lag < 1)) throw new RangeError(`impulseResponse: differences holds ${differences.join(", ")}; give the lags, whole numbers from 1 on, as in differences: [1, 12]`);
  const delta = differencePolynomial(differences);
  const full = new Float64Array(phi.length + delta.length);
  // (1 - phi)(1 - delta): coefficients on the right-hand side.
  phi.forEach((v, i) => { full[i] += v; delta.forEach((d, j) => { full[i + j + 1] -= v * d; }); });
  delta.forEach((d, j) => { full[j] += d; });
  return weights(full, theta, count(n, "impulseResponse"));
}

function weights(phi: Float64Array, theta: Float64Array, n: number): Float64Array {
  const out = new Float64Array(n + 1);
  out[0] = 1;
  for (let j = 1; j <= n; j++) {
    let sum = j <= theta.length ? theta[j - 1] : 0;
    const top = Math.min(j, phi.length);
    for (let i = 1; i <= top; i++) sum += phi[i - 1] * out[j - i];
    out[j] = sum;
  }
  return out;
}

function count(n: number, what: string): number {
  if (!Number.isInteger(n) || n < 0) throw new RangeError(`${what}: the number of lags is ${String(n)}, expected a whole number from 0 on`);
  return n;
}

/** Autocovariances at lags 0..n, in units of sigma2 times its own value.
 *  @throws RangeError where the model is not stationary */
export function theoreticalAutocovariance(model: ArmaModel, n: number): Float64Array {
  const { phi, theta } = expandedPolynomials(model);
  const lags = (c: Float64Array) => [...c.keys()].filter(i => c[i] !== 0).map(i => i + 1);
  const shape = makeShape(lags(phi), [], lags(theta), [], 1);
  const pre = makePresample(shape.ar.degree, shape.ma.degree);
  const ar = Float64Array.from(shape.ar.lags, l => phi[l - 1]), ma = Float64Array.from(shape.ma.lags, l => theta[l - 1]);
  const sigma2 = model.sigma2 ?? 1;
  const out = new Float64Array(count(n, "theoreticalAcf") + 1);
  if (!presampleInto(pre, shape.ar, ar, shape.ma, ma)) throw new RangeError("theoreticalAcf: the autoregressive side is not stationary (a root lies on or inside the unit circle), so the process has no autocorrelations");
  const p = shape.ar.degree, q = shape.ma.degree;
  const weight = weights(phi, theta, q);
  if (p === 0) {
    const b = Float64Array.of(1, ...theta);
    for (let k = 0; k <= Math.min(n, q); k++) for (let j = k; j <= q; j++) out[k] += b[j] * b[j - k];
    return out.map(v => v * sigma2);
  }
  for (let k = 0; k <= n; k++) {
    if (k <= p) { out[k] = pre.gamma[k]; continue; }
    let sum = 0;
    for (let i = 0; i < ar.length; i++) sum += ar[i] * out[k - shape.ar.lags[i]];
    for (let j = k; j <= q; j++) sum += theta[j - 1] * weight[j - k];
    out[k] = sum;
  }
  return out.map(v => v * sigma2);
}

/** Autocorrelations at lags 0..lags that the model implies; index 0 is 1. */
export function theoreticalAcf(model: ArmaModel, lags: number): Float64Array {
  const gamma = theoreticalAutocovariance(model, lags);
  return gamma.map(v => v / gamma[0]);
}

/** Partial autocorrelations at lags 0..lags; index 0 is 1. By Durbin and Levinson. */
export function theoreticalPacf(model: ArmaModel, lags: number): Float64Array {
  const r = theoreticalAcf(model, lags);
  const out = new Float64Array(lags + 1), phi = new Float64Array(lags + 1), old = new Float64Array(lags + 1);
  out[0] = 1;
  let v = 1;
  for (let m = 1; m <= lags; m++) {
    let sum = r[m];
    for (let i = 1; i < m; i++) sum -= phi[i] * r[m - i];
    const k = v > 1e-15 ? sum / v : 0;
    old.set(phi);
    for (let i = 1; i < m; i++) phi[i] = old[i] - k * old[m - i];
    phi[m] = out[m] = k;
    v *= 1 - k * k;
  }
  return out;
}

/** Spectral density f(w) = sigma2 / (2 pi) |theta(e^-iw)|^2 / |phi(e^-iw)|^2 at angular frequencies w in [0, pi]. */
export function theoreticalSpectrum(model: ArmaModel, frequencies: ArrayLike<number>): Float64Array {
  const { phi, theta } = expandedPolynomials(model);
  const size2 = (c: Float64Array, sign: number, w: number) => {
    let re = 1, im = 0;
    c.forEach((v, i) => { if (v !== 0) { re += sign * v * Math.cos(w * (i + 1)); im -= sign * v * Math.sin(w * (i + 1)); } });
    return re * re + im * im;
  };
  return Float64Array.from(frequencies as ArrayLike<number> & Iterable<number>, w => (model.sigma2 ?? 1) / (2 * Math.PI) * size2(theta, 1, w) / size2(phi, -1, w));
}

/** Periods until a shock's effect has halved for good, by the slowest root: ln 2 / ln |root|. 0 without an autoregressive side;
 *  Infinity on the unit circle. Of the differenced series, where there are differences. */
export function halfLife(model: ArmaModel): number {
  const { phi } = expandedPolynomials(model);
  const z = inverseRoots(phi.map(v => -v));
  let top = 0;
  for (let i = 0; i < z.re.length; i++) top = Math.max(top, Math.hypot(z.re[i], z.im[i]));
  if (top === 0) return 0;
  return top >= 1 ? Infinity : Math.LN2 / -Math.log(top);
}

/** Mean and variance that the process settles at. */
export function longRun(model: ArmaModel): { mean: number; variance: number } {
  return { mean: model.mean ?? 0, variance: theoreticalAutocovariance(model, 0)[0] };
}

/** Roots in B of both sides, multiplied out. */
export function modelRoots(model: ArmaModel): Fit["roots"] {
  const { phi, theta } = expandedPolynomials(model);
  return { ar: roots(phi.map(v => -v)), ma: roots(theta) };
}
