// A model with numbers, ready for filtering and prediction in levels.

import { makePresample, presampleInto } from "./presample.ts";
import { expandInto, type Shape } from "./shape.ts";

export interface LevelModel {
  /** Index = lag, 0 unused: A = phi times the differences, theta, phi alone. */
  readonly a: Float64Array; readonly b: Float64Array; readonly phi: Float64Array;
  /** 1 - sum delta_i B^i, index i - 1. */
  readonly delta: Float64Array;
  readonly lost: number;
  /** Length of the state. */
  readonly size: number;
  /** Stationary covariance of the pre-sample's part, g x g, upper triangle. */
  readonly omega: Float64Array; readonly g: number; readonly q: number;
  /** Largest entry of omega, at least 1: what "large" means for a variance. */
  readonly scale: number;
  /** Whether all given first levels are known (set by the filter). */
  known: boolean;
}

/** @returns null when the autoregressive side is not stationary */
export function levelModel(shape: Shape, x: Float64Array, delta: Float64Array): LevelModel | null {
  const arC = new Float64Array(shape.ar.lags.length), maC = new Float64Array(shape.ma.lags.length);
  expandInto(arC, shape.ar, x, 0);
  expandInto(maC, shape.ma, x, shape.ar.plain.length + shape.ar.seasonal.length);
  const p = shape.ar.degree, q = shape.ma.degree, lost = delta.length, g = Math.max(p, q);
  const pre = makePresample(p, q);
  if (!presampleInto(pre, shape.ar, arC, shape.ma, maC)) return null;
  const size = Math.max(p + lost, q);
  const phi = new Float64Array(p + 1), a = new Float64Array(size + 2), b = new Float64Array(size + 2);
  for (let i = 0; i < arC.length; i++) phi[shape.ar.lags[i]] = arC[i];
  for (let j = 0; j < maC.length; j++) b[shape.ma.lags[j]] = maC[j];
  for (let i = 0; i <= p; i++) {
    const c = i === 0 ? 1 : -phi[i];
    if (c === 0) continue;
    if (i > 0) a[i] -= c;
    for (let j = 1; j <= lost; j++) a[i + j] += c * delta[j - 1];
  }
  let scale = 1;
  for (const v of pre.omega) scale = Math.max(scale, Math.abs(v));
  return { a, b, phi, delta, lost, size, omega: pre.omega, g, q, scale, known: true };
}
