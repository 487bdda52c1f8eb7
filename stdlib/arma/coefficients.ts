// A fit's coefficients in the order of the likelihood, and its polynomials multiplied out.

import type { Fit } from "./model.ts";
import type { Shape } from "./shape.ts";

/** Anything with ARMA coefficients: a fit, or given parameters. Plus signs in theta; index 0 is lag 1 (one season). */
export interface ArmaModel {
  readonly phi?: ArrayLike<number>;
  readonly theta?: ArrayLike<number>;
  readonly seasonalPhi?: ArrayLike<number>;
  readonly seasonalTheta?: ArrayLike<number>;
  readonly seasonLength?: number;
  /** Innovation variance; 1 when left out. */
  readonly sigma2?: number;
  readonly mean?: number;
}

/** phi, Phi, theta, Theta by the shape's lags. */
export function coefficientsOf(fit: Fit, shape: Shape): Float64Array {
  const at = (c: Float64Array, lags: Int32Array, step: number) => Array.from(lags, lag => c[lag / step - 1] ?? 0);
  return Float64Array.from([
    ...at(fit.phi, shape.ar.plain, 1), ...at(fit.seasonalPhi, shape.ar.seasonal, shape.season),
    ...at(fit.theta, shape.ma.plain, 1), ...at(fit.seasonalTheta, shape.ma.seasonal, shape.season),
  ]);
}

/** Both sides multiplied out: phi at w_t = sum phi_i w_{t-i} + e_t + sum theta_j e_{t-j}, index 0 is lag 1. */
export function expandedPolynomials(model: ArmaModel): { phi: Float64Array; theta: Float64Array } {
  const s = model.seasonLength ?? 0;
  return { phi: multiplied(model.phi, model.seasonalPhi, s, -1), theta: multiplied(model.theta, model.seasonalTheta, s, 1) };
}

function multiplied(plain: ArrayLike<number> = [], seasonal: ArrayLike<number> = [], s: number, sign: 1 | -1): Float64Array {
  if (seasonal.length > 0 && !(s >= 1)) throw new RangeError("seasonal coefficients need a seasonLength of 1 or more periods");
  const out = new Float64Array(plain.length + seasonal.length * s);
  for (let i = 0; i < plain.length; i++) out[i] += checked(plain[i]);
  for (let j = 0; j < seasonal.length; j++) {
    out[(j + 1) * s - 1] += checked(seasonal[j]);
    for (let i = 0; i < plain.length; i++) out[(j + 1) * s + i] += sign * plain[i] * seasonal[j];
  }
  return out;
}

function checked(v: number): number {
  if (!Number.isFinite(v)) throw new RangeError(`a coefficient is ${String(v)}; coefficients are numbers`);
  return v;
}
