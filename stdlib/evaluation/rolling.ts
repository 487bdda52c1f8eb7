// Forecasts from many origins, each made from the data up to it and nothing else.

import type { Series } from "../series/series.ts";
import { timesFrom, timeAt } from "../series/calendar.ts";
import { cut } from "../series/cut.ts";
import { modelOutlook } from "../forecast/modelOutlook.ts";
import type { Forecaster } from "../forecast/model.ts";
import { baseOf, firstIndex, lastIndex, reachOf } from "../forecast/reach.ts";
import { refitBetween } from "../forecast/refit.ts";

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

/** How the caller slices time: `breathe` is awaited after each forecast, `stopped` ends the work early and keeps what is done. */
export interface Hooks {
  readonly progress?: (done: number, total: number, what: string) => void;
  readonly breathe?: () => Promise<void>;
  readonly stopped?: () => boolean;
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

/** Forecasts of one model from every origin of a frame. */
export async function rollModel({ label, model }: Labelled, frame: RollingFrame, options: RollingOptions, hooks: Hooks = {}, onForecast: () => void = () => undefined): Promise<Rolled> {
  const { base, at, horizon, levels, origins } = frame, { training = "expanding", refit = true, data, seed = 1 } = options, size = at.length * horizon;
  const table = (): Float64Array => new Float64Array(size).fill(NaN);
  const rolled = { label, mean: table(), median: table(), sd: table(), crps: table(), bands: levels.map((level) => ({ level, low: table(), high: table() })), failures: [] as { origin: string; reason: string }[] };
  const every = refit === true ? 1 : refit === false ? Infinity : Math.max(1, Math.round(refit));
  const first = firstIndex(base), start = Math.max(first, sampleStart({ label, model }));
  let parameters: Forecaster | null = null, done = 0;
  for (let k = 0; k < at.length; k++) {
    if (hooks.stopped?.()) break;
    try {
      const from = training === "sliding" ? start + k : start, to = first + at[k];
      // The first search starts from nothing: the model's own values know all the data.
      const how = parameters === null ? "fresh" : k % every === 0 ? "refit" : "held";
      const here = refitBetween(model, { from, to, how, data }, parameters ?? model);
      if (how !== "held") parameters = here;
      writeForecasts(rolled, k, here, frame, seed);
    } catch (error) {
      // A model that cannot be estimated on a short stretch is an outcome of the comparison; a fault of ours is not.
      if (!(error instanceof RangeError)) throw error;
      rolled.failures.push({ origin: origins[k], reason: error.message });
    }
    done++;
    onForecast();
    if (hooks.breathe) await hooks.breathe();
  }
  return { ...rolled, done };
}

function writeForecasts(rolled: Omit<Rolled, "done" | "failures">, k: number, model: Forecaster, { base, at, horizon, levels }: RollingFrame, seed: number): void {
  const { outlook } = modelOutlook(model, horizon, {}, seed, drawsAnOrigin), offset = k * horizon;
  rolled.mean.set(outlook.mean, offset); rolled.median.set(outlook.median, offset); rolled.sd.set(outlook.sd, offset);
  levels.forEach((level, i) => {
    rolled.bands[i].low.set(outlook.quantile((1 - level) / 2), offset);
    rolled.bands[i].high.set(outlook.quantile((1 + level) / 2), offset);
  });
  for (let h = 0; h < horizon; h++) {
    const actual = base.values[at[k] + h + 1];
    if (!Number.isNaN(actual)) rolled.crps[offset + h] = outlook.crps(h, actual);
  }
}

/** Times of the horizon after an origin. */
export function timesAfter(frame: RollingFrame, k: number): string[] {
  return timesFrom(timeAt(frame.origins[k], frame.base.every, 1), frame.base.every, frame.horizon);
}
