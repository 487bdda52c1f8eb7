// Starting states of exponential smoothing: a first guess from the opening stretch, and the best ones of an additive model.

import { choleskyInto, choleskySolveInto } from "../../linear/cholesky.ts";
import { leastSquares } from "../../linear/leastSquares.ts";
import type { SmoothingForm, SmoothingState } from "./innovations.ts";

export type States0 = Pick<SmoothingState, "level" | "trend" | "seasonal">;

/** Level, trend and season from the first seasons: seasonal figures by a centred average, a line through what is left.
 *  Source: Hyndman, Koehler, Ord & Snyder (2008), section 2.6.1. */
export function openingStates(y: Float64Array, form: SmoothingForm): States0 {
  const m = form.season === "none" ? 0 : form.length, product = form.season === "multiplicative";
  const seasonal = m > 0 ? openingSeason(y, m, product) : new Float64Array(0);
  const adjusted = y.map((v, t) => (m === 0 ? v : product ? v / seasonal[t % m] : v - seasonal[t % m]));
  const stretch = [...adjusted.keys()].filter((t) => !Number.isNaN(adjusted[t])).slice(0, Math.max(10, 2 * m));
  const rows = stretch.length, x = new Float64Array(2 * rows), z = new Float64Array(rows);
  stretch.forEach((t, i) => { x[2 * i] = 1; x[2 * i + 1] = t + 1; z[i] = adjusted[t]; });
  const line = leastSquares(x, z, rows, 2), average = z.reduce((a, b) => a + b, 0) / rows;
  if (form.trend === "none") return { level: average, trend: 0, seasonal };
  if (form.trend === "additive") return { level: line.beta[0], trend: line.beta[1], seasonal };
  const level = line.beta[0] > 0 ? line.beta[0] : average;
  return { level, trend: Math.min(1.5, Math.max(0.5, (level + line.beta[1]) / level)), seasonal };
}

function openingSeason(y: Float64Array, m: number, product: boolean): Float64Array {
  const half = Math.floor(m / 2), n = Math.min(y.length, Math.max(2 * m + 2 * half, 5 * m));
  const sums = new Float64Array(m), counts = new Float64Array(m);
  for (let t = half; t + half < n; t++) {
    let average = 0;
    for (let j = -half; j <= half; j++) average += y[t + j] * (m % 2 === 0 && Math.abs(j) === half ? 0.5 : 1);
    const figure = product ? y[t] / (average / m) : y[t] - average / m;
    if (Number.isFinite(figure)) { sums[t % m] += figure; counts[t % m]++; }
  }
  const figures = sums.map((s, j) => (counts[j] > 0 ? s / counts[j] : product ? 1 : 0));
  const level = figures.reduce((a, b) => a + b, 0) / m;
  return figures.map((f) => (product ? Math.max(0.05, f / level) : f - level));
}

/** The starting states that make the sum of squared errors of an additive model smallest: its errors are linear in them.
 *  Season figures add up to 0. Cost n * states^2. */
export function bestStates(y: Float64Array, form: SmoothingForm, weights: Pick<SmoothingState, "alpha" | "beta" | "gamma" | "phi">): States0 {
  const { alpha, beta, gamma, phi } = weights, n = y.length;
  const m = form.season === "none" ? 0 : form.length, trended = form.trend === "additive";
  // One column a state: how each error falls when that state rises by 1. The last column is the series itself.
  const free = 1 + (trended ? 1 : 0) + Math.max(0, m - 1), columns = free + 1;
  const level = new Float64Array(columns), trend = new Float64Array(columns), season = new Float64Array(columns * m);
  level[0] = 1;
  if (trended) trend[1] = 1;
  const first = trended ? 2 : 1;
  for (let j = 0; j < m - 1; j++) { season[(first + j) * m + j] = 1; season[(first + j) * m + m - 1] = -1; }
  const cross = new Float64Array(columns * columns), row = new Float64Array(columns);
  for (let t = 0; t < n; t++) {
    const seen = !Number.isNaN(y[t]), at = m > 0 ? t % m : 0;
    for (let c = 0; c < columns; c++) {
      const q = level[c] + phi * trend[c], f = m > 0 ? q + season[c * m + at] : q;
      const error = seen ? (c === free ? y[t] : 0) - f : 0;
      row[c] = error;
      level[c] = q + alpha * error;
      trend[c] = phi * trend[c] + beta * error;
      if (m > 0) season[c * m + at] += gamma * error;
    }
    if (seen) for (let i = 0; i < columns; i++) { const v = row[i]; if (v !== 0) for (let j = 0; j <= i; j++) cross[i * columns + j] += v * row[j]; }
  }
  const x = solved(cross, free, columns);
  const seasonal = new Float64Array(m);
  for (let j = 0; j < m - 1; j++) { seasonal[j] = x[first + j]; seasonal[m - 1] -= x[first + j]; }
  return { level: x[0], trend: trended ? x[1] : 0, seasonal };
}

/** Minimises |last column + other columns x|: normal equations, scaled to a unit diagonal. */
function solved(cross: Float64Array, free: number, columns: number): Float64Array {
  const scale = Float64Array.from({ length: free }, (_, i) => 1 / Math.sqrt(cross[i * columns + i] || 1));
  const matrix = new Float64Array(free * free), x = new Float64Array(free);
  // A hair on the diagonal settles a state that the data do not tell apart from the others.
  for (let i = 0; i < free; i++) {
    for (let j = 0; j <= i; j++) matrix[i * free + j] = cross[i * columns + j] * scale[i] * scale[j] + (i === j ? 1e-12 : 0);
    x[i] = -cross[free * columns + i] * scale[i];
  }
  if (choleskyInto(matrix, free) >= 0) return x.fill(NaN);
  choleskySolveInto(matrix, free, x);
  return x.map((v, i) => v * scale[i]);
}
