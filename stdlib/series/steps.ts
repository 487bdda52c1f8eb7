// Transform steps: what can be done to a series before a model sees it, and how a forecast comes back.

import { aggregated } from "./aggregate.ts";
import { daysIn } from "./calendar.ts";
import { trendRemoved } from "./detrend.ts";
import { filled } from "./fill.ts";
import { seasonLengthOf, seasonRemoved } from "./seasonallyAdjust.ts";
import { withValues, type Series } from "./series.ts";

/** A step as an author writes it. Plain data. */
export type Step =
  | { readonly step: "log" }
  | { readonly step: "boxCox"; readonly lambda: number }
  | { readonly step: "difference"; readonly lag: number }
  | { readonly step: "scale"; readonly factor: number; readonly unit?: string }
  | { readonly step: "perDay" }
  | { readonly step: "detrend"; readonly degree: number }
  | { readonly step: "seasonallyAdjust"; readonly length?: number }
  | { readonly step: "fill"; readonly how: "linear" | "previous" | "model" }
  | { readonly step: "aggregate"; readonly to: string; readonly how: "sum" | "mean" | "last" };

/** A step that was applied, with the series as it stood before it: all that undoing needs. */
export type AppliedStep = Step & {
  readonly before: Series;
  /** The trend or season that was subtracted, at each period of `before` (`detrend`, `seasonallyAdjust`). */
  readonly removed?: Float64Array;
};

/** Applies one step. The result remembers it, with the series that it was given.
 *  @throws RangeError in words that name the series and the time at fault
 *  @example applyStep(makeSeries({ name: "x", values: [1, 3, 6] }), { step: "difference", lag: 1 }).values // [2, 3] */
export function applyStep(series: Series, step: Step): Series {
  switch (step.step) {
    case "log": return remember(withValues(series, logged(series), { unit: logUnit(series.unit) }), step, series);
    case "boxCox": return remember(withValues(series, boxCoxed(series, step.lambda), { unit: step.lambda === 0 ? logUnit(series.unit) : "" }), step, series);
    case "difference": return remember(differenced(series, step.lag), step, series);
    case "scale": {
      if (!Number.isFinite(step.factor) || step.factor === 0) throw new RangeError(`scale: the factor is ${step.factor}; give a number other than 0`);
      return remember(withValues(series, series.values.map((v) => v * step.factor), { unit: step.unit ?? series.unit }), step, series);
    }
    case "perDay": return remember(perDay(series), step, series);
    case "detrend": {
      const removed = trendRemoved(series, step.degree);
      return remember(withValues(series, series.values.map((v, t) => v - removed[t])), step, series, removed);
    }
    case "seasonallyAdjust": {
      const length = seasonLengthOf(series, step.length), removed = seasonRemoved(series, length);
      // The length is written down, so that whoever puts the season back need not find it again.
      return remember(withValues(series, series.values.map((v, t) => v - removed[t])), { step: "seasonallyAdjust", length }, series, removed);
    }
    case "fill": return remember(withValues(series, filled(series, step.how)), step, series);
    case "aggregate": return remember(aggregated(series, step.to, step.how), step, series);
  }
}

/** Applies steps in turn, the first one first. */
export function applySteps(series: Series, steps: readonly Step[]): Series {
  return steps.reduce(applyStep, series);
}

/** The step of an applied one, as an author writes it. */
export function stepOf(applied: AppliedStep): Step {
  const { before: _before, removed: _removed, ...step } = applied;
  return step;
}

/** A step as the language writes it: "log", "difference(12)". */
export function stepText(step: Step): string {
  switch (step.step) {
    case "log": case "perDay": return step.step;
    case "boxCox": return `boxCox(${step.lambda})`;
    case "difference": return `difference(${step.lag})`;
    case "scale": return step.unit === undefined ? `scale(${step.factor})` : `scale(${step.factor}, ${JSON.stringify(step.unit)})`;
    case "detrend": return `detrend(${step.degree})`;
    case "seasonallyAdjust": return `seasonallyAdjust(${step.length ?? ""})`;
    case "fill": return `fill(${JSON.stringify(step.how)})`;
    case "aggregate": return `aggregate(${JSON.stringify(step.to)}, ${JSON.stringify(step.how)})`;
  }
}

/** The series as it was before its first step: in the units of the data. */
export function original(series: Series): Series {
  return series.steps.length === 0 ? series : series.steps[0].before;
}

function remember(result: Series, step: Step, before: Series, removed?: Float64Array): Series {
  const applied: AppliedStep = removed ? { ...step, before, removed } : { ...step, before };
  return { ...result, steps: [...before.steps, applied] };
}

function logged(series: Series): Float64Array {
  return series.values.map((v, t) => {
    if (v <= 0) throw new RangeError(`log: ${called(series)} is ${v} at ${series.times[t]}; logs take positive numbers only. Leave the log out, or cut the window to the positive part`);
    return Math.log(v);
  });
}

/** (x^lambda - 1) / lambda, and log x at lambda = 0 (Box and Cox 1964), by expm1 so that small lambda keeps its digits. */
function boxCoxed(series: Series, lambda: number): Float64Array {
  if (!Number.isFinite(lambda)) throw new RangeError(`boxCox: lambda is ${lambda}; give a number, usually between -1 and 2`);
  return series.values.map((v, t) => {
    if (v < 0 || (v === 0 && lambda <= 0)) throw new RangeError(`boxCox: ${called(series)} is ${v} at ${series.times[t]}; with lambda ${lambda} it takes ${lambda > 0 ? "no negative numbers" : "positive numbers only"}`);
    if (v === 0) return -1 / lambda;
    return lambda === 0 ? Math.log(v) : Math.expm1(lambda * Math.log(v)) / lambda;
  });
}

/** y[t] - y[t - lag]; the first `lag` values are lost. */
function differenced(series: Series, lag: number): Series {
  if (!Number.isInteger(lag) || lag < 1) throw new RangeError(`difference: the lag is ${lag}; give a whole number of periods, 1 or more`);
  if (series.n <= lag) throw new RangeError(`difference(${lag}): ${called(series)} has ${series.n} value${series.n === 1 ? "" : "s"}; a difference at lag ${lag} needs at least ${lag + 1}`);
  const { values } = series;
  const n = series.n - lag;
  const result = new Float64Array(n);
  for (let t = 0; t < n; t++) result[t] = values[t + lag] - values[t];
  const times = series.times.slice(lag);
  return { name: series.name, unit: series.unit, every: series.every, start: times[0], n, values: result, times, steps: [] };
}

function perDay(series: Series): Series {
  const { every } = series;
  if (every === null) throw new RangeError(`perDay: ${called(series)} is only numbered; days in a period need dates`);
  const values = series.values.map((v, t) => v / daysIn(series.times[t], every));
  return withValues(series, values, { unit: series.unit === "" ? "per day" : `${series.unit} per day` });
}

function logUnit(unit: string): string {
  return unit === "" ? "log" : `log ${unit}`;
}

function called(series: Series): string {
  return series.name === "" ? "the series" : series.name;
}
