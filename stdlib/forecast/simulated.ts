// Bands by simulation: uncertain parameters, and shocks drawn from the residuals that were seen.

import type { Fit, Note } from "../arma/model.ts";
import type { Series } from "../series/series.ts";
import { bootstrapFits, psiOfLevels, shocksOf } from "./bootstrapFits.ts";
import { fitPredictive } from "./fitPredictive.ts";
import type { ModelOutlook } from "./modelOutlook.ts";
import type { Forecaster, Rule } from "./model.ts";
import { sampleOutlook, type Outlook } from "./outlook.ts";
import { normals, seeded } from "./random.ts";
import { keptSteps } from "./reach.ts";
import { refit } from "./refit.ts";
import { rulePredictive } from "./rulePredictive.ts";
import { isRule, observedPositions } from "./rules.ts";
import { innovationsPath } from "./smoothing/innovations.ts";
import { undoOf, undoPath } from "./undo.ts";

/** Paths in all. */
const pathCount = 4000;

/** Sets of parameters: 100 for a few years of months; fewer where each is dear, since a long series leaves its parameters less uncertain. */
function setsFor({ values, n }: Series): number {
  const gaps = values.some((v) => Number.isNaN(v));
  return Math.round(Math.min(100, Math.max(30, (gaps ? 6000 : 20_000) / n)));
}

type PathMaker = (random: () => number) => Float64Array;

/** A forecast distribution by seeded simulation.
 *  A fit's parameters are estimated again on series simulated from it (a parametric bootstrap), each set forecasts from the
 *  observed data, and shocks are drawn with replacement from the fit's residuals, enlarged for the parameters used up.
 *  Source: Thombs & Schucany (1990); Pascual, Romo & Ruiz (2004). */
export function simulatedOutlook(model: Forecaster, horizon: number, regressors: Readonly<Record<string, Series>>, seed: number, plain: ModelOutlook): { readonly outlook: Outlook; readonly assumption: Note } {
  const { maker, assumption } = pathMaker(model, horizon, regressors, seed);
  const paths = (count: number, from: number): Float64Array[] => { const random = seeded(from + 7); return Array.from({ length: count }, () => maker(random)); };
  return { outlook: sampleOutlook(paths(pathCount, seed), plain.outlook.se, paths), assumption: { code: "bands-simulated", tone: "note", text: assumption } };
}

function pathMaker(model: Forecaster, horizon: number, regressors: Readonly<Record<string, Series>>, seed: number): { readonly maker: PathMaker; readonly assumption: string } {
  if (!isRule(model)) return fitPaths(model, horizon, regressors, seed);
  if (model.rule === "combine") {
    const makers = (model.members ?? []).map((member) => pathMaker(member, horizon, regressors, seed).maker);
    // Each path gives every member the same random numbers, so that their errors go together.
    const maker: PathMaker = (random) => {
      const own = Math.floor(random() * 4294967296), parts = makers.map((make) => make(seeded(own)));
      return parts[0].map((_, h) => parts.reduce((sum, part) => sum + part[h], 0) / parts.length);
    };
    return { maker, assumption: `Bands: from ${pathCount} simulated paths of the members, averaged path by path with shared random numbers.` };
  }
  const undo = undoOf(model.series, keptSteps(model), horizon), make = ruleMaker(model, horizon);
  return { maker: (random) => undoPath(undo.steps, make(random)), assumption: `Bands: from ${pathCount} simulated paths whose shocks are drawn from the rule's own past errors${model.rule === "smoothing" ? "; the estimated weights count as known" : ""}. They assume that coming errors are like past ones, in any order.` };
}

function fitPaths(fit: Fit, horizon: number, regressors: Readonly<Record<string, Series>>, seed: number): { readonly maker: PathMaker; readonly assumption: string } {
  const undo = undoOf(fit.series, keptSteps(fit), horizon), asked = setsFor(fit.series), boots = bootstrapFits(fit, asked, seed);
  const sets = boots.fits.map((boot) => {
    const here = refit(boot, fit.series, "held") as Fit;
    return { mean: fitPredictive(here, horizon, undo.times, regressors).mean, psi: psiOfLevels(boot, horizon) };
  });
  if (sets.length === 0) sets.push({ mean: fitPredictive(fit, horizon, undo.times, regressors).mean, psi: psiOfLevels(fit, horizon) });
  const shocks = shocksOf(fit);
  const maker: PathMaker = (random) => {
    const { mean, psi } = sets[Math.floor(random() * sets.length)], e = new Float64Array(horizon), path = new Float64Array(horizon);
    for (let h = 0; h < horizon; h++) {
      e[h] = shocks[Math.floor(random() * shocks.length)];
      path[h] = mean[h];
      for (let k = 0; k <= h; k++) path[h] += psi[k] * e[h - k];
    }
    return undoPath(undo.steps, path);
  };
  const lost = boots.failed > 0 ? ` (${boots.failed} of ${asked} sets could not be estimated and were left out)` : "";
  return { maker, assumption: `Bands: from ${pathCount} simulated paths with ${sets.length} sets of parameters, estimated again on series simulated from the model${lost}, and shocks drawn from its residuals${fit.phi.length + fit.seasonalPhi.length > 0 ? "; autoregressive coefficients are corrected for coming out too small in short samples" : ""}. They take in that the parameters are estimates and that shocks need not be normal; the orders count as known.` };
}

/** A path on the rule's own scale. */
function ruleMaker(model: Rule, horizon: number): PathMaker {
  const y = model.series.values, { mean } = rulePredictive(model, horizon), seen = observedPositions(y);
  const drawn = (errors: ArrayLike<number>, random: () => number): Float64Array => Float64Array.from({ length: horizon }, () => errors[Math.floor(random() * errors.length)]);
  switch (model.rule) {
    case "smoothing": {
      if (!model.smoothing) throw new RangeError("a smoothing rule is made by rule.smoothing, which estimates its weights");
      const { form, filtered, k } = model.smoothing, grown = Math.sqrt(filtered.count / Math.max(1, filtered.count - k + 1));
      const errors = Float64Array.from(seen, (t) => filtered.errors[t] * grown);
      return (random) => innovationsPath(form, filtered.after, drawn(errors, random));
    }
    case "average": {
      const centre = mean[0], errors = Float64Array.from(seen, (t) => (y[t] - centre) * Math.sqrt(seen.length / (seen.length - 1)));
      const sd = Math.sqrt(errors.reduce((s, e) => s + e * e, 0)) / seen.length;
      return (random) => { const off = sd * normals(random)(); return drawn(errors, random).map((e) => centre + off + e); };
    }
    case "seasonalNaive": {
      const m = model.length ?? 1, errors = [...y.keys()].slice(m).map((t) => y[t] - y[t - m]).filter((d) => !Number.isNaN(d));
      return (random) => { const path = drawn(errors, random); for (let h = m; h < horizon; h++) path[h] += path[h - m]; return path.map((e, h) => mean[h] + e); };
    }
    case "naive": case "drift": {
      const slope = model.rule === "drift" ? (y[seen[seen.length - 1]] - y[seen[0]]) / (seen[seen.length - 1] - seen[0]) : 0;
      const steps = seen.slice(1).map((t, i) => (y[t] - y[seen[i]] - (t - seen[i]) * slope) / Math.sqrt(t - seen[i]));
      const sd = model.rule === "drift" ? Math.sqrt(steps.reduce((s, e) => s + e * e, 0) / Math.max(1, steps.length - 1) / (seen[seen.length - 1] - seen[0])) : 0;
      const grown = model.rule === "drift" ? Math.sqrt(steps.length / Math.max(1, steps.length - 1)) : 1;
      return (random) => {
        const off = sd > 0 ? sd * normals(random)() : 0, path = drawn(steps, random);
        for (let h = 1; h < horizon; h++) path[h] += path[h - 1];
        return path.map((e, h) => mean[h] + e * grown + (h + 1) * off);
      };
    }
    case "combine": throw new RangeError("a combination is simulated member by member");
  }
}
