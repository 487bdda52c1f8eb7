// Rules of comparison: what a forecaster should beat before it is believed.

import { valuesOf, type Series } from "../series/series.ts";
import { defaultSeasonLength } from "../series/every.ts";
import type { Forecaster, Rule } from "./model.ts";
import { estimateSmoothing, type EstimatedSmoothing } from "./smoothing/estimateSmoothing.ts";
import type { SmoothingForm } from "./smoothing/innovations.ts";
import type { SmoothingHold } from "./smoothing/searchSpace.ts";

export interface SmoothingOptions extends SmoothingHold {
  readonly trend?: "none" | "additive" | "multiplicative";
  readonly season?: "none" | "additive" | "multiplicative";
  readonly error?: "additive" | "multiplicative";
  /** Whether the trend dies away. */
  readonly damped?: boolean;
  /** Periods a season; default from the spacing of the series. */
  readonly length?: number;
}

/** Makers of rules, each tied to a series. */
export const rule = {
  /** The last value, for ever. */
  naive: (series: Series): Rule => plain("naive", "naive", series),
  /** The last season, again and again.
   *  @param length  periods a season; default from the spacing */
  seasonalNaive: (series: Series, length?: number): Rule => {
    const m = seasonOf("rule.seasonalNaive", series, length);
    if (series.n < m) throw new RangeError(`rule.seasonalNaive: ${called(series)} has ${series.n} values, fewer than one season of ${m}`);
    return { ...plain("seasonalNaive", "seasonal naive", series), length: m };
  },
  /** The last value and the mean step between first and last: a line through the two. */
  drift: (series: Series): Rule => {
    const seen = observedPositions(valuesOf(series));
    if (seen.length < 3) throw new RangeError(`rule.drift: ${called(series)} has ${seen.length} observed values; a drift needs at least 3`);
    return plain("drift", "drift", series);
  },
  /** The mean of all values. */
  average: (series: Series): Rule => plain("average", "average", series),
  /** Exponential smoothing, weights and starting states estimated by maximum likelihood unless given. */
  smoothing: (series: Series, options: SmoothingOptions = {}): Rule => smoothingRule(series, options),
  /** The mean of the members' forecasts, in the units of the data. */
  combine: (members: readonly Forecaster[] | Readonly<Record<string, Forecaster>>, label = "combination"): Rule => {
    const list = Array.isArray(members) ? (members as readonly Forecaster[]) : Object.values(members as Readonly<Record<string, Forecaster>>);
    if (list.length === 0) throw new RangeError("rule.combine: give at least one fit or rule");
    return { rule: "combine", label, series: list[0].series, members: list };
  },
};

/** Whether a forecaster is a rule. */
export const isRule = (model: Forecaster): model is Rule => "rule" in model;

/** The same rule for another series of the same kind, its weights estimated again, or held at what they are. */
export function ruleFor(model: Rule, series: Series, how: "fresh" | "refit" | "held"): Rule {
  switch (model.rule) {
    case "naive": return rule.naive(series);
    case "seasonalNaive": return { ...rule.seasonalNaive(series, model.length), label: model.label };
    case "drift": return rule.drift(series);
    case "average": return rule.average(series);
    case "smoothing": {
      const weights = model.smoothing?.start;
      // Held weights keep their values; where the sample starts elsewhere, its starting states are found anew.
      const hold = how === "held" && weights ? { ...model.hold, alpha: weights.alpha, beta: weights.beta, gamma: weights.gamma, phi: weights.phi } : (model.hold ?? {});
      const near = how !== "refit" || !weights ? undefined : series.start === model.series.start ? weights : { alpha: weights.alpha, beta: weights.beta, gamma: weights.gamma, phi: weights.phi };
      return { ...smoothingRule(series, { ...model, ...hold }, near), hold: model.hold, label: model.label };
    }
    case "combine": throw new RangeError("a combination is refitted member by member");
  }
}

/** Positions of the values that are not missing. */
export function observedPositions(y: Float64Array): number[] {
  const seen: number[] = [];
  for (let t = 0; t < y.length; t++) if (!Number.isNaN(y[t])) seen.push(t);
  return seen;
}

function plain(name: Rule["rule"], label: string, series: Series): Rule {
  const seen = observedPositions(valuesOf(series));
  if (seen.length < 2) throw new RangeError(`rule.${name}: ${called(series)} has ${seen.length} observed value${seen.length === 1 ? "" : "s"}; at least 2 are needed`);
  return { rule: name, label, series };
}

function smoothingRule(series: Series, options: SmoothingOptions, near?: Parameters<typeof estimateSmoothing>[4]): Rule {
  const { trend = "none", season = "none", damped = false } = options;
  for (const [name, value, among] of [["trend", trend, ["none", "additive", "multiplicative"]], ["season", season, ["none", "additive", "multiplicative"]]] as const) {
    if (!(among as readonly string[]).includes(value)) throw new RangeError(`rule.smoothing: ${name} is ${JSON.stringify(value)}, expected ${among.map((a) => `"${a}"`).join(", ")}`);
  }
  const length = season === "none" ? 1 : seasonOf("rule.smoothing", series, options.length);
  const error = options.error ?? (trend === "multiplicative" || season === "multiplicative" ? "multiplicative" : "additive");
  const form: SmoothingForm = { error, trend, season, length };
  const { alpha, beta, gamma, phi, level0, trend0, seasonal0 } = options;
  const hold: SmoothingHold = { alpha, beta, gamma, phi, level0, trend0, seasonal0 };
  const smoothing = estimateSmoothing(series.values, form, damped, hold, near);
  return { rule: "smoothing", label: labelOf(form, damped), series, trend, season, damped, error, ...(season === "none" ? {} : { length }), hold, smoothing, parameters: parametersOf(smoothing) };
}

function labelOf({ trend, season }: SmoothingForm, damped: boolean): string {
  const trended = trend === "none" ? "" : `${damped ? "damped " : ""}${trend} trend`, seasoned = season === "none" ? "" : `${season} season`;
  return trended === "" && seasoned === "" ? "simple smoothing" : `smoothing, ${[trended, seasoned].filter((t) => t !== "").join(", ")}`;
}

function parametersOf({ form, start, filtered }: EstimatedSmoothing): Record<string, number> {
  return {
    alpha: start.alpha, ...(form.trend === "none" ? {} : { beta: start.beta }), ...(form.season === "none" ? {} : { gamma: start.gamma }), ...(start.phi === 1 ? {} : { phi: start.phi }),
    level0: start.level, ...(form.trend === "none" ? {} : { trend0: start.trend }), ...Object.fromEntries([...start.seasonal].map((s, j) => [`season${j + 1}`, s])),
    sigma2: filtered.sigma2, logLikelihood: filtered.logLikelihood, level: filtered.after.level, ...(form.trend === "none" ? {} : { trend: filtered.after.trend }),
  };
}

function seasonOf(what: string, series: Series, given: number | undefined): number {
  const length = given ?? defaultSeasonLength(series.every);
  if (length === null) throw new RangeError(`${what}: ${called(series)} has no usual season; give its length in periods`);
  if (!Number.isInteger(length) || length < 1) throw new RangeError(`${what}: length is ${length}, expected a whole number of periods`);
  return length;
}

function called(series: Series): string { return series.name === "" ? "the series" : series.name; }
