// A forecast on the scale that a model works on, before the steps are undone: means, covariances, paths.

/** Joint distribution of the coming values on the modelled scale. Normal, unless `draw` says otherwise. */
export interface Predictive {
  readonly mean: Float64Array;
  /** Covariance matrix of the forecast errors, horizon x horizon, flat by rows. */
  readonly covariance: () => Float64Array;
  /** Standard errors. */
  readonly se: Float64Array;
  /** Makes a path of as many standard normal numbers, where the paths are not normal. */
  readonly draw?: (normal: Float64Array, path: Float64Array) => void;
}

/** Covariances of the forecast errors of a linear model from the weights of past shocks: weights[0] = 1 is the newest. */
export function covarianceOfWeights(weights: Float64Array, sigma2: number): Float64Array {
  const h = weights.length, c = new Float64Array(h * h);
  for (let lag = 0; lag < h; lag++) {
    let sum = 0;
    for (let i = 0; i + lag < h; i++) {
      sum += weights[i] * weights[i + lag];
      c[i * h + i + lag] = c[(i + lag) * h + i] = sigma2 * sum;
    }
  }
  return c;
}

/** Standard errors on the diagonal of a covariance matrix. */
export function diagonalRoots(c: Float64Array, size: number): Float64Array {
  return Float64Array.from({ length: size }, (_, i) => Math.sqrt(Math.max(0, c[i * size + i])));
}

/** Lower factor L of a covariance matrix, c = L L'; a matrix that is only semidefinite is allowed (its zero pivots stay zero). */
export function factorOf(c: Float64Array, size: number): Float64Array {
  const l = new Float64Array(size * size);
  for (let i = 0; i < size; i++) {
    for (let j = 0; j <= i; j++) {
      let sum = c[i * size + j];
      for (let k = 0; k < j; k++) sum -= l[i * size + k] * l[j * size + k];
      if (i === j) l[i * size + i] = sum > 1e-13 * c[i * size + i] ? Math.sqrt(sum) : 0;
      else l[i * size + j] = l[j * size + j] > 0 ? sum / l[j * size + j] : 0;
    }
  }
  return l;
}

/** A factor whose first column carries all of one weighted sum: c = F F', F size x (size + 1), and of weights' F only the first
 *  entry is not 0. Draws whose first numbers are spread evenly then spread the sum evenly, and its quantiles are sure.
 *  @param weights  of the sum, one a period
 *  @returns flat by rows. The remainder after the first column is what is left when the sum is known. */
export function factorAlong(c: Float64Array, size: number, weights: ArrayLike<number>): Float64Array {
  const along = new Float64Array(size), columns = size + 1, out = new Float64Array(size * columns);
  let variance = 0;
  for (let i = 0; i < size; i++) { for (let j = 0; j < size; j++) along[i] += c[i * size + j] * weights[j]; variance += weights[i] * along[i]; }
  const by = variance > 0 ? 1 / Math.sqrt(variance) : 0;
  const rest = factorOf(c.map((v, at) => v - by * along[Math.floor(at / size)] * by * along[at % size]), size);
  for (let i = 0; i < size; i++) { out[i * columns] = by * along[i]; for (let j = 0; j <= i; j++) out[i * columns + 1 + j] = rest[i * size + j]; }
  return out;
}
