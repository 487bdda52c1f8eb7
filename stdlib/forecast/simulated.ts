// Bands by simulation: uncertain parameters, and shocks drawn from the residuals that were seen.

import type { Fit, Note } from "../arma/model.ts";
import { normalQuantile } from "../distributions/normal.ts";
import type { Series } from "../series/series.ts";
import { bootstrapFits, recursionOfLevels, shocksOf } from "./bootstrapFits.ts";
import { fitPredictive } from "./fitPredictive.ts";
import type { Gradual } from "../gradual.ts";
import type { ModelOutlook } from "./modelOutlook.ts";
import type { Forecaster, Rule } from "./model.ts";
import { sampleOutlook, type Outlook } from "./outlook.ts";
import { lagged } from "./sparse.ts";
import { pathCount, pathsOf, undoPaths, type Paths } from "./paths.ts";
import { seeded, stratified } from "./random.ts";
import { keptSteps } from "./reach.ts";
import { rulePredictive } from "./rulePredictive.ts";
import { isRule, observedPositions } from "./rules.ts";
import { innovationsPaths } from "./smoothing/innovations.ts";
import { undoOf } from "./undo.ts";

/** Sets of parameters: 100 for a few years of months; fewer where each is dear, since a long series leaves its parameters less uncertain. */
function setsFor({ values, n }: Series): number {
  const gaps = values.some((v) => Number.isNaN(v));
  return Math.round(Math.min(100, Math.max(30, (gaps ? 6000 : 20_000) / n)));
}

/** Writes one path on the modelled scale.
 *  @param uniform  horizon + 1 numbers between 0 and 1: one a shock, the last for what is uncertain besides
 *  @param i        number of the path */
type PathMaker = (path: Float64Array, uniform: Float64Array, i: number) => void;

/** Paths in data units, from a seed; two makers with one seed use the same numbers, so that their errors go together. */
type PathSource = (count: number, seed: number) => Paths;

/** A forecast distribution by seeded simulation.
 *  A fit's parameters are estimated again on series simulated from it (a parametric bootstrap), each set forecasts from the
 *  observed data, and shocks are drawn with replacement from the fit's residuals, enlarged for the parameters used up.
 *  Source: Thombs & Schucany (1990); Pascual, Romo & Ruiz (2004). */
export function* simulatedOutlook(model: Forecaster, horizon: number, regressors: Readonly<Record<string, Series>>, seed: number, plain: ModelOutlook, sets?: ParameterSets): Gradual<{ readonly outlook: Outlook; readonly assumption: Note }> {
  const { source, assumption } = yield* pathSource(model, horizon, regressors, seed, sets);
  return { outlook: sampleOutlook(source, pathCount, seed, plain.outlook.se), assumption: { code: "bands-simulated", tone: "note", text: assumption } };
}

/** Sets of parameters for a fit, estimated when first asked for: they do not depend on the regressors' future. */
export type ParameterSets = () => Gradual<{ readonly fits: readonly Fit[]; readonly failed: number }>;

/** Nothing is estimated before the first call; later ones give the same sets. */
export function parameterSets(fit: Fit, seed: number): ParameterSets {
  let known: { readonly fits: readonly Fit[]; readonly failed: number } | null = null;
  return function* () { return (known ??= yield* bootstrapFits(fit, setsFor(fit.series), seed)); };
}

function* pathSource(model: Forecaster, horizon: number, regressors: Readonly<Record<string, Series>>, seed: number, given?: ParameterSets): Gradual<{ readonly source: PathSource; readonly assumption: string }> {
  if (isRule(model) && model.rule === "combine") {
    const sources: PathSource[] = [];
    for (const member of model.members ?? []) sources.push((yield* pathSource(member, horizon, regressors, seed)).source);
    const source: PathSource = (count, from) => {
      const each = sources.map((one) => one(count, from).values);
      return { count, horizon, values: each[0].map((_, at) => each.reduce((sum, values) => sum + values[at], 0) / each.length) };
    };
    return { source, assumption: `Bands: from ${pathCount} simulated paths of the members, averaged path by path with shared random numbers. They assume of each member what its own simulated bands would: that coming errors are like past ones, and that its form is right.` };
  }
  const { maker, assumption } = isRule(model) ? rulePaths(model, horizon) : yield* fitPaths(model, horizon, regressors, given ?? parameterSets(model, seed));
  const { steps } = undoOf(model.series, keptSteps(model), horizon);
  const source: PathSource = (count, from) => {
    const rows = stratified(horizon + 1, count, seeded(from + 7)), uniform = new Float64Array(horizon + 1);
    return undoPaths(steps, pathsOf(count, horizon, (path, i) => {
      for (let h = 0; h <= horizon; h++) uniform[h] = rows[h * count + i];
      maker(path, uniform, i);
    }));
  };
  return { source, assumption };
}

function* fitPaths(fit: Fit, horizon: number, regressors: Readonly<Record<string, Series>>, given: ParameterSets): Gradual<{ readonly maker: PathMaker; readonly assumption: string }> {
  const { times } = undoOf(fit.series, keptSteps(fit), horizon), boots = yield* given();
  const sets = (boots.fits.length > 0 ? boots.fits : [fit]).map((boot) => ({
    // The set's coefficients put to what was really observed.
    mean: fitPredictive({ ...boot, series: fit.series, options: { ...fit.options, series: fit.series, window: undefined } }, horizon, times, regressors).mean,
    recursion: recursionOfLevels(boot),
  }));
  const shocks = shocksOf(fit), e = new Float64Array(horizon);
  const maker: PathMaker = (path, uniform, i) => {
    // Each set makes as many paths as the next: its choice adds no noise of its own.
    const { mean, recursion: { ar, ma } } = sets[i % sets.length];
    // First what the coming shocks add up to in the levels, then the mean below it.
    for (let h = 0; h < horizon; h++) {
      e[h] = shocks[Math.floor(uniform[h] * shocks.length)];
      path[h] = e[h] + lagged(ar, path, h) + lagged(ma, e, h);
    }
    for (let h = 0; h < horizon; h++) path[h] += mean[h];
  };
  const lost = boots.failed > 0 ? ` (${boots.failed} of ${boots.fits.length + boots.failed} sets could not be estimated and were left out)` : "";
  return { maker, assumption: `Bands: from ${pathCount} simulated paths with ${sets.length} sets of parameters, estimated again on series simulated from the model${lost}, and shocks drawn from its residuals${fit.phi.length + fit.seasonalPhi.length > 0 ? "; autoregressive coefficients are corrected for coming out too small in short samples" : ""}. They take in that the parameters are estimates and that shocks need not be normal; the orders count as known.` };
}

function rulePaths(model: Rule, horizon: number): { readonly maker: PathMaker; readonly assumption: string } {
  return { maker: ruleMaker(model, horizon), assumption: `Bands: from ${pathCount} simulated paths whose shocks are drawn from the rule's own past errors${model.rule === "smoothing" ? "; the estimated weights count as known" : ""}. They assume that coming errors are like past ones, in any order.` };
}

/** Paths on the rule's own scale. */
function ruleMaker(model: Rule, horizon: number): PathMaker {
  const y = model.series.values, { mean } = rulePredictive(model, horizon), seen = observedPositions(y);
  const drawnInto = (path: Float64Array, errors: ArrayLike<number>, uniform: Float64Array): void => { for (let h = 0; h < horizon; h++) path[h] = errors[Math.floor(uniform[h] * errors.length)]; };
  switch (model.rule) {
    case "smoothing": {
      if (!model.smoothing) throw new RangeError("a smoothing rule is made by rule.smoothing, which estimates its weights");
      const { form, filtered, k } = model.smoothing, grown = Math.sqrt(filtered.count / Math.max(1, filtered.count - k + 1));
      const errors = Float64Array.from(seen, (t) => filtered.errors[t] * grown), shocks = new Float64Array(horizon), follow = innovationsPaths(form, filtered.after);
      return (path, uniform) => { drawnInto(shocks, errors, uniform); follow(shocks, path); };
    }
    case "average": {
      const centre = mean[0], errors = Float64Array.from(seen, (t) => (y[t] - centre) * Math.sqrt(seen.length / (seen.length - 1)));
      const sd = Math.sqrt(errors.reduce((s, e) => s + e * e, 0)) / seen.length;
      return (path, uniform) => {
        const off = sd * normalQuantile(uniform[horizon]);
        drawnInto(path, errors, uniform);
        for (let h = 0; h < horizon; h++) path[h] += centre + off;
      };
    }
    case "seasonalNaive": {
      const m = model.length ?? 1, errors = [...y.keys()].slice(m).map((t) => y[t] - y[t - m]).filter((d) => !Number.isNaN(d));
      return (path, uniform) => {
        drawnInto(path, errors, uniform);
        for (let h = m; h < horizon; h++) path[h] += path[h - m];
        for (let h = 0; h < horizon; h++) path[h] += mean[h];
      };
    }
    case "naive": case "drift": {
      const slope = model.rule === "drift" ? (y[seen[seen.length - 1]] - y[seen[0]]) / (seen[seen.length - 1] - seen[0]) : 0;
      const steps = seen.slice(1).map((t, i) => (y[t] - y[seen[i]] - (t - seen[i]) * slope) / Math.sqrt(t - seen[i]));
      const sd = model.rule === "drift" ? Math.sqrt(steps.reduce((s, e) => s + e * e, 0) / Math.max(1, steps.length - 1) / (seen[seen.length - 1] - seen[0])) : 0;
      const grown = model.rule === "drift" ? Math.sqrt(steps.length / Math.max(1, steps.length - 1)) : 1;
      return (path, uniform) => {
        const off = sd > 0 ? sd * normalQuantile(uniform[horizon]) : 0;
        drawnInto(path, steps, uniform);
        for (let h = 1; h < horizon; h++) path[h] += path[h - 1];
        for (let h = 0; h < horizon; h++) path[h] = mean[h] + path[h] * grown + (h + 1) * off;
      };
    }
    case "combine": throw new RangeError("a combination is simulated member by member");
  }
}
