// Search for outliers of four types in the residuals of a fit, and the regressor that would take each one out.

import { fit as estimate } from "../arma/fit.ts";
import type { Fit } from "../arma/model.ts";
import type { Gradual } from "../gradual.ts";
import { atOnce } from "../gradual.ts";
import { normalQuantile } from "../distributions/normal.ts";
import type { Intervention } from "../forecast/interventions.ts";
import { leastSquares } from "../linear/leastSquares.ts";
import type { OutlierType } from "./outlierPattern.ts";
import { patternOf, patternProducts, robustSigma } from "./outlierPattern.ts";
import { observedOf } from "./subject.ts";

export interface Outlier {
  readonly type: OutlierType;
  /** The type in words: "one period off", "a shock that works through", "a new level", "a change that fades". */
  readonly words: string;
  readonly time: string;
  /** Position in the residuals, from 0. */
  readonly index: number;
  /** Effect in its first period, on the scale before the model's differences (of the logs, say). */
  readonly size: number;
  readonly t: number;
  /** The regressor to add, as it is written: levelShift("2019-03"); null for an innovational outlier, which none takes out. */
  readonly regressor: string | null;
  /** The same as plain data. */
  readonly intervention: Intervention | null;
}

export interface Outliers {
  readonly found: readonly Outlier[];
  /** |t| that had to be passed. */
  readonly critical: number;
  /** Robust standard deviation of the residuals, outliers taken out. */
  readonly sigma: number;
  readonly status: "ok" | "unavailable";
  readonly sentence: string;
}

export interface OutlierOptions {
  /** |t| to pass; default the normal quantile at 1 - 0.0125/n, at least 3: a false find in about one clean series of fifteen. */
  readonly critical?: number | null;
  /** Types to look for; default all four. */
  readonly types?: readonly OutlierType[];
  /** How much of a temporary change is left after one period. */
  readonly decay?: number;
  /** Most outliers to report; default n/10, at most 12. */
  readonly most?: number | null;
  /** Estimate the model again with each find, as the paper does; default true up to 2,000 residuals. Without it a level shift
   *  hides in an autoregressive coefficient near 1 and passes for an innovational outlier. */
  readonly again?: boolean;
}

const words: Readonly<Record<OutlierType, string>> = { additive: "one period off", innovational: "a shock that works through the model", levelShift: "a new level", temporaryChange: "a change that fades" };

/** Outliers of a fit by the search of Chen & Liu (1993): each type's effect on the residuals is a known pattern, fitted by
 *  least squares at every time with a robust sigma (1.483 times the median absolute deviation). At the largest t above
 *  `critical` the model is estimated again with each type's regressor, the likelihood decides between the types, and the
 *  search goes on with that model; the ones that no longer pass in the last one leave.
 *  At the last residual the types look alike and the outlier is called additive.
 *  @throws RangeError for decay outside (0, 1). Cost per find O(n) times the model's lags, and up to three fits. */
export function outliers(fit: Fit, options: OutlierOptions = {}): Outliers {
  return atOnce(searchingOutliers(fit, options));
}

/** The same in slices, one a model estimated or a find. */
export function* searchingOutliers(fit: Fit, options: OutlierOptions = {}): Gradual<Outliers> {
  const { types = ["additive", "levelShift", "temporaryChange", "innovational"], decay = 0.7 } = options;
  if (!(decay > 0 && decay < 1)) throw new RangeError(`outliers: decay is ${decay}, expected a share between 0 and 1`);
  const seen = observedOf(fit.residuals.values), n = fit.residuals.n;
  const critical = options.critical ?? Math.max(3, normalQuantile(1 - 0.0125 / Math.max(n, 1)));
  if (seen.length < 12 || !(robustSigma(seen) > 0)) {
    return { found: [], critical, sigma: NaN, status: "unavailable", sentence: `The data cannot answer: ${seen.length < 12 ? `${seen.length} residuals are too few to tell outliers from the rest` : "more than half of the residuals are the same"}.` };
  }
  const most = options.most ?? Math.max(1, Math.min(12, Math.floor(n / 10)));
  const plan = { types, decay, critical, most };
  const { kept, sigma } = options.again ?? n <= 2000 ? yield* searchAgain(fit, plan) : yield* searchOnce(fit, plan);
  const found = kept.map((c) => describe(c, fit, decay)).sort((a, b) => a.index - b.index);
  return { found, critical, sigma, status: "ok", sentence: sentenceOf(found, critical) };
}

interface Plan { readonly types: readonly OutlierType[]; readonly decay: number; readonly critical: number; readonly most: number }
interface Found { readonly kept: readonly Candidate[]; readonly sigma: number }

/** One model throughout: patterns are taken out of its residuals one by one, then fitted together. */
function* searchOnce(fit: Fit, { types, decay, critical, most }: Plan): Gradual<Found> {
  const e = observedOrZero(fit), patterns = patternsOf(types, fit, decay);
  const picked: Candidate[] = [], clean = Float64Array.from(e);
  while (picked.length < most) {
    const best = strongest(clean, fit, decay, patterns, robustSigma(clean), picked);
    if (best === null || Math.abs(best.t) < critical) break;
    picked.push(best);
    yield { done: picked.length, total: most, what: "outliers" };
    subtract(clean, patterns.get(best.type) as Float64Array, best);
  }
  return together(e, picked, patterns, critical);
}

/** The model is estimated again with every find that a regressor can stand for. */
function* searchAgain(fit: Fit, { types, decay, critical, most }: Plan): Gradual<Found> {
  const shocks: Candidate[] = [];
  let current = fit, regressed: Candidate[] = [];
  while (shocks.length + regressed.length < most) {
    const e = observedOrZero(current);
    shocks.forEach((c) => { e[c.index] = 0; });
    const patterns = patternsOf(types, current, decay), sigma = robustSigma(e);
    const best = strongest(e, current, decay, patterns, sigma, [...shocks, ...regressed]);
    if (best === null || Math.abs(best.t) < critical) break;
    const total = e.reduce((s, v) => s + v * v, 0);
    // A shock explains its own residual and nothing else: its gain in log likelihood is that of taking it out.
    let gain = types.includes("innovational") ? (-e.length / 2) * Math.log(Math.max(1e-12, 1 - e[best.index] ** 2 / total)) : 0;
    let chosen: { fit: Fit; candidate: Candidate } | null = null;
    for (const type of types) {
      if (type === "innovational") continue;
      const candidate = { type, index: best.index, size: NaN, t: NaN };
      const tried = withRegressors(fit, [...regressed, candidate], decay);
      yield { done: shocks.length + regressed.length, total: most, what: "outliers" };
      if (tried === null || tried.logLikelihood - current.logLikelihood <= gain) continue;
      const t = statistic(tried, regressed.length, tried.logLikelihood - current.logLikelihood);
      if (Math.abs(t) < critical) continue;
      gain = tried.logLikelihood - current.logLikelihood;
      chosen = { fit: tried, candidate: { ...candidate, t } };
    }
    if (chosen !== null) {
      regressed = [...regressed, chosen.candidate];
      current = chosen.fit;
    } else {
      const t = e[best.index] / sigma;
      if (!types.includes("innovational") || Math.abs(t) < critical) break;
      shocks.push({ type: "innovational", index: best.index, size: e[best.index], t });
    }
  }
  const e = observedOrZero(current);
  shocks.forEach((c) => { e[c.index] = 0; });
  const kept = regressed.map((c, i): Candidate => ({ ...c, size: current.beta[nameOf(i)], t: statistic(current, i, c.t ** 2 / 2) })).filter((c) => Math.abs(c.t) >= critical);
  return { kept: [...kept, ...shocks], sigma: robustSigma(e) };
}

const nameOf = (i: number): string => `outlier${i + 1}`;

/** The coefficient over its standard error; where a root on the unit circle leaves none, the signed root of twice the gain. */
function statistic(fit: Fit, i: number, gain: number): number {
  const beta = fit.beta[nameOf(i)], t = beta / fit.se.beta[nameOf(i)];
  return Number.isFinite(t) ? t : Math.sign(beta) * Math.sqrt(2 * Math.max(0, gain));
}

/** The fit with regressors for these; null where it cannot be had (the error is the reason why this type is not proposed). */
function withRegressors(fit: Fit, candidates: readonly Candidate[], decay: number): Fit | null {
  const added = Object.fromEntries(candidates.map((c, i) => [nameOf(i), interventionOf(c, fit, decay) as Intervention]));
  try {
    return estimate({ ...fit.options, regressors: { ...fit.options.regressors, ...added } });
  } catch (error) {
    if (error instanceof RangeError) return null;
    throw error;
  }
}

function observedOrZero(fit: Fit): Float64Array {
  return fit.residuals.values.map((v) => (Number.isNaN(v) ? 0 : v));
}

function patternsOf(types: readonly OutlierType[], fit: Fit, decay: number): ReadonlyMap<OutlierType, Float64Array> {
  return new Map(types.map((type) => [type, patternOf(type, fit, decay, fit.residuals.n)]));
}

interface Candidate { readonly type: OutlierType; readonly index: number; readonly size: number; readonly t: number }

/** The largest |t| over types and times not yet picked. */
function strongest(e: Float64Array, fit: Fit, decay: number, patterns: ReadonlyMap<OutlierType, Float64Array>, sigma: number, picked: readonly Candidate[]): Candidate | null {
  let best: Candidate | null = null;
  const n = e.length, taken = new Set(picked.map((c) => c.index));
  for (const [type, x] of patterns) {
    const products = patternProducts(type, fit, decay, e);
    let squares = 0;
    // An outlier at index reaches the n - index residuals from there on: the sums grow towards the start.
    for (let index = n - 1; index >= 0; index--) {
      squares += x[n - 1 - index] ** 2;
      if (index === n - 1 && type !== "additive" && patterns.has("additive")) continue;
      // A level that is new from the first residual on is the mean's business.
      if ((type === "levelShift" && index === 0) || taken.has(index)) continue;
      const t = products[index] / (sigma * Math.sqrt(squares));
      // The earliest of equals, whichever way the series is gone through.
      if (best === null || Math.abs(t) > Math.abs(best.t) + 1e-9 || (best.type === type && Math.abs(t) >= Math.abs(best.t) - 1e-9)) best = { type, index, size: products[index] / squares, t };
    }
  }
  return best;
}

/** All picked ones fitted together on the first residuals; the weakest leaves until all pass. */
function together(e: Float64Array, picked: readonly Candidate[], patterns: ReadonlyMap<OutlierType, Float64Array>, critical: number): { kept: Candidate[]; sigma: number } {
  let kept = [...picked];
  const n = e.length;
  for (;;) {
    if (kept.length === 0) return { kept, sigma: robustSigma(e) };
    const X = new Float64Array(n * kept.length);
    kept.forEach((c, k) => {
      const x = patterns.get(c.type) as Float64Array;
      for (let t = c.index; t < n; t++) X[t * kept.length + k] = x[t - c.index];
    });
    const { beta, inverse, residuals } = leastSquares(X, e, n, kept.length);
    const sigma = robustSigma(residuals);
    const fitted = kept.map((c, k): Candidate => ({ ...c, size: beta[k], t: beta[k] / (sigma * Math.sqrt(inverse[k * kept.length + k])) }));
    const weakest = fitted.reduce((a, b) => (Math.abs(b.t) < Math.abs(a.t) || Number.isNaN(b.t) ? b : a));
    if (Math.abs(weakest.t) >= critical) return { kept: fitted, sigma };
    kept = fitted.filter((c) => c !== weakest);
  }
}

function subtract(e: Float64Array, x: Float64Array, { index, size }: Candidate): void {
  for (let t = index; t < e.length; t++) e[t] -= size * x[t - index];
}

function interventionOf(c: Candidate, fit: Fit, decay: number): Intervention | null {
  const at = fit.residuals.times[c.index];
  if (c.type === "additive") return { intervention: "pulse", at };
  if (c.type === "levelShift") return { intervention: "levelShift", at };
  return c.type === "temporaryChange" ? { intervention: "temporaryChange", at, decay } : null;
}

function describe(c: Candidate, fit: Fit, decay: number): Outlier {
  const at = fit.residuals.times[c.index], intervention = interventionOf(c, fit, decay);
  const regressor = intervention === null ? null : c.type === "temporaryChange" ? `temporaryChange("${at}", ${decay})` : `${intervention.intervention}("${at}")`;
  return { ...c, words: words[c.type], time: at, regressor, intervention };
}

function sentenceOf(found: readonly Outlier[], critical: number): string {
  if (found.length === 0) return `No single period stands out: no outlier of any type passes |t| = ${critical.toFixed(1)}.`;
  const largest = found.reduce((a, b) => (Math.abs(b.t) > Math.abs(a.t) ? b : a));
  const add = largest.regressor === null ? "no regressor takes such a shock out" : `${largest.regressor} as a regressor would take it out`;
  return `${found.length === 1 ? "One period stands" : `${found.length} periods stand`} out (|t| above ${critical.toFixed(1)}); the largest is ${largest.words} at ${largest.time} (t = ${largest.t.toFixed(1)}): ${add}. The data cannot say why.`;
}
