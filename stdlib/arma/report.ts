// From the search's numbers to the Fit an analyst reads: units back, names, criteria, residuals, roots.

import { makeSeries } from "../series/series.ts";
import { inOwnColumns } from "./covariance.ts";
import { denseFactor } from "./shape.ts";
import { filterLevels } from "./filter.ts";
import type { Information } from "./information.ts";
import { levelModel } from "./levelModel.ts";
import type { Work } from "./work.ts";
import type { Fit, Method, Note, Root, StandardErrors } from "./model.ts";
import { subtractColumn } from "./kernels.ts";
import { modelName } from "./modelName.ts";
import { parameterCount, type Numbers } from "./numbers.ts";
import { differencedBy, type Prepared } from "./prepare.ts";
import { roots } from "./roots.ts";

export interface Solution {
  readonly numbers: Numbers;
  readonly work: Work;
  /** phi, Phi, theta, Theta. */
  readonly x: Float64Array;
  readonly free: Int32Array;
  /** Coefficients of the data's columns after the gaps (basis, scaled). */
  readonly beta: Float64Array;
  /** In the scaled unit; left out: from the work at x. */
  readonly sigma2?: number;
  /** Of the scaled series; left out: the exact one at x and sigma2. */
  readonly logLikelihood?: number;
  readonly information: Information | null;
  readonly converged: boolean;
  readonly stationary: boolean;
  readonly method: Method;
  readonly notes: readonly Note[];
  /** False where nobody will read the residuals. */
  readonly residuals?: boolean;
  /** In the scaled unit, over the differenced rows; left out: from the exact filter. */
  readonly innovations?: Float64Array;
}

/** The estimates in the units of the series, with standard errors, residuals, criteria and roots. */
export function assemble(s: Solution): Fit {
  const { numbers, work } = s;
  const { prepared, unit, n } = numbers;
  const p = prepared;
  const regression = regressionPart(s);
  const sigma2Used = s.sigma2 ?? work.sigma2;
  const sigma2 = sigma2Used * unit ** 2;
  const value = s.logLikelihood ?? (s.stationary ? -0.5 * (n * Math.log(2 * Math.PI * sigma2Used) + work.logDet + work.sum / sigma2Used) : NaN);
  const logLikelihood = value - n * Math.log(unit);
  const k = parameterCount(p) - numbers.aliased.length;
  const phi = dense(s, 0), seasonalPhi = dense(s, 1), theta = dense(s, 2), seasonalTheta = dense(s, 3);
  const mean = regression.mean;
  const errors = (covariance: Float64Array | null) => standardErrors(s, covariance, unit);
  return {
    label: p.options.label ?? modelName(p.options), phi, theta, seasonalPhi, seasonalTheta, seasonLength: p.seasonLength,
    mean, constant: mean * (1 - sum(phi)) * (1 - sum(seasonalPhi)), beta: regression.beta,
    se: errors(s.information?.covariance ?? null), seRobust: s.information?.robust ? withoutHandfuls(errors(s.information.robust), p) : errors(null),
    sigma2, logLikelihood, ...criteria(logLikelihood, k, n), k, n,
    residuals: residualSeries(s), roots: { ar: factorRoots(s, 0, 1), ma: factorRoots(s, 2, 3) },
    converged: s.converged, notes: s.notes, method: s.method, series: p.series, options: p.options,
  };
}

/** AIC = -2 l + 2 k, AICc with k counting the variance, BIC with n after differencing. */
export function criteria(logLikelihood: number, k: number, n: number): { aic: number; aicc: number; bic: number } {
  const aic = -2 * logLikelihood + 2 * k;
  return { aic, aicc: n > k + 1 ? aic + 2 * k * (k + 1) / (n - k - 1) : NaN, bic: -2 * logLikelihood + k * Math.log(n) };
}

/** Coefficients of one factor, dense by its own lags. */
function dense(s: Solution, which: number): Float64Array {
  const f = s.numbers.prepared.shape.factors[which];
  const step = which % 2 === 1 ? s.numbers.prepared.shape.season : 1;
  const out = new Float64Array(f.lags.length > 0 ? f.lags[f.lags.length - 1] / step : 0);
  f.lags.forEach((lag, i) => { out[lag / step - 1] = s.x[f.from + i]; });
  return out;
}

function factorRoots(s: Solution, plain: number, seasonal: number): Root[] {
  const parts = s.numbers.prepared.shape.factors;
  const found = [plain, seasonal].flatMap(i => {
    const f = parts[i];
    if (f.lags.length === 0) return [];
    const c = denseFactor(f, s.x);
    const step = f.lags.every(l => l % f.lags[0] === 0) ? f.lags[0] : 1;
    const full = new Float64Array(c.length * step);
    c.forEach((v, k) => { full[(k + 1) * step - 1] = v; });
    return roots(full);
  });
  return found.sort((a, b) => a.modulus - b.modulus || b.im - a.im);
}

/** Coefficients of the kept columns in the data's units: least squares plus basis times what the likelihood added. */
function regressionPart(s: Solution): { mean: number; beta: Record<string, number> } {
  const { numbers, beta: b } = s;
  const { prepared: p, ols, basis, unit, kept } = numbers;
  const m = kept.length;
  const scaled = new Float64Array(m);
  for (let i = 0; i < m; i++) {
    let sum = 0;
    for (let j = i; j < m; j++) sum += basis[i * m + j] * b[j];
    scaled[i] = sum;
  }
  const beta: Record<string, number> = {};
  p.names.forEach((name, j) => { beta[name] = Number.isNaN(p.heldBeta[j]) ? 0 : p.heldBeta[j]; });
  let mean = p.hasMean && !Number.isNaN(p.heldMean) ? p.heldMean : 0;
  kept.forEach((j, i) => {
    const v = ols[i] + unit * scaled[i];
    if (j < 0) mean = v; else beta[p.names[j]] = v;
  });
  return { mean, beta };
}

function standardErrors(s: Solution, covariance: Float64Array | null, unit: number): StandardErrors {
  const { numbers, free, information } = s;
  const { prepared: p, basis, kept } = numbers;
  const k = free.length, size = information?.size ?? 0, own = covariance === null ? null : inOwnColumns(covariance, k, basis);
  const root = (v: number) => v > 0 && Number.isFinite(v) ? Math.sqrt(v) : NaN;
  const byCoefficient = new Float64Array(s.x.length).fill(NaN);
  const error = (i: number) => own === null ? NaN : root(own[i * size + i]);
  free.forEach((at, i) => { byCoefficient[at] = error(i); });
  const parts = p.shape.factors;
  const shaped = (which: number) => {
    const f = parts[which], step = which % 2 === 1 ? p.shape.season : 1;
    const out = new Float64Array(f.lags.length > 0 ? f.lags[f.lags.length - 1] / step : 0).fill(NaN);
    f.lags.forEach((lag, i) => { out[lag / step - 1] = byCoefficient[f.from + i]; });
    return out;
  };
  const beta: Record<string, number> = {};
  for (const name of p.names) beta[name] = NaN;
  let mean = NaN;
  kept.forEach((j, i) => {
    const se = unit * error(k + i);
    if (j < 0) mean = se; else beta[p.names[j]] = se;
  });
  return { phi: shaped(0), seasonalPhi: shaped(1), theta: shaped(2), seasonalTheta: shaped(3), mean, beta };
}

/** The sandwich reads a coefficient's spread from the residuals where its regressor acts. Where those are a handful (a pulse, a
 *  shift that was differenced), the coefficient fits them away: in simulations its figure was 0.42 of the usual one, so none is given. */
function withoutHandfuls(errors: StandardErrors, p: Prepared): StandardErrors {
  const beta: Record<string, number> = { ...errors.beta };
  p.names.forEach((name, j) => {
    const squares = differencedBy(p.delta, p.columns[j]).map(v => v * v || 0).sort().reverse();
    if (sum(squares.subarray(0, HANDFUL)) > 0.9 * sum(squares)) beta[name] = NaN;
  });
  return { ...errors, beta };
}

/** A pulse differenced twice leaves four values. */
const HANDFUL = 4;

function sum(values: Float64Array): number { let total = 0; for (const v of values) total += v; return total; }

/** One-step errors over the root of their relative variance, or the method's own, at the times of the fitted series. */
function residualSeries(s: Solution): Fit["residuals"] {
  const { prepared: p, from } = s.numbers;
  const own = s.innovations ? s.innovations.map(v => v * s.numbers.unit) : s.stationary && s.residuals !== false ? filteredErrors(s) : new Float64Array(0);
  let values = own;
  if (own.length !== p.series.n) { values = new Float64Array(p.series.n).fill(NaN); values.set(own, from); }
  return makeSeries({ name: "residuals", unit: p.series.unit, every: p.series.every, start: p.series.start, times: p.series.times, values });
}

/** Those of the exact filter, from the first predicted period on. The recursion's place in `work` serves for the series less its regressors. */
function filteredErrors(s: Solution): Float64Array {
  const { prepared: p, levels, levelColumns, unit } = s.numbers, model = levelModel(p.shape, s.x, p.delta);
  if (model === null) return new Float64Array(0);
  const series = s.work.a0.length === levels.length ? s.work.a0 : new Float64Array(levels.length);
  series.set(levels);
  s.beta.forEach((c, j) => subtractColumn(series, series, levelColumns[j], c, series.length));
  const { v: [errors], f } = filterLevels(model, [series]);
  for (let t = p.lost; t < errors.length; t++) errors[t] *= unit / Math.sqrt(f[t]);
  return p.lost > 0 ? errors.subarray(p.lost) : errors;
}
