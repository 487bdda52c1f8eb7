// Standardised one-step errors of an ARMA model at given parameters, by Durbin-Levinson on its autocovariances:
// slow and independent of the library's likelihood, so that diagnostics are tested on their own.

import { transformed } from "../referenceCases.ts";

interface Part { arLags: number[]; maLags: number[]; d?: number; D?: number; period?: number }
export interface ModelCase { model: Part & { constant: boolean; seasonal?: Part }; params: { ar?: number[]; ma?: number[]; sar?: number[]; sma?: number[]; constant?: number } }

/** v_t / sqrt(F_t), F relative to sigma squared, of the differenced series less its constant. */
export function standardInnovations(y: Float64Array, { model, params }: ModelCase): Float64Array {
  const s = model.seasonal, period = s?.period ?? 1;
  let w = y;
  for (let i = 0; i < (model.d ?? 0); i++) w = transformed(w, [{ difference: 1 }]);
  for (let i = 0; i < (s?.D ?? 0); i++) w = transformed(w, [{ difference: period }]);
  w = w.map((v) => v - (params.constant ?? 0));
  const phi = product(polynomial(model.arLags, params.ar, 1, -1), polynomial(s?.arLags ?? [], params.sar, period, -1));
  const theta = product(polynomial(model.maLags, params.ma, 1, 1), polynomial(s?.maLags ?? [], params.sma, period, 1));
  return innovations(w, autocovariances(phi, theta, w.length));
}

function polynomial(lags: number[], values: number[] = [], step: number, sign: number): number[] {
  const p = [1];
  lags.forEach((lag, i) => { p[lag * (lag >= step && lag % step === 0 && step > 1 ? 1 : step)] = sign * values[i]; });
  return Array.from(p, (v) => v ?? 0);
}

function product(a: number[], b: number[]): number[] {
  const out = Array.from({ length: a.length + b.length - 1 }, () => 0);
  a.forEach((u, i) => b.forEach((v, j) => { out[i + j] += u * v; }));
  return out;
}

function autocovariances(phi: number[], theta: number[], n: number): Float64Array {
  const length = 6000, psi = new Float64Array(length);
  for (let j = 0; j < length; j++) {
    psi[j] = theta[j] ?? 0;
    for (let i = 1; i < phi.length && i <= j; i++) psi[j] -= phi[i] * psi[j - i];
  }
  if (Math.abs(psi[length - 1]) > 1e-12) throw new Error("the model remembers too long for this helper");
  const gamma = new Float64Array(n);
  for (let k = 0; k < n; k++) for (let j = 0; j + k < length; j++) {
    if (psi[j] === 0 && j > theta.length && phi.length === 1) break;
    gamma[k] += psi[j] * psi[j + k];
  }
  return gamma;
}

function innovations(w: Float64Array, gamma: Float64Array): Float64Array {
  const n = w.length, out = new Float64Array(n), phi = new Float64Array(n), before = new Float64Array(n);
  let variance = gamma[0];
  out[0] = w[0] / Math.sqrt(variance);
  for (let t = 1; t < n; t++) {
    let top = gamma[t];
    for (let j = 1; j < t; j++) top -= before[j] * gamma[t - j];
    const last = top / variance;
    phi[t] = last;
    for (let j = 1; j < t; j++) phi[j] = before[j] - last * before[t - j];
    before.set(phi);
    variance *= 1 - last * last;
    let prediction = 0;
    for (let j = 1; j <= t; j++) prediction += phi[j] * w[t - j];
    out[t] = (w[t] - prediction) / Math.sqrt(variance);
  }
  return out;
}
