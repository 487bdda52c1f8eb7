// Forecasts that can be published: points, bands, totals, growth, probabilities, each in the units of the data.

import { makeSeries, type Series } from "../series/series.ts";
import type { Note } from "../arma/model.ts";
import { bandedOutlook } from "./bands.ts";
import { atOnce, type Gradual } from "./gradual.ts";
import { growthOf } from "./growth.ts";
import type { Band, Forecast, Forecaster, ForecastOptions, Passing } from "./model.ts";
import { once, type Outlook } from "./outlook.ts";
import { pathAt, type Paths } from "./paths.ts";
import { baseOf, firstIndex, lastIndex, reachOf } from "./reach.ts";
import { shapeOf } from "./shape.ts";
import { totalsOf } from "./totals.ts";

/** Sample paths behind the limits of totals and growth where those have no closed form. */
const pathCount = 4000;

/** Forecasts from the end of a model's sample.
 *  `mean` and `median` differ after a log or Box-Cox: the median is the plain way back, the mean takes the spread into account.
 *  @throws RangeError in words: a regressor whose future is missing, a total beyond the horizon
 *  @example forecast(rule.naive(makeSeries({ name: "x", values: [1, 3, 2] })), { horizon: 2 }).median // [2, 2] */
export function forecast(model: Forecaster, options: ForecastOptions): Forecast { return atOnce(forecasting(model, options)); }

/** The same in slices, for simulated and calibrated bands, which take a while. */
export function* forecasting(model: Forecaster, options: ForecastOptions): Gradual<Forecast> {
  const { horizon, levels = [0.5, 0.9], regressors = {}, totals: spans, bands: how = "plugIn", seed = 1, threshold, paths: wanted = 0, data } = options;
  if (!Number.isInteger(horizon) || horizon < 1) throw new RangeError(`forecast: horizon is ${horizon}, expected a whole number of periods from 1 on`);
  for (const level of levels) if (!(level > 0 && level < 1)) throw new RangeError(`forecast: a level is ${level}, expected between 0 and 1, as in 0.9`);
  const { outlook, base, times, notes } = yield* bandedOutlook(model, horizon, { how, regressors, seed, levels });
  const paths = once(() => outlook.paths(pathCount, seed));
  const totals = totalsOf(spans, base, outlook, times, levels, paths);
  const bands: Band[] = levels.map((level) => ({ level, low: outlook.quantile((1 - level) / 2), high: outlook.quantile((1 + level) / 2) }));
  const infinite = outlook.mean.some((m) => !Number.isFinite(m));
  const shape = shapeOf(model), allNotes: Note[] = [...notes, ...totals.notes, { code: "shape", tone: "note", text: shape }];
  if (infinite) allNotes.push({ code: "no-mean", tone: "caution", text: "The mean in data units is not finite (the transformation has no upper end there): read the median." });
  return {
    label: model.label, name: base.name, unit: base.unit, every: base.every, origin: base.times[base.n - 1], horizon, times,
    mean: outlook.mean, median: outlook.median, se: outlook.se, sd: outlook.sd, bands, totals: totals.totals,
    growth: growthOf(base, outlook, times, levels, paths), passing: passingOf(threshold, outlook, paths),
    paths: wanted > 0 ? publishedPaths(outlook.paths(wanted, seed)) : [], shape, history: base, heldOut: heldOutOf(model, base, data), notes: allNotes,
  };
}

function passingOf(threshold: ForecastOptions["threshold"], outlook: Outlook, paths: () => Paths): Passing[] {
  if (threshold === undefined || threshold === null) return [];
  return (typeof threshold === "number" ? [threshold] : [...threshold]).map((value) => ({
    threshold: value, above: Float64Array.from({ length: outlook.horizon }, (_, h) => outlook.above(h, value)),
    ever: outlook.horizon === 1 ? outlook.above(0, value) : everAbove(paths(), value),
  }));
}

/** Share of the paths that lie above a value in some period. */
function everAbove({ values, count }: Paths, value: number): number {
  const passed = new Uint8Array(count);
  for (let at = 0; at < values.length; at++) if (values[at] > value) passed[at % count] = 1;
  return passed.reduce((sum, one) => sum + one, 0) / count;
}

const publishedPaths = (paths: Paths): Float64Array[] => Array.from({ length: paths.count }, (_, i) => pathAt(paths, i));

/** What the data hold after the origin, in the units of the forecast; null where nothing does. */
function heldOutOf(model: Forecaster, base: Series, data?: Series): Series | null {
  // A window that cut the data before the steps left what came after it beside them.
  if (data === undefined && base.later !== undefined) return { ...base.later, name: base.name, unit: base.unit };
  const whole = data && data.every === base.every ? data : baseOf(reachOf(model, data)), later = lastIndex(base) + 1 - firstIndex(whole);
  if (later < 0 || later >= whole.n) return null;
  return makeSeries({ name: base.name, unit: base.unit, every: base.every, start: whole.times[later], values: whole.values.slice(later), times: whole.times.slice(later) });
}
