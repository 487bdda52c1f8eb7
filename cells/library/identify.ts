// Functions of identification and diagnostic checking: correlations, tests, spectra.

import {
  acf, adf, archLM, boxPierce, canovaHansen, ccf, cumulativePeriodogram, cusum, decompose, defaultSeasonLength, dfGls, durbinWatson, extendedAcf, jarqueBera, kpss, lambdaProfile, largestBreak, ljungBox, mcleodLi, monti, outliers,
  pacf, phillipsPerron, prewhitenedCcf, seasonalStrength, smallestCanonical, spectrum, stl, subseries, withValues, type OrderTable, type Series,
} from "../../stdlib/index.ts";
import type { LibraryFunction } from "../kind.ts";
import { define, fit, number, numbers, optional, series, settings, subject, whole, word } from "./define.ts";

const correlations = "correlations", unitRoots = "unit roots", checks = "diagnostics", season = "season and spectrum";
const lambdaSettings = ["length", "from", "to", "regression", "level"] as const;

export const identifyFunctions: readonly LibraryFunction[] = [
  define(correlations, "acf", [numbers("series"), whole("lags")], "Autocorrelations from lag 0.", (x, lags) => acf(x, lags)),
  define(correlations, "pacf", [numbers("series"), whole("lags"), optional(word("how", ["levinson", "regression", "burg"]))], "Partial autocorrelations from lag 0, by Levinson's recursion unless told otherwise.", (x, lags, how) => pacf(x, lags, how)),
  define(correlations, "ccf", [numbers("x"), numbers("y"), whole("lags")], "Cross-correlations over the periods that both have: index k is x at t with y at t + k.", (x, y, lags) => ccf(x, y, lags)),
  define(correlations, "extendedAcf", [numbers("series"), optional(whole("maxAr", 0, 20)), optional(whole("maxMa", 0, 20))], "Extended autocorrelations for mixed orders, with a row for each pair of orders.", (x, maxAr, maxMa) => withRows(extendedAcf(x, maxAr, maxMa))),
  define(correlations, "smallestCanonical", [numbers("series"), optional(whole("maxAr", 0, 20)), optional(whole("maxMa", 0, 20))], "Tests of the smallest canonical correlation for mixed orders, with a row for each pair of orders.", (x, maxAr, maxMa) => withRows(smallestCanonical(x, maxAr, maxMa))),
  define(correlations, "prewhitenedCcf", [numbers("x"), numbers("y"), whole("lags"), optional(settings("options", ["level", "order"]))], "Cross-correlations at lags -lags to lags after an autoregression of x has been taken out of both.", (x, y, lags, options) => prewhitenedCcf(x, y, lags, options as Parameters<typeof prewhitenedCcf>[3])),
  define(unitRoots, "adf", [numbers("series"), optional(settings("options", ["trend", "lags", "maxLags"]))], "Augmented Dickey-Fuller test of a unit root.", (x, options) => adf(x, options as Parameters<typeof adf>[1])),
  define(unitRoots, "kpss", [numbers("series"), optional(settings("options", ["trend", "bandwidth"]))], "KPSS test of stationarity.", (x, options) => kpss(x, options as Parameters<typeof kpss>[1])),
  define(unitRoots, "phillipsPerron", [numbers("series"), optional(settings("options", ["trend", "bandwidth"]))], "Phillips-Perron test of a unit root.", (x, options) => phillipsPerron(x, options as Parameters<typeof phillipsPerron>[1])),
  define(unitRoots, "dfGls", [numbers("series"), optional(settings("options", ["trend", "lags", "maxLags"]))], "Dickey-Fuller test after GLS detrending.", (x, options) => dfGls(x, options as Parameters<typeof dfGls>[1])),
  define(unitRoots, "canovaHansen", [numbers("series"), optional(settings("options", ["length", "bandwidth", "difference"]))], "Canova-Hansen test of a stable season.", (x, options) => canovaHansen(x, options as Parameters<typeof canovaHansen>[1])),
  define(checks, "ljungBox", [subject(), whole("lag", 1)], "Ljung-Box test up to a lag; of a fit, the degrees of freedom are reduced by its free coefficients.", (x, lag) => ljungBox(x, lag)),
  define(checks, "boxPierce", [subject(), whole("lag", 1)], "Box-Pierce test up to a lag.", (x, lag) => boxPierce(x, lag)),
  define(checks, "monti", [subject(), whole("lag", 1)], "Monti's test of the partial autocorrelations up to a lag.", (x, lag) => monti(x, lag)),
  define(checks, "jarqueBera", [subject()], "Jarque-Bera test of normality.", (x) => jarqueBera(x)),
  define(checks, "archLM", [subject(), optional(whole("lags", 1))], "Lagrange multiplier test of changing variance.", (x, lags) => archLM(x, lags)),
  define(checks, "mcleodLi", [subject(), optional(whole("lags", 1))], "McLeod-Li test of changing variance.", (x, lags) => mcleodLi(x, lags)),
  define(checks, "durbinWatson", [subject()], "Durbin-Watson statistic.", (x) => durbinWatson(x)),
  define(checks, "cumulativePeriodogram", [subject(), optional(number("taper", { min: 0, max: 0.5, expected: "a share from 0 to 0.5" }))], "Bartlett's test of white noise by the cumulative periodogram.", (x, taper) => cumulativePeriodogram(x, taper)),
  define(checks, "cusum", [subject()], "CUSUM test of a constant mean.", (x) => cusum(x)),
  define(checks, "largestBreak", [subject(), optional(number("trim", { min: 0.01, max: 0.49, expected: "a share from 0.01 to 0.49" }))], "Largest-break test of a constant mean, with the break's date.", (x, trim) => largestBreak(x, trim)),
  define(checks, "outliers", [fit(), optional(settings("options", ["critical", "types", "decay", "most", "again"]))], "Outliers of a fit by type, each with the regressor to add (Chen and Liu 1993).", (m, options) => outliers(m, options as Parameters<typeof outliers>[1])),
  define(season, "spectrum", [numbers("series"), optional(settings("options", ["smooth", "taper", "level"]))], "Periodogram and smoothed spectrum, by frequency in cycles a period.", (x, options) => spectrum(x, options as Parameters<typeof spectrum>[1])),
  define(season, "estimateLambda", [numbers("series"), optional(word("how", ["guerrero", "likelihood"])), optional(settings("options", lambdaSettings))], "Box-Cox lambda, a number, by Guerrero's method or by likelihood.", (x, how, options) => {
    const { lambda, note } = lambdaProfile(x, how, options as Parameters<typeof lambdaProfile>[2]);
    if (Number.isNaN(lambda)) throw new RangeError(note ?? "the data name no lambda");
    return lambda;
  }),
  define(season, "lambdaProfile", [numbers("series"), optional(word("how", ["guerrero", "likelihood"])), optional(settings("options", lambdaSettings))], "Box-Cox lambda with its profile and, by likelihood, its interval.", (x, how, options) => lambdaProfile(x, how, options as Parameters<typeof lambdaProfile>[2])),
  define(season, "decompose", [series(), optional(settings("options", ["length", "kind"]))], "Classical decomposition: trend, seasonal and remainder as series; kind \"additive\" or \"multiplicative\".", (s, options) => asSeries(s, decompose(s, options as Parameters<typeof decompose>[1]))),
  define(season, "subseries", [series(), optional(whole("length", 2))], "Values by position in the season, each with its mean.", (s, length) => subseries(s, length)),
  define(season, "stl", [series(), optional(settings("options", ["length", "seasonalWindow", "trendWindow", "lowPassWindow", "robust", "seasonalDegree"]))], "Trend, seasonal and remainder as series, by loess (Cleveland and others 1990).", (s, options) => asSeries(s, stl(s, options as Parameters<typeof stl>[1]))),
  define(season, "seasonalStrength", [series(), optional(whole("length", 2))], "Strength of season and trend, each between 0 and 1; null where the data cannot say.", (s, length) => {
    const periods = length ?? defaultSeasonLength(s.every);
    if (periods === null) throw new RangeError("seasonalStrength: the spacing of the series names no season; give its length in periods, as in seasonalStrength(series, 12)");
    return seasonalStrength(s, periods);
  }),
];

/** A table of orders with its cells as rows besides, for tables and charts. */
function withRows(table: OrderTable) {
  const wide = table.maxMa + 1;
  return { ...table, rows: Array.from(table.values, (value, i) => ({ ar: Math.floor(i / wide), ma: i % wide, value, beyond: table.beyond[i] === 1 })) };
}

/** The parts of a decomposition as series, so that they can be drawn and combined. */
function asSeries<T extends { readonly status: string; readonly trend: Float64Array; readonly seasonal: Float64Array; readonly remainder: Float64Array }>(given: Series, parts: T) {
  if (parts.status !== "ok") return parts;
  const part = (name: "trend" | "seasonal" | "remainder"): Series => withValues(given, parts[name], { name: `${name} of ${given.name || "the series"}` });
  return { ...parts, trend: part("trend"), seasonal: part("seasonal"), remainder: part("remainder") };
}
