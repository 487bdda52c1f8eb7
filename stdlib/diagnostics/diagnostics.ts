// Diagnostic checking of a fit: every test on its residuals, the pictures' numbers, and what it comes to in a sentence.

import type { Fit } from "../arma/model.ts";
import { acf } from "../correlogram/acf.ts";
import { checkLevel, independentBand } from "../correlogram/bands.ts";
import { partialFrom } from "../correlogram/pacf.ts";
import type { Gradual } from "../gradual.ts";
import { atOnce } from "../gradual.ts";
import { defaultSeasonLength } from "../series/every.ts";
import type { Series } from "../series/series.ts";
import { withValues } from "../series/series.ts";
import type { Cusum, LargestBreak } from "./breaks.ts";
import { cusum, largestBreak } from "./breaks.ts";
import { archLM, mcleodLi } from "./changingVariance.ts";
import type { CumulativePeriodogram } from "./cumulativePeriodogram.ts";
import { cumulativePeriodogram } from "./cumulativePeriodogram.ts";
import { durbinWatson } from "./durbinWatson.ts";
import { jarqueBera } from "./jarqueBera.ts";
import type { Outliers } from "./outliers.ts";
import { searchingOutliers } from "./outliers.ts";
import type { PortmanteauRows } from "./portmanteau.ts";
import { boxPierce, ljungBox, monti, portmanteauRows } from "./portmanteau.ts";
import type { Quantiles } from "./qq.ts";
import { quantiles } from "./qq.ts";
import { freeArmaCoefficients, observedOf } from "./subject.ts";
import type { Test } from "./test.ts";
import { printedP, rejects, unavailable } from "./test.ts";

export interface DiagnosticsOptions {
  readonly model: Fit;
  /** Lag at which the portmanteau tests are quoted; default two seasons or 10, where the data allow. */
  readonly lags?: number | null;
  readonly level?: number;
}

export interface Diagnostics {
  readonly label: string;
  readonly status: "ok" | "unavailable";
  readonly ljungBox: Test; readonly boxPierce: Test; readonly monti: Test;
  readonly jarqueBera: Test; readonly archLM: Test; readonly mcleodLi: Test;
  readonly durbinWatson: number;
  readonly cumulativePeriodogram: CumulativePeriodogram;
  readonly cusum: Cusum; readonly break: LargestBreak;
  readonly outliers: Outliers;
  /** The portmanteau tests at every lag up to `acf`'s last, df null where none are left. */
  readonly portmanteau: PortmanteauRows;
  /** Residual correlations from lag 0, and the half-width of their independent band. */
  readonly acf: Float64Array; readonly pacf: Float64Array; readonly band: number;
  readonly outside: { readonly acf: readonly number[]; readonly pacf: readonly number[] };
  readonly qq: Quantiles;
  readonly residuals: Series;
  /** Residuals over sigma. */
  readonly standardised: Series;
  /** Standardised residuals beyond 3, with their times. */
  readonly large: readonly { readonly time: string; readonly value: number }[];
  readonly n: number; readonly lags: number; readonly level: number;
  readonly modelDf: number; readonly seasonLength: number | null;
  /** "passes", "autocorrelated", "other signs" or "unavailable". */
  readonly verdict: "passes" | "autocorrelated" | "other signs" | "unavailable";
  readonly notes: readonly string[];
  readonly sentence: string;
}

/** Checks a fit's residuals. Residuals are one-step errors over the square root of their relative variance; those used up by
 *  differencing are not among them.
 *  @throws RangeError for lags or level out of range */
export function diagnostics(options: DiagnosticsOptions): Diagnostics {
  return atOnce(checking(options));
}

/** The same in slices: the tests, then each step of the search for outliers. */
export function* checking({ model, lags: asked, level = 0.95 }: DiagnosticsOptions): Gradual<Diagnostics> {
  checkLevel("diagnostics", level);
  const residuals = model.residuals, values = residuals.values, n = observedOf(values).length;
  const modelDf = freeArmaCoefficients(model), seasonLength = model.seasonLength > 1 ? model.seasonLength : defaultSeasonLength(residuals.every);
  const lags = asked ?? defaultLag(values.length, seasonLength, modelDf);
  if (!Number.isInteger(lags) || lags < 1 || (values.length > 1 && lags >= values.length)) throw new RangeError(`diagnostics: lags is ${lags}, expected a whole number from 1 to ${values.length - 1} for ${values.length} residuals`);
  const standardised = withValues(residuals, values.map((v) => v / Math.sqrt(model.sigma2)), { name: `standardised residuals of ${model.label}`, unit: "" });
  const shown = Math.max(lags, Math.min(Math.floor(values.length / 3), Math.max(20, 3 * (seasonLength ?? 0))));
  const short = values.length < 4;
  const r = short ? new Float64Array(0) : acf(values, Math.min(shown, values.length - 1)), partial = short ? r : partialFrom(r);
  const band = independentBand(Math.max(n, 1), level);
  const outsideOf = (c: Float64Array): number[] => [...c.keys()].filter((k) => k > 0 && Math.abs(c[k]) > band);
  const tested = short
    ? { ljungBox: tooShort(n), boxPierce: tooShort(n), monti: tooShort(n) }
    : { ljungBox: ljungBox(model, lags, undefined, level), boxPierce: boxPierce(model, lags, undefined, level), monti: monti(model, lags, undefined, level) };
  yield { done: 1, total: 3, what: "portmanteau tests" };
  const tests = { ...tested, jarqueBera: jarqueBera(model, level), archLM: archLM(model, undefined, level), mcleodLi: short ? tooShort(n) : mcleodLi(model, undefined, level),
    cumulativePeriodogram: cumulativePeriodogram(model, 0, level), cusum: cusum(model, level), break: largestBreak(model, 0.15, level) };
  const searching = searchingOutliers(model);
  let search = searching.next();
  for (; !search.done; search = searching.next()) yield { done: 2, total: 3, what: "search for outliers" };
  const found = search.value;
  const { verdict, sentence } = summary(tests, found, outsideOf(r), lags, 1 - level, band, r);
  return {
    label: model.label, status: verdict === "unavailable" ? "unavailable" : "ok", ...tests, durbinWatson: durbinWatson(model), outliers: found,
    portmanteau: short ? { ljungBox: [], boxPierce: [], monti: [] } : portmanteauRows(values, r.length - 1, modelDf),
    acf: r, pacf: partial, band, outside: { acf: outsideOf(r), pacf: outsideOf(partial) }, qq: quantiles(values, level), residuals, standardised,
    large: [...standardised.values.keys()].filter((t) => Math.abs(standardised.values[t]) > 3).map((t) => ({ time: residuals.times[t], value: standardised.values[t] })),
    n, lags, level, modelDf, seasonLength, verdict, notes: notesOf(model, n, lags, modelDf, asked), sentence,
  };
}

/** Two seasons, or 10, at most a fifth of the residuals, and a few more than the model has coefficients. */
function defaultLag(n: number, seasonLength: number | null, modelDf: number): number {
  const usual = seasonLength !== null && n >= 4 * seasonLength ? Math.min(2 * seasonLength, Math.max(10, Math.floor(n / 4))) : Math.min(10, Math.max(1, Math.floor(n / 5)));
  return Math.max(1, Math.min(n - 1, Math.max(usual, modelDf + 3)));
}

function tooShort(n: number): Test {
  const note = `${n} residuals are too few`;
  return unavailable("no autocorrelation up to this lag", n, note);
}

type Tests = Pick<Diagnostics, "ljungBox" | "monti" | "jarqueBera" | "archLM" | "mcleodLi" | "cumulativePeriodogram" | "cusum" | "break">;

function summary(tests: Tests, found: Outliers, outside: readonly number[], lags: number, alpha: number, band: number, r: Float64Array): { verdict: Diagnostics["verdict"]; sentence: string } {
  const { ljungBox: lb } = tests;
  if (lb.status !== "ok") return { verdict: "unavailable", sentence: lb.note?.startsWith("none left") ? `No portmanteau test at lag ${lags}: ${lb.note}.` : `The data cannot answer: ${lb.note ?? "the residuals cannot be tested"}.` };
  const finds = (t: Test): boolean => rejects(t, alpha) === true;
  const signs = [
    ...(finds(tests.archLM) || finds(tests.mcleodLi) ? ["their variance changes with its own past"] : []),
    ...(finds(tests.cusum) || finds(tests.break) ? [`their level seems to shift${tests.break.at === undefined ? "" : ` about ${tests.break.at}`}`] : []),
    ...(finds(tests.jarqueBera) ? ["they are not normally distributed"] : []),
    ...(found.found.length > 0 ? [`${found.found.length === 1 ? `one period (${found.found[0].time}) stands` : `${found.found.length} periods stand`} out`] : []),
  ];
  const also = signs.length === 0 ? "" : ` ${finds(lb) ? "Also, " : "But "}${joined(signs)}.`;
  if (finds(lb)) {
    const within = outside.filter((k) => k <= lags), largest = within.length === 0 ? "" : `; the largest is at lag ${within.reduce((a, b) => (Math.abs(r[b]) > Math.abs(r[a]) ? b : a))}`;
    return { verdict: "autocorrelated", sentence: `The residuals are still autocorrelated over ${lags} lags (Ljung-Box ${printedP(lb.p)} on ${lb.df} df${largest}): the model leaves something to predict.${also}` };
  }
  const single = outside.filter((k) => k <= lags), alone = single.length === 0 ? "" : `; ${single.length > 1 ? "by themselves lags" : "by itself lag"} ${joined(single.map(String))} ${single.length > 1 ? "are" : "is"} outside ${band.toFixed(2)}, where about ${(alpha * lags).toFixed(1)} would be by chance`;
  return { verdict: signs.length === 0 ? "passes" : "other signs", sentence: `The residuals show no autocorrelation over ${lags} lags beyond chance (Ljung-Box ${printedP(lb.p)} on ${lb.df} df${alone}); that does not show the model to be right.${also}` };
}

function joined(list: readonly string[]): string {
  return list.length < 2 ? list.join("") : `${list.slice(0, -1).join(", ")} and ${list[list.length - 1]}`;
}

function notesOf(model: Fit, n: number, lags: number, modelDf: number, asked: number | null | undefined): string[] {
  const missing = model.residuals.n - n;
  return [
    `Degrees of freedom of the portmanteau tests: lag less ${modelDf} estimated ARMA ${modelDf === 1 ? "coefficient" : "coefficients"}; the mean and regressors do not count.${modelDf > 0 ? ` Up to lag ${modelDf} none are left.` : ""}`,
    ...(asked === null || asked === undefined ? [`Quoted at lag ${lags}, chosen from the length of the data and the season.`] : []),
    ...(missing > 0 ? [`${missing} of ${model.residuals.n} residuals are missing: correlations use complete pairs, and the periodogram cannot be had.`] : []),
    ...(model.converged ? [] : ["The estimation did not converge: these residuals are of the best point found."]),
  ];
}
