// The same model estimated again on series simulated from it: what else the parameters might have been.

import { expandedPolynomials } from "../arma/coefficients.ts";
import { fitAt } from "../arma/fitAt.ts";
import type { Fit } from "../arma/model.ts";
import { isStable } from "../arma/region.ts";
import { applySteps, stepOf } from "../series/steps.ts";
import { positionIn } from "../series/calendar.ts";
import { isSeries, type Series } from "../series/series.ts";
import type { Gradual } from "../gradual.ts";
import { interventionColumns } from "./interventions.ts";
import { seeded } from "./random.ts";
import { trailingDifferences } from "./reach.ts";
import { lagged, sparse, type Sparse } from "./sparse.ts";

/** Fits on `count` simulated series of the sample's length, which start from the observed first levels.
 *  Sets that cannot be estimated, or do not converge, are counted and left out. */
export function* bootstrapFits(fit: Fit, count: number, seed: number): Gradual<{ readonly fits: readonly Fit[]; readonly failed: number }> {
  const random = seeded(seed), simulate = simulator(fit), fits: Fit[] = [];
  let failed = 0;
  for (let r = 0; r < count; r++) {
    if (r > 0) yield { done: r, total: count, what: "sets of parameters" };
    try {
      const again = fitAt(fit, simulate(random), { residuals: false });
      if (again.converged) fits.push(again);
      else failed++;
    } catch (error) {
      if (!(error instanceof RangeError)) throw error;
      failed++;
    }
  }
  return { fits: corrected(fit, fits), failed };
}

/** Autoregressive coefficients are estimated too small in short samples, so that the simulated sets lie as far below the
 *  estimate as the estimate lies below the truth: they are moved up by twice the mean shortfall, or by as much of it as keeps
 *  a set stationary. Source: Kilian (1998), with the two corrections made in one. */
function corrected(fit: Fit, fits: readonly Fit[]): Fit[] {
  const meanOf = (pick: (f: Fit) => Float64Array): Float64Array => pick(fit).map((_, i) => fits.reduce((sum, f) => sum + pick(f)[i], 0) / fits.length);
  const bias = (pick: (f: Fit) => Float64Array): Float64Array => meanOf(pick).map((m, i) => m - pick(fit)[i]);
  if (fits.length === 0 || fit.phi.length + fit.seasonalPhi.length === 0) return [...fits];
  const plain = bias((f) => f.phi), seasonal = bias((f) => f.seasonalPhi);
  return fits.map((f) => {
    for (let share = 2; share > 0.01; share /= 2) {
      const moved = { ...f, phi: f.phi.map((v, i) => v - share * plain[i]), seasonalPhi: f.seasonalPhi.map((v, i) => v - share * seasonal[i]) };
      if (stationary(moved)) return moved;
    }
    return f;
  });
}

function stationary(fit: Fit): boolean {
  const lags = (c: Float64Array): number[] => Array.from(c, (_, i) => i + 1);
  return isStable(lags(fit.phi), fit.phi, 1) && isStable(lags(fit.seasonalPhi), fit.seasonalPhi, 1);
}

/** Residuals to draw shocks from: centred, and enlarged for the parameters that were estimated from them. */
export function shocksOf(fit: Fit): Float64Array {
  const seen = fit.residuals.values.filter((e) => !Number.isNaN(e)), n = seen.length, mean = seen.reduce((a, b) => a + b, 0) / n;
  const grown = Math.sqrt(n / Math.max(1, n - fit.k + 1));
  return seen.map((e) => (e - mean) * grown);
}

/** The model in levels (the scale before the differences): value = sum of ar times past values, and of ma times past shocks. */
export function recursionOfLevels(fit: Fit): { readonly ar: Sparse; readonly ma: Sparse } {
  const { phi, theta } = expandedPolynomials(fit);
  return { ar: sparse(times(phi, fit)), ma: sparse(theta) };
}

/** Coefficients from lag 1 of the autoregression with the differences multiplied in. */
function times(phi: Float64Array, fit: Fit): Float64Array {
  let c = Float64Array.of(1, ...phi.map((v) => -v));
  for (const lag of differenceLags(fit.series)) {
    const next = new Float64Array(c.length + lag);
    c.forEach((v, i) => { next[i] += v; next[i + lag] -= v; });
    c = next;
  }
  return c.slice(1).map((v) => -v);
}

function differenceLags(series: Series): number[] {
  return series.steps.slice(series.steps.length - trailingDifferences(series)).map((s) => (s.step === "difference" ? s.lag : 0));
}

/** Makes series from the model: shocks through the recursion, after a run-in, then summed from the observed first levels. */
function simulator(fit: Fit): (random: () => number) => Series {
  const shocks = shocksOf(fit), count = trailingDifferences(fit.series), steps = fit.series.steps.slice(fit.series.steps.length - count);
  const levels = steps.length > 0 ? steps[0].before : fit.series, regression = regressionOf(fit, levels), n = levels.n;
  const { phi, theta } = expandedPolynomials(fit), runIn = 50 + 5 * Math.max(phi.length, theta.length);
  const ar = sparse(phi), ma = sparse(theta), sums = sparse(times(new Float64Array(0), fit)), lost = sums.reach;
  const w = new Float64Array(runIn + n), e = new Float64Array(runIn + n), path = new Float64Array(n);
  return (random) => {
    for (let t = 0; t < w.length; t++) {
      e[t] = shocks[Math.floor(random() * shocks.length)];
      w[t] = e[t] + lagged(ar, w, t) + lagged(ma, e, t);
    }
    for (let t = 0; t < n; t++) {
      if (t >= lost) path[t] = w[runIn + t] + fit.mean + lagged(sums, path, t);
      else path[t] = Number.isNaN(levels.values[t]) ? 0 : levels.values[t] - regression[t];
    }
    // Missing where the sample is missing: gaps cost the simulated fits what they cost the real one.
    const values = path.map((v, t) => (Number.isNaN(levels.values[t]) ? NaN : v + regression[t]));
    return applySteps({ ...levels, values, steps: [] }, steps.map(stepOf));
  };
}

/** The regression part at the times of the levels. */
function regressionOf(fit: Fit, levels: Series): Float64Array {
  const sum = new Float64Array(levels.n);
  const add = (name: string, column: ArrayLike<number>): void => { for (let t = 0; t < levels.n; t++) sum[t] += (fit.beta[name] ?? 0) * column[t]; };
  for (const [name, regressor] of Object.entries(fit.options.regressors ?? {})) {
    if (isSeries(regressor)) {
      const offset = positionIn(regressor, levels.start);
      add(name, Float64Array.from({ length: levels.n }, (_, t) => regressor.values[t + offset] ?? 0).map((v) => (Number.isNaN(v) ? 0 : v)));
    } else {
      const { names, columns } = interventionColumns(regressor, name, levels.start, levels.every, levels.n);
      names.forEach((column, j) => add(column, columns[j]));
    }
  }
  return sum;
}
