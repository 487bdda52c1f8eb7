// Forecasts of a fit on the scale before its differences, with the regressors' future.

import { predict } from "../arma/predict.ts";
import type { Fit } from "../arma/model.ts";
import { periodIndex } from "../series/calendar.ts";
import { isSeries, type Series } from "../series/series.ts";
import { interventionColumns } from "./interventions.ts";
import type { Predictive } from "./predictive.ts";

/** @param times       the coming periods
 *  @param regressors  future values by the fit's names; a regressor left out here goes on with its own values, if they reach so far
 *  @throws RangeError naming a regressor whose future is missing, and the date */
export function fitPredictive(fit: Fit, horizon: number, times: readonly string[], regressors: Readonly<Record<string, Series>>): Predictive {
  const { mean, se, covariance } = predict(fit, horizon, futureColumns(fit, times, regressors));
  return { mean, se, covariance };
}

/** The regressors' coming values by column, in levels: `fitPredictive` says from what. */
export function futureColumns(fit: Fit, times: readonly string[], regressors: Readonly<Record<string, Series>>): Record<string, Float64Array> {
  const asked = fit.options.regressors ?? {}, among = Object.keys(asked), future: Record<string, Float64Array> = {};
  if (isSeries(regressors)) throw new RangeError(`forecast: regressors is a series by itself; give it under the name that ${fit.label} uses, as in {${among[0] ?? "price"}: ${regressors.name || "ahead"}}`);
  for (const name of Object.keys(regressors)) {
    if (!(name in asked)) throw new RangeError(`forecast: ${name} is no regressor of ${fit.label}${among.length > 0 ? `; it has ${among.join(", ")}` : "; it has none"}`);
    if (!isSeries(asked[name])) throw new RangeError(`forecast: ${name} is an intervention, which extends by itself; leave it out of regressors`);
    if (!isSeries(regressors[name])) throw new RangeError(`forecast: the future of ${name} is no series; give a series that covers ${times[0]} to ${times[times.length - 1]}`);
  }
  for (const [name, regressor] of Object.entries(asked)) {
    if (isSeries(regressor)) { future[name] = futureOf(name, regressors[name], regressor, fit.series.every, times); continue; }
    const { names, columns } = interventionColumns(regressor, name, times[0], fit.series.every, times.length);
    names.forEach((column, j) => { future[column] = columns[j]; });
  }
  return future;
}

/** The coming values of a regressor: those given, and before or between them its own.
 *  @throws RangeError "Regressor price ends 2025-03; the horizon needs 2025-06" */
function futureOf(name: string, given: Series | undefined, own: Series, every: string | null, times: readonly string[]): Float64Array {
  if (given && given.every !== every) throw new RangeError(`Regressor ${name} is spaced ${given.every ?? "by number"} and the series ${every ?? "by number"}; bring its future to the same spacing`);
  const valueAt = (series: Series | undefined, k: number): number => {
    const t = series ? k - periodIndex(series.start, series.every) : -1;
    return series && t >= 0 && t < series.n ? series.values[t] : NaN;
  };
  return Float64Array.from(times, (time) => {
    const k = periodIndex(time, every), value = valueAt(given, k);
    const found = Number.isNaN(value) ? valueAt(own, k) : value;
    if (!Number.isNaN(found)) return found;
    const last = given && lastObserved(given) > lastObserved(own) ? given : own, end = lastObserved(last);
    const start = periodIndex(last.start, last.every);
    if (k < end) throw new RangeError(`Regressor ${name} has no value at ${time}; the horizon needs it`);
    throw new RangeError(`Regressor ${name} ends ${end < start ? "before it starts" : last.times[end - start]}; the horizon needs ${times[times.length - 1]}. Give its coming values in regressors: {${name}: …}`);
  });
}

/** Number of the last period with a value; before the first where there is none. */
function lastObserved(series: Series): number {
  let t = series.n - 1;
  while (t >= 0 && Number.isNaN(series.values[t])) t--;
  return periodIndex(series.start, series.every) + t;
}
