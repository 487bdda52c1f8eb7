// How uncertain the coefficients of a fit's regressors are together: what a difference between two futures of them rests on.

import { inversePositive } from "../linear/cholesky.ts";
import { filterLevels } from "./filter.ts";
import { knownOf } from "./known.ts";
import type { Fit } from "./model.ts";
import { integrated } from "./numbers.ts";

/** Covariance of the regressors' coefficients by generalised least squares, the ARMA coefficients as estimated: sigma2 times the
 *  inverse of the sum of products of the regressors' innovations.
 *  @param names  columns as the fit names them
 *  @returns names x names, flat by rows; rows and columns of held coefficients are 0; null where the data do not tell the
 *           coefficients apart. Cost: one filter pass a column. Source: Harvey & Phillips (1979). */
export function regressionCovariance(fit: Fit, names: readonly string[]): Float64Array | null {
  const { prepared, model, from, rest } = knownOf(fit), length = rest.length, beta = fit.options.hold?.beta ?? {};
  const free = prepared.names.map((name, j) => ({ name, column: prepared.columns[j] })).filter(({ name }) => typeof beta[name] !== "number");
  const columns: Float64Array[] = free.map(({ column }) => Float64Array.from({ length }, (_, t) => column[from + t] || 0));
  if (prepared.hasMean && Number.isNaN(prepared.heldMean)) columns.push(integrated(prepared.delta, length));
  const m = columns.length, { v, f } = filterLevels(model, [rest, ...columns]), information = new Float64Array(m * m);
  for (let t = 0; t < length; t++) {
    if (Number.isNaN(f[t])) continue;
    for (let i = 0; i < m; i++) for (let j = 0; j < m; j++) information[i * m + j] += (v[i + 1][t] * v[j + 1][t]) / f[t];
  }
  const inverse = inversePositive(information, m);
  if (inverse === null) return null;
  const at = names.map((name) => free.findIndex((one) => one.name === name)), size = names.length;
  return Float64Array.from({ length: size * size }, (_, k) => {
    const i = at[Math.floor(k / size)], j = at[k % size];
    return i < 0 || j < 0 ? 0 : fit.sigma2 * inverse[i * m + j];
  });
}
