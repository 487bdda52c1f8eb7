// The covariance of a fit's estimates in their own units, and what it says about telling them apart.

import { inversePositive } from "../linear/cholesky.ts";

/** Covariance of (free coefficients, mean and regressors as the model has them) from that of (free coefficients, the orthogonal
 *  columns that the search worked with).
 *  @param basis  upper triangular, m x m flat by rows: the model's columns times `basis` are the orthogonal ones
 *  @returns (k + m) x (k + m), flat by rows */
export function inOwnColumns(covariance: Float64Array, k: number, basis: Float64Array): Float64Array {
  const size = Math.round(Math.sqrt(covariance.length)), m = size - k;
  const half = Float64Array.from(covariance), out = Float64Array.from(covariance);
  for (let i = 0; i < m; i++) for (let j = 0; j < size; j++) {
    let sum = 0;
    for (let a = i; a < m; a++) sum += basis[i * m + a] * covariance[(k + a) * size + j];
    half[(k + i) * size + j] = sum;
  }
  for (let i = 0; i < size; i++) for (let j = 0; j < m; j++) {
    let sum = 0;
    for (let a = j; a < m; a++) sum += half[i * size + k + a] * basis[j * m + a];
    out[i * size + k + j] = sum;
  }
  for (let i = 0; i < size; i++) for (let j = 0; j < k; j++) out[i * size + j] = half[i * size + j];
  return out;
}

/** Correlation of two estimates; NaN where one of them has no variance. */
export function correlationAt(covariance: Float64Array, size: number, i: number, j: number): number {
  return covariance[i * size + j] / Math.sqrt(covariance[i * size + i] * covariance[j * size + j]);
}

/** How many times each of some estimates' variances is what it would be if the others of them were known: the variance inflation
 *  factor (Marquardt 1970), in the metric of the likelihood. NaN where it cannot be told. */
export function inflation(covariance: Float64Array, size: number, at: readonly number[]): Float64Array {
  const m = at.length;
  const block = Float64Array.from({ length: m * m }, (_, e) => covariance[at[Math.floor(e / m)] * size + at[e % m]]);
  const inverse = inversePositive(block, m);
  return Float64Array.from(at, (_, i) => inverse === null ? NaN : block[i * m + i] * inverse[i * m + i]);
}
