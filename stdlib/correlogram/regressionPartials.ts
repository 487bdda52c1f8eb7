// Partial autocorrelations as the last coefficients of regressions on the lags.

import { choleskyInto } from "../linear/cholesky.ts";
import { leastSquares } from "../linear/leastSquares.ts";
import { centre, laggedSums } from "./autocovariance.ts";

/** Each lag's own regression on its own complete rows. Within a run without gaps the cross products of one order follow
 *  from those of the order before by what enters and leaves at its ends, so that no row is gone through again. */
export function regressionPartials(values: Float64Array, lags: number): Float64Array {
  const partial = new Float64Array(lags + 1);
  partial[0] = 1;
  const { deviations, seen } = centre(values); // with a constant in the regression, a shift changes nothing but the digits
  const runs = runsOf(deviations, seen);
  const sums = runs.map((run) => ({ run, products: run.length > 1 ? laggedSums(run, run, Math.min(lags, run.length - 1)) : new Float64Array(0), total: run.reduce((a, b) => a + b, 0) }));
  for (let k = 1; k <= lags; k++) {
    const size = k + 1, gram = new Float64Array(size * size), means = new Float64Array(size);
    let rows = 0;
    for (const { run, products, total } of sums) {
      if (run.length <= k) continue;
      rows += run.length - k;
      addRun(run, products, total, k, gram, means);
    }
    partial[k] = rows <= k + 1 ? NaN : lastCoefficient(gram, means, rows, k) ?? byReflections(deviations, seen, k);
  }
  return partial;
}

/** Stretches without gaps. */
function runsOf(x: Float64Array, seen: Float64Array | null): Float64Array[] {
  if (seen === null) return [x];
  const runs: Float64Array[] = [];
  for (let from = 0, to = 0; from < x.length; from = to + 1) {
    for (to = from; to < x.length && seen[to] === 1; ) to++;
    if (to > from) runs.push(x.subarray(from, to));
  }
  return runs;
}

/** Adds a run's cross products of (x_t, x_{t-1}, .., x_{t-k}), t from k on, and their sums. */
function addRun(x: Float64Array, products: Float64Array, total: number, k: number, gram: Float64Array, means: Float64Array): void {
  const n = x.length, size = k + 1;
  let sum = total;
  for (let t = 0; t < k; t++) sum -= x[t];
  for (let i = 0; i <= k; i++) {
    means[i] += sum;
    if (i < k) sum += x[k - 1 - i] - x[n - 1 - i];
  }
  for (let apart = 0; apart <= k; apart++) {
    let product = products[apart];
    for (let t = apart; t < k; t++) product -= x[t] * x[t - apart];
    for (let i = 0; i + apart <= k; i++) {
      gram[(i + apart) * size + i] += product;
      if (i + apart < k) product += x[k - 1 - i] * x[k - 1 - i - apart] - x[n - 1 - i] * x[n - 1 - i - apart];
    }
  }
}

/** Coefficient of lag k in the regression of lag 0 on a constant and lags 1..k; null where the cross products have lost
 *  too many digits to say. */
function lastCoefficient(gram: Float64Array, sums: Float64Array, rows: number, k: number): number | null {
  const size = k + 1, l = new Float64Array(size * size);
  // The target stands last: lag i at i - 1, lag 0 at k.
  const place = (i: number): number => (i === 0 ? k : i - 1);
  for (let i = 0; i <= k; i++) for (let j = 0; j <= i; j++) {
    const value = gram[i * size + j] - (sums[i] * sums[j]) / rows, a = place(i), b = place(j);
    l[Math.max(a, b) * size + Math.min(a, b)] = value;
  }
  const scale = Float64Array.from({ length: size }, (_, i) => Math.sqrt(l[i * size + i]));
  if (scale.some((v) => !(v > 0))) return null;
  for (let i = 0; i < size; i++) for (let j = 0; j <= i; j++) l[i * size + j] /= scale[i] * scale[j];
  const stopped = choleskyInto(l, size);
  if (stopped >= 0 && stopped < k) return null;
  for (let i = 0; i < k; i++) if (l[i * size + i] ** 2 < 1e-6) return null;
  return ((l[k * size + k - 1] / l[(k - 1) * size + k - 1]) * scale[k]) / scale[k - 1];
}

function byReflections(deviations: Float64Array, seen: Float64Array | null, k: number): number {
  const rows: number[] = [];
  for (let t = k; t < deviations.length; t++) if (seen === null || allSeen(seen, t - k, t)) rows.push(t);
  const X = new Float64Array(rows.length * (k + 1)), y = new Float64Array(rows.length);
  rows.forEach((t, i) => {
    y[i] = deviations[t];
    X[i * (k + 1)] = 1;
    for (let j = 1; j <= k; j++) X[i * (k + 1) + j] = deviations[t - j];
  });
  return leastSquares(X, y, rows.length, k + 1).beta[k];
}

function allSeen(seen: Float64Array, from: number, to: number): boolean {
  for (let t = from; t <= to; t++) if (seen[t] === 0) return false;
  return true;
}
