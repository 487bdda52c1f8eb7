// The augmented Dickey-Fuller test.

import type { Test } from "../diagnostics/test.ts";
import { levelWords, printedP, rejects, unavailable } from "../diagnostics/test.ts";
import type { Series } from "../series/series.ts";
import type { LagChoice } from "./dickeyFullerRegression.ts";
import { dickeyFullerRegression, schwertLags } from "./dickeyFullerRegression.ts";
import type { Trend } from "./mackinnon.ts";
import { checkTrend, dickeyFullerCritical, dickeyFullerP, trendCount, trendWords } from "./mackinnon.ts";
import { sampleOf } from "./sample.ts";

export interface AdfOptions {
  /** Deterministic terms of the regression. */
  readonly trend?: Trend;
  /** Lagged differences, or the criterion that chooses them. */
  readonly lags?: LagChoice | null;
  /** Largest number a criterion compares; default ceil(12 (n/100)^(1/4)). */
  readonly maxLags?: number | null;
  /** Confidence at which the sentence reads the test. */
  readonly level?: number;
}

/** Augmented Dickey-Fuller test of a unit root, against stationarity around the trend. Small p: no unit root.
 *  p-value from the response surface of MacKinnon (1994), critical values from MacKinnon (2010).
 *  @throws RangeError for an unknown trend, or lags out of range
 *  Source: Said & Dickey (1984). */
export function adf(x: Series | ArrayLike<number>, options: AdfOptions = {}): Test {
  const trend = options.trend ?? "constant", asked = options.lags ?? "aic";
  checkTrend("adf", trend);
  const nullHypothesis = "a unit root: shocks never die out";
  const name = "augmented Dickey-Fuller tau";
  const { values, note, why } = sampleOf(x, trendCount(trend) + 5 + (typeof asked === "number" ? 2 * asked : 0));
  if (why !== null) return unavailable(nullHypothesis, values.length, why, { name });
  const maxLags = checkedLags("adf", asked, options.maxLags, values.length, trend);
  const { statistic, lags, n } = dickeyFullerRegression(values, trend, asked, maxLags);
  if (Number.isNaN(statistic)) return unavailable(nullHypothesis, n, "the regression fits the data exactly, so there are no errors to measure a unit root against", { name, lags });
  const p = dickeyFullerP(trend, statistic);
  return {
    name, statistic, p, bound: null, lags, lagRule: lagRule(asked, maxLags), critical: dickeyFullerCritical(trend, n), n, nullHypothesis, status: "ok",
    ...(note === null ? {} : { note }), sentence: unitRootSentence("The augmented Dickey-Fuller test", { p, bound: null }, trend, options.level),
  };
}

/** The largest lag to compare, checked. */
export function checkedLags(who: string, asked: LagChoice, given: number | null | undefined, n: number, trend: Trend): number {
  const room = Math.floor(n / 2) - trendCount(trend) - 1;
  if (typeof asked === "number") {
    if (!Number.isInteger(asked) || asked < 0) throw new RangeError(`${who}: lags is ${asked}, expected a whole number from 0 on, "aic", "bic" or "maic"`);
    return asked;
  }
  if (!["aic", "bic", "maic"].includes(asked)) throw new RangeError(`${who}: lags is "${String(asked)}", expected a whole number from 0 on, "aic", "bic" or "maic"`);
  if (given === null || given === undefined) return schwertLags(n, trend);
  if (!Number.isInteger(given) || given < 0 || given > room) throw new RangeError(`${who}: maxLags is ${given}, expected a whole number from 0 to ${Math.max(0, room)} for ${n} values`);
  return given;
}

/** How the lags were chosen, in words. */
export function lagRule(asked: LagChoice, maxLags: number): string {
  return typeof asked === "number" ? "as given" : `by least ${asked.toUpperCase()} among 0 to ${maxLags}`;
}

/** What a test whose null hypothesis is a unit root says at a level, without claiming that a hypothesis was proved. */
export function unitRootSentence(name: string, test: Pick<Test, "p" | "bound">, trend: Trend, level = 0.95): string {
  const rejected = rejects(test, 1 - level), p = printedP(test.p, test.bound);
  if (rejected === null) return `${name} cannot be read at the ${levelWords(level)}: its printed table ends before it (${p}).`;
  return rejected
    ? `${name} rejects a unit root at the ${levelWords(level)} (${p}), in favour of a series that is stationary ${trendWords(trend)}.`
    : `${name} does not reject a unit root at the ${levelWords(level)} (${p}); that is no proof of one.`;
}
