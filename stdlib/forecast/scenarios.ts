// Several futures of the regressors side by side, and what each makes against the first.

import type { Fit, Note } from "../arma/model.ts";
import type { Series } from "../series/series.ts";
import { bandsOf } from "./bands.ts";
import { differenceOutlook, lessen } from "./differenceOutlook.ts";
import type { Figures, Forecaster, ForecastOptions, Scenario } from "./model.ts";
import type { ModelOutlook } from "./modelOutlook.ts";
import { once } from "./once.ts";
import { sampleOutlook, type Outlook } from "./outlook.ts";
import { pathCount } from "./paths.ts";
import { isRule } from "./rules.ts";
import { totalsOf } from "./totals.ts";

export interface Future { readonly label: string | null; readonly regressors: Readonly<Record<string, Series>> }

/** The futures asked for: one without a label, or the scenarios.
 *  @throws RangeError where the model has no regressors that scenarios could be about */
export function futuresOf(model: Forecaster, { regressors = {}, scenarios }: ForecastOptions): readonly Future[] {
  if (scenarios === undefined || scenarios === null) return [{ label: null, regressors }];
  const labels = Object.keys(scenarios);
  if (isRule(model)) throw new RangeError(`scenarios: ${model.label} is a rule and has no regressors; scenarios need a fit with regressors that are series`);
  if (labels.length < 2) throw new RangeError("scenarios: give two or more to set side by side, as in {low: {price: cheap}, high: {price: dear}}; a single future goes into regressors");
  return labels.map((label) => {
    const own = scenarios[label];
    if (typeof own !== "object" || own === null || "values" in own) throw new RangeError(`scenarios: ${label} is not an object of series by the names that the fit uses, as in {${label}: {price: cheap}}`);
    return { label, regressors: { ...regressors, ...own } };
  });
}

/** @param made  the forecasts of the futures, in their order */
export function scenariosOf(fit: Fit, options: ForecastOptions, futures: readonly Future[], made: readonly { readonly banded: ModelOutlook; readonly figures: Figures }[]): { readonly scenarios: Readonly<Record<string, Scenario>>; readonly notes: readonly Note[] } {
  const labels = futures.map((future) => future.label ?? ""), simulated = options.bands === "simulated";
  const scenarios = Object.fromEntries(made.map(({ figures }, i) => [labels[i], { ...figures, label: labels[i], difference: i === 0 ? null : differenceOf(i) }]));
  return { scenarios, notes: [{ code: "scenarios", tone: "note", text: `Differences are from ${labels[0]}. The same shocks befall every scenario, so the band of a difference is not that of two forecasts: it holds ${simulated ? "what the sets of parameters leave open" : "how uncertain the coefficients of the regressors are"}${fit.series.steps.some((s) => s.step === "log" || s.step === "boxCox") ? ", and the level on which they act" : ""}. That what moved together in the past would also do so if somebody moved it, is assumed, not shown.` }] };

  function differenceOf(i: number): Scenario["difference"] {
    const { horizon, levels = [0.5, 0.9], seed = 1 } = options, later = made[i], first = made[0], { base, times } = first.banded;
    const known = simulated ? ofPaths(later.banded.outlook, first.banded.outlook, seed) : differenceOutlook(fit, horizon, futures[i].regressors, futures[0].regressors, seed, pathCount);
    const outlook: Outlook = { ...known, mean: later.figures.mean.map((m, h) => m - first.figures.mean[h]) };
    // What was observed is the same in all scenarios: it adds nothing to a difference.
    const nothing: Series = { ...base, values: new Float64Array(base.n) }, paths = once(() => outlook.paths(pathCount, seed));
    return { against: labels[0], mean: outlook.mean, median: outlook.median, bands: bandsOf(outlook, levels), totals: totalsOf(options.totals, nothing, outlook, times, levels, paths).totals };
  }
}

/** Path by path: the same seed gave both the same shocks and sets of parameters. */
const ofPaths = (later: Outlook, earlier: Outlook, seed: number): Outlook => sampleOutlook((count, from) => lessen(later.paths(count, from), earlier.paths(count, from)), pathCount, seed);
