// Starting states of exponential smoothing: a first guess from the opening stretch.

import { leastSquares } from "../../linear/leastSquares.ts";
import type { SmoothingForm, States0 } from "./innovations.ts";

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
