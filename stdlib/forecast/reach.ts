// All the data that a forecaster could see: its sample, and what stands before and after it.

import { periodIndex } from "../series/calendar.ts";
import { slice } from "../series/cut.ts";
import type { Series } from "../series/series.ts";
import { applySteps, original, stepOf } from "../series/steps.ts";
import { isRule } from "./rules.ts";
import type { Forecaster } from "./model.ts";

/** Steps at the end of a series that are differences: a fit undoes these itself. */
export function trailingDifferences(series: Series): number {
  let count = 0;
  while (count < series.steps.length && series.steps[series.steps.length - 1 - count].step === "difference") count++;
  return count;
}

/** How many steps are left to undo after the model's own part. */
export function keptSteps(model: Forecaster): number {
  return isRule(model) ? model.series.steps.length : model.series.steps.length - trailingDifferences(model.series);
}

/** The series that a model was made from, before its own window: modelled scale, with its steps.
 *  @param data  a longer version of the data, to which the steps are then applied */
export function reachOf(model: Forecaster, data?: Series): Series {
  // The members of a combination share their data: any one of them reaches as far.
  if (isRule(model) && model.members && model.members.length > 0) return reachOf(model.members[0], data);
  const own = isRule(model) ? model.series : model.options.series;
  if (data === undefined) return own;
  const { steps } = own, aggregated = steps.findIndex((s) => s.step === "aggregate");
  // Data that are aggregated already need only the steps behind that.
  const rest = aggregated >= 0 && steps[aggregated].before.every !== data.every ? steps.slice(aggregated + 1) : steps;
  return applySteps(data, rest.map(stepOf));
}

/** A series on the scale that forecasts come back to: the data, or the aggregated data. */
export function baseOf(series: Series): Series {
  const { steps } = series, at = steps.findLastIndex((s) => s.step === "aggregate");
  if (at < 0) return original(series);
  return at + 1 < steps.length ? steps[at + 1].before : series;
}

/** Number of a series' first period on the common grid. */
export const firstIndex = (series: Series): number => periodIndex(series.start, series.every);

/** Number of a series' last period on the common grid. */
export const lastIndex = (series: Series): number => firstIndex(series) + series.n - 1;

/** The part of a series, with its steps, whose data lie between two period numbers of the base, both ends included.
 *  Steps that look at the whole series are taken again on the part. Values lost to differences are lost at its start. */
export function between(reach: Series, from: number, to: number): Series {
  const base = baseOf(reach), lost = firstIndex(reach) - firstIndex(base), first = firstIndex(reach);
  // The first modelled value stands `lost` periods after the first datum that it needs.
  return slice(reach, Math.max(0, from + lost - first), Math.min(reach.n, to + 1 - first));
}
