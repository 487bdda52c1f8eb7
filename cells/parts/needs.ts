// What the kinds that model a series ask of it before they begin, with the refusal in an analyst's words.

import { OptionError } from "../kind.ts";
import type { Lags, Series } from "../../stdlib/index.ts";
import { count, figure } from "./words.ts";
import { originalName } from "./scale.ts";

/** A series, or a refusal that says what was found instead. */
function needSeries(value: unknown, option = "series"): Series {
  if (isSeriesLike(value)) return value;
  throw new OptionError(option, `${option} needs a series, such as the name of a load or transform cell; this is ${whatIs(value)}`);
}

/** A series that varies and is long enough. @param least  observations needed */
export function needVaryingSeries(value: unknown, least: number, why: string, option = "series"): Series {
  const series = needSeries(value, option);
  const name = nameOf(series);
  const observed = Array.from(series.values).filter(x => !Number.isNaN(x));
  if (observed.length < least) {
    throw new OptionError(option, `${name} has ${count(observed.length, "observation")}${afterSteps(series)}; ${why} needs at least ${least}. Use a longer window, or fewer lags or differences`);
  }
  const first = observed[0];
  const spread = observed.reduce((most, x) => Math.max(most, Math.abs(x - first)), 0);
  if (spread <= 1e-13 * Math.abs(first)) {
    throw new OptionError(option, `${name} is constant: each of its ${observed.length} values${afterSteps(series)} is ${figure(first, 6)}, so there is no variation to study. Look at the column that was loaded, or take out a difference`);
  }
  if (observed.some(x => !Number.isFinite(x))) {
    throw new OptionError(option, `${name} holds a value that is not finite${afterSteps(series)}; a log of zero gives one. Look at its smallest values`);
  }
  return series;
}

/** Highest lag that an option asks for, after a check that it makes sense as lags. */
export function highestLag(lags: Lags | undefined, option: string): number {
  if (lags === undefined) return 0;
  const list = typeof lags === "number" ? [lags] : Array.from(lags);
  for (const lag of list) {
    const least = typeof lags === "number" ? 0 : 1;
    if (!Number.isInteger(lag) || lag < least) {
      throw new OptionError(option, `${option} takes a whole number of lags from ${least}, or a list of lags such as [1, 12]; found ${String(lag)}`);
    }
  }
  return list.length === 0 ? 0 : Math.max(...list);
}

/** How many coefficients an option asks for. */
export function lagCount(lags: Lags | undefined): number {
  return lags === undefined ? 0 : typeof lags === "number" ? lags : lags.length;
}

/** Confidence level, as a share. */
export function needLevel(value: unknown, option = "level", usual = 0.95): number {
  if (value === undefined || value === null) return usual;
  if (typeof value === "number" && value > 0 && value < 1) return value;
  if (typeof value === "number" && value >= 1 && value < 100) throw new OptionError(option, `${option} is a share between 0 and 1; for ${value}% write ${value / 100}`);
  throw new OptionError(option, `${option} is a share between 0 and 1, such as 0.95; found ${String(value)}`);
}

/** "crossings" or "the log of crossings, …": the name an author knows the series by. */
export function nameOf(series: Series): string {
  return series.name || originalName(series);
}

function afterSteps(series: Series): string {
  return series.steps.length === 0 ? "" : ` after ${series.steps.length === 1 ? "its step" : `its ${series.steps.length} steps`}`;
}

function isSeriesLike(value: unknown): value is Series {
  return typeof value === "object" && value !== null && "values" in value && "times" in value && "steps" in value;
}

function whatIs(value: unknown): string {
  if (value === null || value === undefined) return "nothing";
  if (Array.isArray(value)) return "a list";
  if (typeof value === "object") {
    if ("sigma2" in value && "residuals" in value) return "a fit (its residuals are a series: write .residuals)";
    return `an object with ${Object.keys(value).slice(0, 4).join(", ")}`;
  }
  if (typeof value === "string") return `the text "${value}"`;
  return `the ${typeof value} ${String(value)}`;
}

/** Runs a computation; a refusal from the numbers becomes one for the author, without the name of the function it begins with. */
export function plainly<T>(compute: () => T, option: string | null = null): T {
  try {
    return compute();
  } catch (error) {
    throw asOptionError(error, option);
  }
}

/** A refusal from the numbers as one for the author; anything else as it is. */
export function asOptionError(error: unknown, option: string | null = null): unknown {
  if (!(error instanceof RangeError)) return error;
  const message = error.message.replace(/^[A-Za-z][A-Za-z. -]*: /, "");
  // "lags is 40, expected 0 to 35" names the option that it is about.
  return new OptionError(option ?? /^`?([a-z][A-Za-z]*)`? is /.exec(message)?.[1] ?? null, message);
}
