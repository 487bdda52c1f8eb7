// Point forecasts and their uncertainty for the rules of comparison.

import type { Rule } from "./model.ts";
import { covarianceOfWeights, diagonalRoots, type Predictive } from "./predictive.ts";
import { observedPositions } from "./rules.ts";
import { innovationsPath, innovationsPaths, type SmoothingForm, type SmoothingState } from "./smoothing/innovations.ts";

/** Forecasts of a rule on the scale of its series. Residual variances: naive rules divide by the number of steps,
 *  drift by one less than that, average by n - 1, smoothing by n; parameters count as known.
 *  A combination has no scale of its own: it is put together in the units of the data. */
export function rulePredictive(model: Rule, horizon: number): Predictive {
  const y = model.series.values;
  switch (model.rule) {
    case "naive": return naive(y, horizon);
    case "seasonalNaive": return seasonalNaive(y, model.length ?? 1, horizon);
    case "drift": return drift(y, horizon);
    case "average": return average(y, horizon);
    case "smoothing": return smoothing(model, horizon);
    case "combine": throw new RangeError("a combination is forecast member by member");
  }
}

function naive(y: Float64Array, horizon: number): Predictive {
  const seen = observedPositions(y), last = seen[seen.length - 1], gap = y.length - 1 - last;
  // Over a gap of g periods a random walk's step has variance g: each counts by its length.
  let sum = 0;
  for (let i = 1; i < seen.length; i++) sum += (y[seen[i]] - y[seen[i - 1]]) ** 2 / (seen[i] - seen[i - 1]);
  const sigma2 = sum / (seen.length - 1);
  return normal(new Float64Array(horizon).fill(y[last]), horizon, (i, j) => sigma2 * (gap + Math.min(i, j)));
}

function seasonalNaive(y: Float64Array, m: number, horizon: number): Predictive {
  const n = y.length;
  let sum = 0, count = 0;
  for (let t = m; t < n; t++) { const d = y[t] - y[t - m]; if (!Number.isNaN(d)) { sum += d * d; count++; } }
  const sigma2 = count > 0 ? sum / count : NaN, mean = new Float64Array(horizon), seasons = new Float64Array(horizon);
  for (let h = 0; h < horizon; h++) {
    let from = n - m + (h % m), back = 0;
    while (from >= 0 && Number.isNaN(y[from])) { from -= m; back++; }
    mean[h] = from >= 0 ? y[from] : NaN;
    seasons[h] = Math.floor(h / m) + 1 + back;
  }
  return normal(mean, horizon, (i, j) => ((i - j) % m === 0 ? sigma2 * Math.min(seasons[i - 1], seasons[j - 1]) : 0));
}

function drift(y: Float64Array, horizon: number): Predictive {
  const seen = observedPositions(y), first = seen[0], last = seen[seen.length - 1], length = last - first, gap = y.length - 1 - last;
  const slope = (y[last] - y[first]) / length;
  let sum = 0;
  for (let i = 1; i < seen.length; i++) { const steps = seen[i] - seen[i - 1]; sum += (y[seen[i]] - y[seen[i - 1]] - steps * slope) ** 2 / steps; }
  const sigma2 = sum / (seen.length - 2);
  // The slope has variance sigma2 / length, and it enters h times.
  return normal(Float64Array.from({ length: horizon }, (_, h) => y[last] + (gap + h + 1) * slope), horizon,
    (i, j) => sigma2 * (gap + Math.min(i, j) + ((gap + i) * (gap + j)) / length));
}

function average(y: Float64Array, horizon: number): Predictive {
  const seen = observedPositions(y), n = seen.length, mean = seen.reduce((sum, t) => sum + y[t], 0) / n;
  const sigma2 = seen.reduce((sum, t) => sum + (y[t] - mean) ** 2, 0) / (n - 1);
  return normal(new Float64Array(horizon).fill(mean), horizon, (i, j) => sigma2 * ((i === j ? 1 : 0) + 1 / n));
}

function smoothing(model: Rule, horizon: number): Predictive {
  if (!model.smoothing) throw new RangeError("a smoothing rule is made by rule.smoothing, which estimates its weights");
  const { form, filtered } = model.smoothing, { after, sigma2 } = filtered;
  const mean = innovationsPath(form, after, new Float64Array(horizon));
  const multiplies = form.error === "multiplicative" || form.trend === "multiplicative" || form.season === "multiplicative";
  if (!multiplies) {
    const covariance = covarianceOfWeights(smoothingWeights(form, after, horizon), sigma2);
    return { mean, covariance: () => covariance, se: diagonalRoots(covariance, horizon) };
  }
  const sigma = Math.sqrt(sigma2);
  const paths = innovationsPaths(form, after), errors = new Float64Array(horizon);
  const draw = (normal: Float64Array, path: Float64Array): void => {
    for (let h = 0; h < horizon; h++) errors[h] = sigma * normal[h];
    paths(errors, path);
  };
  // First-order: what an error of one standard deviation does to the path. Bands come from the paths themselves.
  const covariance = firstOrderCovariance(form, after, sigma, mean);
  return { mean, covariance: () => covariance, se: diagonalRoots(covariance, horizon), draw };
}

/** What an error j periods back does to a forecast of the additive models: 1, then alpha + beta (damped sums) + gamma at whole seasons. */
function smoothingWeights(form: SmoothingForm, { alpha, beta, gamma, phi }: SmoothingState, horizon: number): Float64Array {
  const m = form.season === "none" ? 0 : form.length;
  let reach = 0;
  return Float64Array.from({ length: horizon }, (_, j) => {
    if (j === 0) return 1;
    reach += form.trend === "none" ? 0 : phi ** j;
    return alpha + beta * reach + (m > 0 && j % m === 0 ? gamma : 0);
  });
}

function firstOrderCovariance(form: SmoothingForm, after: SmoothingState, sigma: number, mean: Float64Array): Float64Array {
  const horizon = mean.length, c = new Float64Array(horizon * horizon);
  for (let k = 0; k < horizon; k++) {
    const errors = new Float64Array(horizon);
    errors[k] = sigma * 1e-4;
    const path = innovationsPath(form, after, errors);
    for (let i = k; i < horizon; i++) for (let j = k; j < horizon; j++) c[i * horizon + j] += 1e8 * (path[i] - mean[i]) * (path[j] - mean[j]);
  }
  return c;
}

/** @param entry  covariance of the errors i and j steps ahead, both from 1 on */
function normal(mean: Float64Array, horizon: number, entry: (i: number, j: number) => number): Predictive {
  const covariance = (): Float64Array => Float64Array.from({ length: horizon * horizon }, (_, at) => entry(Math.floor(at / horizon) + 1, (at % horizon) + 1));
  return { mean, covariance, se: Float64Array.from({ length: horizon }, (_, h) => Math.sqrt(entry(h + 1, h + 1))) };
}
