// From a fit or rule to a forecast distribution in the units of the data.

import type { Note } from "../arma/model.ts";
import type { Series } from "../series/series.ts";
import { crpsOfQuantiles, levelOf } from "./byQuantiles.ts";
import { outlookOf, type Outlook } from "./outlook.ts";
import { fitPredictive } from "./fitPredictive.ts";
import type { Forecaster } from "./model.ts";
import type { Paths } from "./paths.ts";
import { keptSteps } from "./reach.ts";
import { rulePredictive } from "./rulePredictive.ts";
import { isRule } from "./rules.ts";
import { undoOf, type Undo } from "./undo.ts";

export interface ModelOutlook {
  readonly outlook: Outlook;
  /** The series in data units (or aggregated ones) up to the origin. */
  readonly base: Series;
  readonly times: readonly string[];
  readonly notes: readonly Note[];
}

/** Plug-in forecasts: the parameters count as known, the errors as normal.
 *  @param regressors  future values, by the fit's names
 *  @param seed        of the draws, where there is no closed form
 *  @param draws       how many stand for such a distribution; fewer where many forecasts are scored together */
export function modelOutlook(model: Forecaster, horizon: number, regressors: Readonly<Record<string, Series>> = {}, seed = 1, draws?: number): ModelOutlook {
  if (isRule(model) && model.rule === "combine") return combinedOutlook(model.members ?? [], horizon, regressors, seed, draws);
  const undo: Undo = undoOf(model.series, keptSteps(model), horizon);
  const predictive = isRule(model) ? rulePredictive(model, horizon) : fitPredictive(model, horizon, undo.times, regressors);
  return { outlook: outlookOf(predictive, undo.steps, seed, draws), base: undo.base, times: undo.times, notes: undo.notes };
}

/** The mean of the members, point by point and limit by limit: as if their errors rose and fell together, which is the
 *  cautious reading of forecasters who see the same data. */
function combinedOutlook(members: readonly Forecaster[], horizon: number, regressors: Readonly<Record<string, Series>>, seed: number, draws?: number): ModelOutlook {
  const parts = members.map((member) => modelOutlook(member, horizon, regressors, seed, draws)), [first] = parts;
  const origins = new Set(parts.map((p) => p.base.times[p.base.n - 1]));
  if (origins.size > 1) throw new RangeError(`rule.combine: the members end at different times (${[...origins].join(", ")}); cut them to one window`);
  const outlooks = parts.map((p) => p.outlook), mean = (pick: (o: Outlook) => Float64Array): Float64Array => averaged(outlooks.map(pick));
  const quantile = (p: number): Float64Array => mean((o) => o.quantile(p));
  // One seed for all: the members' shocks are then the same.
  const paths = (count: number, from: number): Paths => ({ count, horizon, values: averaged(outlooks.map((o) => o.paths(count, from).values)) });
  const outlook: Outlook = {
    horizon, mean: mean((o) => o.mean), median: quantile(0.5), sd: mean((o) => o.sd), se: mean((o) => o.sd), quantile, paths, normal: false, covariance: () => null,
    above: (h, value) => 1 - levelOf((p) => quantile(p)[h], value),
    crps: crpsOfQuantiles(quantile),
  };
  const notes: Note[] = [{ code: "combined", tone: "note", text: `A combination of ${members.length}: points and band limits are the means of the members', as if their errors rose and fell together.` }, ...parts.flatMap((p) => p.notes)];
  return { outlook, base: first.base, times: first.times, notes };
}

function averaged(parts: readonly Float64Array[]): Float64Array {
  const sum = new Float64Array(parts[0].length);
  for (const part of parts) for (let i = 0; i < sum.length; i++) sum[i] += part[i] / parts.length;
  return sum;
}
