// Forecasts that can be published: points, bands, totals, growth, probabilities, each in the units of the data.

import { makeSeries, type Series } from "../series/series.ts";
import type { Fit, Note } from "../arma/model.ts";
import { bandedOutlook, bandsOf } from "./bands.ts";
import { atOnce, type Gradual } from "../gradual.ts";
import { growthOf } from "./growth.ts";
import type { Figures, Forecast, Forecaster, ForecastOptions, Passing } from "./model.ts";
import type { ModelOutlook } from "./modelOutlook.ts";
import { once } from "./once.ts";
import type { Outlook } from "./outlook.ts";
import { pathAt, pathCount, type Paths } from "./paths.ts";
import { baseOf, firstIndex, lastIndex, reachOf } from "./reach.ts";
import { isRule } from "./rules.ts";
import { futuresOf, scenariosOf } from "./scenarios.ts";
import { parameterSets, type ParameterSets } from "./simulated.ts";
import { shapeOf } from "./shape.ts";
import { totalsOf } from "./totals.ts";

/** Forecasts from the end of a model's sample.
 *  `mean` and `median` differ after a log or Box-Cox: the median is the plain way back, the mean takes the spread into account.
 *  @throws RangeError in words: a regressor whose future is missing, a total beyond the horizon
 *  @example forecast(rule.naive(makeSeries({ name: "x", values: [1, 3, 2] })), { horizon: 2 }).median // [2, 2] */
export function forecast(model: Forecaster, options: ForecastOptions): Forecast { return atOnce(forecasting(model, options)); }

/** The same in slices, for simulated and calibrated bands, which take a while. */
export function* forecasting(model: Forecaster, options: ForecastOptions): Gradual<Forecast> {
  const { horizon, levels = [0.5, 0.9], seed = 1, paths: wanted = 0, data } = options;
  if (!Number.isInteger(horizon) || horizon < 1) throw new RangeError(`forecast: horizon is ${horizon}, expected a whole number of periods from 1 on`);
  for (const level of levels) if (!(level > 0 && level < 1)) throw new RangeError(`forecast: a level is ${level}, expected between 0 and 1, as in 0.9`);
  const futures = futuresOf(model, options), made: Made[] = [];
  const sets = isRule(model) ? undefined : parameterSets(model, seed);
  for (const { label, regressors } of futures) made.push(yield* oneFuture(model, options, label, regressors, sets));
  const [{ banded, figures, notes }] = made, { outlook, base, times } = banded;
  const shape = shapeOf(model), allNotes: Note[] = [...notes, { code: "shape", tone: "note", text: shape }];
  if (outlook.mean.some((m) => !Number.isFinite(m))) allNotes.push({ code: "no-mean", tone: "caution", text: "The mean in data units is not finite (the transformation has no upper end there): read the median." });
  const scenarios = options.scenarios === undefined ? null : scenariosOf(model as Fit, options, futures, made);
  if (scenarios !== null) allNotes.push(...scenarios.notes);
  return {
    label: model.label, name: base.name, unit: base.unit, every: base.every, origin: base.times[base.n - 1], horizon, times, ...figures, scenarios: scenarios?.scenarios ?? {},
    paths: wanted > 0 ? publishedPaths(outlook.paths(wanted, seed)) : [], shape, history: base, heldOut: heldOutOf(model, base, data), notes: allNotes,
  };
}

/** One future of the regressors, forecast. */
export interface Made { readonly banded: ModelOutlook; readonly figures: Figures; readonly notes: readonly Note[] }

function* oneFuture(model: Forecaster, options: ForecastOptions, label: string | null, regressors: NonNullable<ForecastOptions["regressors"]>, sets: ParameterSets | undefined): Gradual<Made> {
  const { horizon, levels = [0.5, 0.9], bands: how = "plugIn", seed = 1 } = options;
  try {
    const banded = yield* bandedOutlook(model, horizon, { how, regressors, seed, levels, ...(sets ? { sets } : {}) });
    const { figures, notes } = figuresOf(banded, options);
    return { banded, figures, notes: [...banded.notes, ...notes] };
  } catch (error) {
    if (label === null || !(error instanceof RangeError)) throw error;
    throw new RangeError(`In scenario ${label}: ${error.message.replace(/^forecast: /, "")}`, { cause: error });
  }
}

/** What is published of a distribution. */
function figuresOf({ outlook, base, times, notes: undone }: ModelOutlook, { levels = [0.5, 0.9], totals: spans, seed = 1, threshold }: ForecastOptions): { readonly figures: Figures; readonly notes: readonly Note[] } {
  const paths = once(() => outlook.paths(pathCount, seed)), { totals, notes } = totalsOf(spans, base, outlook, times, levels, paths);
  return { notes, figures: {
    mean: outlook.mean, median: outlook.median, se: outlook.se, sd: outlook.sd, bands: bandsOf(outlook, levels), totals,
    // On a scale that is not the data's a ratio says nothing.
    growth: undone.some((note) => note.code === "not-undone") ? [] : growthOf(base, outlook, times, levels, paths), passing: passingOf(threshold, outlook, paths),
  } };
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
