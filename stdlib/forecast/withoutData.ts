// An estimated model apart from the data that it was estimated from: small enough to be kept for many origins.

import type { Series } from "../series/series.ts";
import type { Forecaster } from "./model.ts";
import { between, reachOf } from "./reach.ts";
import { isRule } from "./rules.ts";

/** The same model with empty series: what it says of its parameters stays. */
export function withoutData(model: Forecaster): Forecaster {
  const series = empty(model.series);
  if (!isRule(model)) return { ...model, series, residuals: empty(model.residuals), options: { ...model.options, series } };
  const { smoothing, members } = model;
  return {
    ...model, series, ...(members ? { members: members.map(withoutData) } : {}),
    ...(smoothing ? { smoothing: { ...smoothing, filtered: { ...smoothing.filtered, fitted: new Float64Array(0), errors: new Float64Array(0) } } } : {}),
  };
}

/** The model that `withoutData` was given, its residuals and one-step errors excepted.
 *  @param source  what the estimate was made from: its series reaches over the stretch, and its regressors are taken
 *  @param seen    the stretch of the estimate, in period numbers of the data
 *  @param data    as in the refit that made it */
export function withData(estimate: Forecaster, source: Forecaster, seen: { readonly from: number; readonly to: number }, data?: Series): Forecaster {
  if (isRule(estimate) && estimate.members) {
    const members = estimate.members.map((member, i) => withData(member, (isRule(source) ? source.members?.[i] : undefined) ?? source, seen, data));
    return { ...estimate, series: members[0].series, members };
  }
  const series = between(reachOf(source, data), seen.from, seen.to);
  if (isRule(estimate)) return { ...estimate, series };
  return { ...estimate, series, options: { ...estimate.options, ...(isRule(source) ? {} : source.options), series, window: undefined } };
}

/** Keeps what tells where it started. */
function empty({ name, unit, every, start }: Series): Series {
  return { name, unit, every, start, n: 0, values: new Float64Array(0), times: [], steps: [] };
}
