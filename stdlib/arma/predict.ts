// Prediction from the end of a fit's series, on the scale before its differences.

import { interventionColumns } from "../forecast/interventions.ts";
import { positionIn, timeAt } from "../series/calendar.ts";
import { isSeries } from "../series/series.ts";
import { filtered, knownOf, type Known } from "./known.ts";
import type { Fit } from "./model.ts";

export interface Prediction {
  /** Conditional mean given the data, regression and mean added. */
  readonly mean: Float64Array;
  /** Root of the conditional variance given the data: exact for a finite sample, the parameters known. */
  readonly se: Float64Array;
  /** Covariance of the errors, horizon x horizon, flat. */
  readonly covariance: () => Float64Array;
  /** Weights of the shocks at 0..horizon-1, differences included: se from an infinite past is sigma sqrt(sum psi^2). */
  readonly psi: Float64Array;
}

/** @param horizon  periods ahead of the last period of `fit.series`, 1 or more
 *  @param future   values of the regressors (by column name) over the horizon, in levels; interventions extend by themselves,
 *                  and so does a series that has later values
 *  @throws RangeError naming a regressor without a future and the first date
 *  The state after the last value gives mean and variance: no n x n matrix. Cost: one filter pass, then horizon * state^2. */
export function predict(fit: Fit, horizon: number, future: Readonly<Record<string, ArrayLike<number>>> = {}): Prediction {
  if (!Number.isInteger(horizon) || horizon < 1) throw new RangeError(`predict: the horizon is ${String(horizon)}, expected a whole number of periods from 1 on`);
  const known = knownOf(fit);
  const { a, b, size } = known.model;
  const { state, p } = filtered(known);
  const u = state[0];
  const mean = new Float64Array(horizon), psi = new Float64Array(horizon), chi = new Float64Array(horizon);
  for (let k = 0; k < horizon; k++) {
    let m = k < size ? u[k] : 0, shock = k === 0 ? 1 : k <= size ? b[k] : 0, past = k === 0 ? 1 : 0;
    const top = Math.min(k, size);
    for (let i = 1; i <= top; i++) if (a[i] !== 0) { m += a[i] * mean[k - i]; shock += a[i] * psi[k - i]; past += a[i] * chi[k - i]; }
    mean[k] = m; psi[k] = shock; chi[k] = past;
  }
  const half = stateShare(p, chi, size, horizon);
  const variance = (i: number, j: number) => {
    let sum = 0;
    for (let t = 0; t <= Math.min(i, j); t++) sum += psi[i - t] * psi[j - t];
    for (let s = 0; s <= Math.min(j, size - 1); s++) sum += half[i * size + s] * chi[j - s];
    return sum * fit.sigma2;
  };
  const se = Float64Array.from({ length: horizon }, (_, k) => Math.sqrt(variance(k, k)));
  const added = futurePart(fit, known, horizon, future);
  for (let k = 0; k < horizon; k++) mean[k] += added[k];
  const covariance = () => {
    const out = new Float64Array(horizon * horizon);
    for (let i = 0; i < horizon; i++) for (let j = 0; j <= i; j++) out[i * horizon + j] = out[j * horizon + i] = variance(i, j);
    return out;
  };
  return { mean, se, covariance, psi };
}

/** X P with X[k][s] = chi_{k-s}: how uncertain the state still is, seen from each horizon. */
function stateShare(p: Float64Array, chi: Float64Array, size: number, horizon: number): Float64Array {
  const out = new Float64Array(horizon * size);
  for (let s = 0; s < size; s++) {
    for (let t = s; t < size; t++) {
      const v = p[s * size + t];
      if (v === 0) continue;
      for (let k = s; k < horizon; k++) out[k * size + t] += chi[k - s] * v;
      if (t > s) for (let k = t; k < horizon; k++) out[k * size + s] += chi[k - t] * v;
    }
  }
  return out;
}

/** Regression and integrated mean over the coming periods. */
function futurePart(fit: Fit, known: Known, horizon: number, future: Readonly<Record<string, ArrayLike<number>>>): Float64Array {
  const { prepared, part } = known;
  const { levels, delta } = prepared;
  const out = new Float64Array(horizon);
  const start = timeAt(levels.start, levels.every, levels.n);
  for (const [name, regressor] of Object.entries(fit.options.regressors ?? {})) {
    if (isSeries(regressor)) {
      const offset = positionIn(regressor, start);
      const given = future[name];
      for (let k = 0; k < horizon; k++) {
        const v = given ? given[k] : offset + k >= 0 && offset + k < regressor.n ? regressor.values[offset + k] : NaN;
        if (v === undefined || Number.isNaN(v)) throw new RangeError(`forecast: the regressor ${name} has no value at ${timeAt(levels.start, levels.every, levels.n + k)}; give its future in regressors, or shorten the horizon`);
        out[k] += (fit.beta[name] ?? 0) * v;
      }
    } else {
      const made = interventionColumns(regressor, name, start, levels.every, horizon);
      made.names.forEach((column, j) => {
        const values = future[column] ?? made.columns[j];
        for (let k = 0; k < horizon; k++) out[k] += (fit.beta[column] ?? 0) * values[k];
      });
    }
  }
  if (fit.mean !== 0) {
    const lost = delta.length;
    // The integrated mean goes on from its own last values: `part` less the regression is not stored, so it is made again.
    const z = new Float64Array(part.length + horizon);
    for (let t = lost; t < z.length; t++) {
      let sum = 1;
      for (let i = 1; i <= lost; i++) if (delta[i - 1] !== 0) sum += delta[i - 1] * z[t - i];
      z[t] = sum;
    }
    for (let k = 0; k < horizon; k++) out[k] += fit.mean * z[part.length + k];
  }
  return out;
}
