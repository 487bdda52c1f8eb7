// Unit-root and stationarity tests side by side, and what they say together.

import type { Test } from "../diagnostics/test.ts";
import { levelWords, printedP, rejects } from "../diagnostics/test.ts";
import { checkLevel } from "../correlogram/bands.ts";
import type { Gradual } from "../gradual.ts";
import { atOnce } from "../gradual.ts";
import { defaultSeasonLength } from "../series/every.ts";
import type { Series } from "../series/series.ts";
import { isSeries, valuesOf } from "../series/series.ts";
import type { SeasonalStrength } from "../decompose/seasonalStrength.ts";
import { seasonalStrength } from "../decompose/seasonalStrength.ts";
import { adf } from "./adf.ts";
import { canovaHansen } from "./canovaHansen.ts";
import { dfGls } from "./dfGls.ts";
import type { DifferenceRow } from "./differences.ts";
import { differencesSentence, differencing } from "./differences.ts";
import type { LagChoice } from "./dickeyFullerRegression.ts";
import { kpss } from "./kpss.ts";
import type { Bandwidth } from "./longRunVariance.ts";
import type { Trend } from "./mackinnon.ts";
import { checkTrend, trendWords } from "./mackinnon.ts";
import { phillipsPerron } from "./phillipsPerron.ts";

export interface StationarityOptions {
  readonly series: Series | ArrayLike<number>;
  readonly trend?: Trend;
  /** Lagged differences of ADF and DF-GLS, or the criterion that chooses them; default AIC for the first, BIC for the second. */
  readonly lags?: LagChoice | null;
  /** Bandwidth of KPSS, Phillips-Perron and (where a number) the seasonal test. */
  readonly bandwidth?: Bandwidth | null;
  readonly level?: number;
  /** Periods a season; default from the spacing; null for none. */
  readonly seasonLength?: number | null;
}

export interface Stationarity {
  readonly adf: Test; readonly phillipsPerron: Test; readonly kpss: Test; readonly dfGls: Test;
  /** Canova-Hansen: stable seasonal pattern; null where there is no season. */
  readonly seasonal: Test | null;
  /** Strength of season and trend by STL, 0 to 1; null where there is no season or too few of them. */
  readonly strength: SeasonalStrength | null;
  readonly differences: readonly DifferenceRow[];
  readonly differencesSentence: string;
  readonly trend: Trend; readonly level: number; readonly seasonLength: number | null;
  /** "stationary", "unit root", "disagree", "undecided" or "unavailable": what the tests say together. */
  readonly verdict: "stationary" | "unit root" | "disagree" | "undecided" | "unavailable";
  /** That in a sentence, with what was not shown. */
  readonly together: string;
  readonly sentence: string;
  readonly notes: readonly string[];
}

/** Runs the tests on one series.
 *  KPSS and DF-GLS know a constant and a straight trend only: for "none" they use a constant, for "quadratic" a straight trend, and say so.
 *  @throws RangeError for options out of range */
export function stationarity(options: StationarityOptions): Stationarity {
  return atOnce(testingStationarity(options));
}

/** The same in slices, one a test or a way of differencing. */
export function* testingStationarity(options: StationarityOptions): Gradual<Stationarity> {
  const { series, trend = "constant", lags = null, bandwidth = "short", level = 0.95 } = options;
  checkTrend("stationarity", trend);
  checkLevel("stationarity", level);
  const usual = isSeries(series) ? defaultSeasonLength(series.every) : null;
  const asked = options.seasonLength === undefined ? usual : options.seasonLength;
  // A season of which there are not three whole ones cannot be tested.
  const seasonLength = asked !== null && valuesOf(series).length >= 3 * asked + 2 ? asked : null;
  const simple = trend === "linear" || trend === "quadratic" ? "linear" : "constant";
  const slices = seasonLength === null ? 7 : 12, step = (done: number, what: string) => ({ done, total: slices, what });
  const ofAdf = adf(series, { trend, lags, level });
  yield step(1, "ADF");
  const ofPhillipsPerron = phillipsPerron(series, { trend, bandwidth, level });
  yield step(2, "Phillips-Perron");
  const ofKpss = kpss(series, { trend: simple, bandwidth, level });
  yield step(3, "KPSS");
  const tests = { adf: ofAdf, phillipsPerron: ofPhillipsPerron, kpss: ofKpss, dfGls: dfGls(series, { trend: simple, lags, level }) };
  yield step(4, "DF-GLS");
  const seasonal = seasonLength === null ? null : canovaHansen(series, { length: seasonLength, bandwidth: typeof bandwidth === "number" ? bandwidth : null, level });
  if (seasonal !== null) yield step(5, "Canova-Hansen");
  const strength = seasonLength === null ? null : seasonalStrength(series, seasonLength);
  const before = seasonLength === null ? 4 : 6, trying = differencing(series, seasonLength, { level });
  let tried = trying.next();
  for (; !tried.done; tried = trying.next()) yield step(Math.min(slices, before + tried.value.done), tried.value.what);
  const rows = tried.value;
  const { verdict, together } = whatTheySay(tests, seasonal, trend, 1 - level);
  const notes = [
    ...(trend === "none" || trend === "quadratic" ? [`KPSS and DF-GLS are not made for this trend and were run ${trendWords(simple)}.`] : []),
    ...(asked !== null && seasonLength === null ? [`Fewer than three seasons of ${asked} periods: the season was not tested.`] : []),
    ...(tests.adf.note === undefined || tests.adf.status !== "ok" ? [] : [`${tests.adf.note}.`]),
  ];
  return {
    ...tests, seasonal, strength, differences: rows, differencesSentence: differencesSentence(rows),
    trend, level, seasonLength, verdict, together, sentence: together, notes,
  };
}

type Tests = Pick<Stationarity, "adf" | "phillipsPerron" | "kpss" | "dfGls">;

function whatTheySay(tests: Tests, seasonal: Test | null, trend: Trend, alpha: number): { verdict: Stationarity["verdict"]; together: string } {
  const at = `at the ${levelWords(1 - alpha)}`;
  const rooted: [string, Test][] = ([["ADF", tests.adf], ["Phillips-Perron", tests.phillipsPerron], ["DF-GLS", tests.dfGls]] as [string, Test][]).filter(([, t]) => t.status === "ok");
  const still = tests.kpss;
  if (rooted.length === 0 || still.status !== "ok") return { verdict: "unavailable", together: `The data cannot answer: ${tests.adf.note ?? still.note ?? "the tests could not be run"}.` };
  const unread = ([...rooted, ["KPSS", still]] as [string, Test][]).find(([, t]) => rejects(t, alpha) === null);
  if (unread !== undefined) return { verdict: "undecided", together: `The tests cannot be read together ${at}: the printed table of ${unread[0]} ends before it (${printedP(unread[1].p, unread[1].bound)}). Each is in the table with its p-value.` };
  const against = rooted.filter(([, t]) => rejects(t, alpha)).map(([name]) => name), not = rooted.filter(([, t]) => !rejects(t, alpha)).map(([name]) => name);
  const kpssRejects = rejects(still, alpha) === true;
  const around = trendWords(trend), season = seasonal === null || seasonal.status !== "ok" ? "" : ` ${seasonal.sentence ?? ""}`;
  const reject = (names: string[]): string => `${list(names)} ${names.length === 1 ? "rejects" : "reject"}`;
  if (not.length === 0 && !kpssRejects) return { verdict: "stationary", together: `The tests agree ${at}: ${reject(against)} a unit root and KPSS does not reject stationarity, so the series can be treated as stationary ${around}.${season}` };
  if (against.length === 0 && kpssRejects) return { verdict: "unit root", together: `The tests agree ${at}: ${not.length === 1 ? `${not[0]} does not reject` : `none of ${list(not)} rejects`} a unit root and KPSS rejects stationarity ${around}, so a difference is called for${trend === "constant" ? " (or a trend in the tests, if the series drifts steadily)" : ""}.${season}` };
  if (against.length === 0) return { verdict: "undecided", together: `The tests cannot tell ${at}: none of them rejects its null hypothesis, neither a unit root nor stationarity ${around}. More data, or knowledge of the process, must decide.${season}` };
  if (not.length === 0) return { verdict: "disagree", together: `The tests disagree ${at}: ${reject(against)} a unit root, yet KPSS rejects stationarity ${around}. A break of level, a trend left out or very long memory does this; look at the picture before differencing.${season}` };
  return { verdict: "disagree", together: `The tests disagree ${at}: ${reject(against)} a unit root, ${list(not)} ${not.length === 1 ? "does" : "do"} not, and KPSS ${kpssRejects ? "rejects" : "does not reject"} stationarity ${around}. The case is not clear; compare the differences side by side.${season}` };
}

function list(names: readonly string[]): string {
  return names.length < 2 ? names.join("") : `${names.slice(0, -1).join(", ")} and ${names[names.length - 1]}`;
}
