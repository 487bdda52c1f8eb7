// Forecasts from many origins, each made from the data up to it and nothing else.

import type { Series } from "../series/series.ts";
import { timesFrom, timeAt } from "../series/calendar.ts";
import { cut } from "../series/cut.ts";
import { modelOutlook } from "../forecast/modelOutlook.ts";
import type { Forecaster } from "../forecast/model.ts";
import { baseOf, firstIndex, lastIndex, reachOf } from "../forecast/reach.ts";
import { isRule } from "../forecast/rules.ts";
import type { Ahead } from "./ahead.ts";
import { contentKey, recallNothing, type Recall } from "./contentKey.ts";
import { estimatesOf, type Estimates, type Seen } from "./estimates.ts";

export interface Labelled { readonly label: string; readonly model: Forecaster }

export interface RollingOptions {
  /** How many last origins, one period apart; the whole horizon after each of them is observed. */
  readonly origins: number;
  readonly horizon: number;
  /** "expanding": all data up to the origin; "sliding": as many as the first origin had. */
  readonly training?: "expanding" | "sliding";
  /** true: estimated again at every origin; a number: at every so many; false: at the first origin only, then kept. */
  readonly refit?: boolean | number;
  /** Confidence of the bands that are scored. */
  readonly levels?: readonly number[];
  /** A longer version of the data than the models were made from. */
  readonly data?: Series;
  /** Bounds of the data that are used, both ends included. */
  readonly window?: { readonly from?: string; readonly to?: string };
  readonly seed?: number;
}

/** How the caller slices time: `breathe` is awaited after each forecast, `stopped` ends the work early and keeps what is done.
 *  `recall` gives what was computed from the same content before; left out, everything is computed. */
export interface Hooks {
  readonly progress?: (done: number, total: number, what: string) => void;
  readonly breathe?: () => Promise<void>;
  readonly stopped?: () => boolean;
  readonly recall?: Recall;
  /** Told what will be recalled, in the order of need: another core may make it before. */
  readonly ahead?: (work: Ahead) => void;
}

/** What happened at the origins, and the frame that all models share. */
export interface RollingFrame {
  /** The data in the units of the forecasts. */
  readonly base: Series;
  /** Positions of the origins in `base`, and their times. */
  readonly at: readonly number[];
  readonly origins: readonly string[];
  readonly horizon: number;
  readonly levels: readonly number[];
}

/** Forecasts of one model; tables are origins x horizon, flat by origin; NaN where there is none. */
export interface Rolled {
  readonly label: string;
  readonly mean: Float64Array; readonly median: Float64Array; readonly sd: Float64Array;
  readonly bands: readonly { readonly level: number; readonly low: Float64Array; readonly high: Float64Array }[];
  readonly crps: Float64Array;
  readonly failures: readonly { readonly origin: string; readonly reason: string }[];
  /** Origins worked through, from the first on. */
  readonly done: number;
}

/** Lays out the origins and checks that the models belong to one series.
 *  @throws RangeError in words */
export function rollingFrame(models: readonly Labelled[], options: RollingOptions): RollingFrame {
  const { origins, horizon, levels = [0.5, 0.9] } = options;
  for (const [name, value] of [["origins", origins], ["horizon", horizon]] as const) {
    if (!Number.isInteger(value) || value < 1) throw new RangeError(`compare: ${name} is ${value}, expected a whole number from 1 on`);
  }
  if (models.length === 0) throw new RangeError("compare: give at least one fit or rule");
  const base = commonBase(models, options), n = base.n;
  const most = n - horizon - 5;
  if (origins > most) throw new RangeError(`compare: ${origins} origins and a horizon of ${horizon} leave ${Math.max(0, n - horizon - origins + 1)} of ${n} values before the first origin; ${most > 0 ? `at most ${most} origins are possible, and fewer are wise` : "the series is too short for that horizon"}`);
  const at = Array.from({ length: origins }, (_, k) => n - horizon - origins + k);
  return { base, at, origins: at.map((t) => base.times[t]), horizon, levels };
}

/** The stretch of data that all models can see, in the units of the forecasts. */
function commonBase(models: readonly Labelled[], { data, window }: RollingOptions): Series {
  const bases = models.map(({ model }) => baseOf(reachOf(model, data))), [first] = bases;
  bases.forEach((base, i) => {
    if (base.every !== first.every) throw new RangeError(`compare: the models are not of one series: ${models[0].label} forecasts every ${first.every ?? "number"}, ${models[i].label} every ${base.every ?? "number"}`);
    const shift = firstIndex(base) - firstIndex(first);
    for (let t = Math.max(0, -shift); t < base.n && t + shift < first.n; t++) {
      if (base.values[t] !== first.values[t + shift] && !(Number.isNaN(base.values[t]) || Number.isNaN(first.values[t + shift]))) {
        throw new RangeError(`compare: the models are not of one series: at ${base.times[t]}, ${models[0].label} has ${first.values[t + shift]} (${first.name || "a series"}) and ${models[i].label} has ${base.values[t]} (${base.name || "a series"}). Compare models of one loaded series, in the same units`);
      }
    }
  });
  // Each model keeps the start of its own sample; the origins end where the shortest of the data do.
  const longest = bases.reduce((a, b) => (firstIndex(b) < firstIndex(a) ? b : a)), from = Math.min(...models.map(sampleStart)), to = Math.min(...bases.map(lastIndex));
  const part = longest.times.slice(Math.max(0, from - firstIndex(longest)), Math.max(0, to + 1 - firstIndex(longest)));
  if (part.length === 0) throw new RangeError("compare: the models have no stretch of data in common");
  const whole = cut({ ...longest, steps: [] }, { from: part[0], to: part[part.length - 1] });
  return window ? cut(whole, window) : whole;
}

/** Draws a forecast where there is no closed form: chance of the draws averages out over the origins. */
const drawsAnOrigin = 1000;

/** Number of the first period that a model was made from, in the units of the forecasts. */
const sampleStart = ({ model }: Labelled): number => firstIndex(baseOf(model.series));

/** Forecasts of all models from every origin of a frame, origin by origin, so that work stopped early has the same origins of all.
 *  @param onForecast  called after each forecast with the label of its model */
export async function rollModels(models: readonly Labelled[], frame: RollingFrame, options: RollingOptions, hooks: Hooks = {}, onForecast: (label: string) => void = () => undefined): Promise<Rolled[]> {
  const rolled = models.map(({ label }) => ({ ...tablesOf(label, frame), done: 0 })), forecasts = models.map((one) => forecastsOf(one, frame, options, hooks.recall ?? recallNothing));
  hooks.ahead?.(workAhead(models, frame, options, forecasts));
  for (let k = 0; k < frame.at.length; k++) {
    for (let i = 0; i < models.length; i++) {
      if (hooks.stopped?.()) return rolled;
      writeInto(rolled[i], k, forecasts[i].row(k), frame);
      rolled[i].done++;
      onForecast(models[i].label);
      if (hooks.breathe) await hooks.breathe();
    }
  }
  return rolled;
}

/** The forecast from one origin, each column of the horizon's length; or why there is none. */
type OriginRow = { readonly mean: Float64Array; readonly median: Float64Array; readonly sd: Float64Array; readonly crps: Float64Array; readonly low: readonly Float64Array[]; readonly high: readonly Float64Array[] } | { readonly reason: string };

/** The estimates of all models, origin by origin; those of plain rules cost nothing and are left out. */
function workAhead(models: readonly Labelled[], frame: RollingFrame, { training, data }: RollingOptions, forecasts: readonly Forecasts[]): Ahead {
  const dear = models.flatMap(({ model }, i) => (isRule(model) && model.rule !== "smoothing" && model.rule !== "combine" ? [] : [i]));
  const items = frame.at.flatMap((_, k) => dear.map((i) => ({ key: forecasts[i].estimates.recalledAs(forecasts[i].estimatedAt(k)), model: i, seen: forecasts[i].estimatedAt(k) })));
  return { shared: { models: models.map(({ model }, i) => ({ model, earliest: forecasts[i].earliest })), ...(data === undefined ? {} : { data }), slides: training === "sliding" }, items: [...new Map(items.map((item) => [item.key, item])).values()] };
}

/** One model's forecasts by the number of their origin, and what they are made from. */
interface Forecasts { readonly row: (k: number) => OriginRow; readonly estimatedAt: (k: number) => Seen; readonly estimates: Estimates; readonly earliest: number }

function forecastsOf({ label, model }: Labelled, frame: RollingFrame, options: RollingOptions, recall: Recall): Forecasts {
  const { base, at, horizon, levels } = frame, { training = "expanding", refit = true, data, seed = 1 } = options, slides = training === "sliding";
  const every = refit === true ? 1 : refit === false ? Infinity : Math.max(1, Math.round(refit));
  const first = firstIndex(base), start = Math.max(first, sampleStart({ label, model })), estimates = estimatesOf(model, { data, slides, earliest: start, recall });
  const seenAt = (k: number): Seen => ({ from: slides ? start + k : start, to: first + at[k] });
  const estimatedAt = (k: number): Seen => seenAt(every === Infinity ? 0 : k - (k % every));
  const row = (k: number): OriginRow => {
    const seen = seenAt(k), estimated = estimatedAt(k), actual = base.values.subarray(at[k] + 1, at[k] + 1 + horizon);
    const key = `forecast ${estimates.key(seen)} ${estimated.to === seen.to ? "" : estimates.key(estimated)} ${contentKey([levels, seed, actual])}`;
    return recall(key, () => {
      try {
        return rowOf(estimated.to === seen.to ? estimates.at(seen) : estimates.held(estimated, seen), actual, levels, seed);
      } catch (error) {
        // A model that cannot be estimated on a short stretch is an outcome of the comparison; a fault of ours is not.
        if (!(error instanceof RangeError)) throw error;
        return { reason: error.message };
      }
    });
  };
  return { row, estimatedAt, estimates, earliest: start };
}

function rowOf(model: Forecaster, actual: Float64Array, levels: readonly number[], seed: number): OriginRow {
  const { outlook } = modelOutlook(model, actual.length, {}, seed, drawsAnOrigin);
  return {
    mean: outlook.mean, median: outlook.median, sd: outlook.sd, crps: actual.map((y, h) => (Number.isNaN(y) ? NaN : outlook.crps(h, y))),
    low: levels.map((level) => outlook.quantile((1 - level) / 2)), high: levels.map((level) => outlook.quantile((1 + level) / 2)),
  };
}

function tablesOf(label: string, { at, horizon, levels }: RollingFrame) {
  const table = (): Float64Array => new Float64Array(at.length * horizon).fill(NaN);
  return { label, mean: table(), median: table(), sd: table(), crps: table(), bands: levels.map((level) => ({ level, low: table(), high: table() })), failures: [] as { origin: string; reason: string }[] };
}

function writeInto(rolled: ReturnType<typeof tablesOf>, k: number, row: OriginRow, { horizon, origins }: RollingFrame): void {
  if ("reason" in row) { rolled.failures.push({ origin: origins[k], reason: row.reason }); return; }
  const offset = k * horizon;
  for (const column of ["mean", "median", "sd", "crps"] as const) rolled[column].set(row[column], offset);
  rolled.bands.forEach(({ low, high }, i) => { low.set(row.low[i], offset); high.set(row.high[i], offset); });
}

/** Times of the horizon after an origin. */
export function timesAfter(frame: RollingFrame, k: number): string[] {
  return timesFrom(timeAt(frame.origins[k], frame.base.every, 1), frame.base.every, frame.horizon);
}
