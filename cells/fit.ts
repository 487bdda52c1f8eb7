// The kind that estimates an ARMA-type model of a series.

import { fit as estimate, type Fit, type FitOptions } from "../stdlib/index.ts";
import { OptionError, type Kind, type OptionTable } from "./kind.ts";
import { fitParts } from "./parts/fitParts.ts";
import { highestLag, lagCount, nameOf, needVaryingSeries, plainly } from "./parts/needs.ts";
import { count } from "./parts/words.ts";

/** The options of a fit, its series not looked at yet. */
type FitCell = Omit<FitOptions, "series"> & { readonly series: unknown };

const fitOptions: OptionTable = {
  series: { type: "series", required: true, sentence: "The series to model; its transform steps are remembered, so that forecasts come back in the units of the data.", example: "steady" },
  ar: { type: "lags", default: 0, min: 0, sentence: "Autoregressive lags: a number for all lags up to it, or a list for just those lags.", example: "1" },
  ma: { type: "lags", default: 0, min: 0, sentence: "Moving-average lags: a number for all lags up to it, or a list for just those lags.", example: "1" },
  season: { type: "object", sentence: "Seasonal lags as {length, ar, ma}, counted in season lengths and multiplied with the others; length is that of the series' spacing unless given.", example: "{ma: 1}", slip: (value) => (Number.isInteger(value) ? `{length: ${String(value)}, ma: 1}` : null) },
  mean: { type: "boolean", sentence: "Whether the model has a mean; without this option, yes unless the steps include a difference, where a mean is a drift." },
  regressors: { type: "object", sentence: "Regressors by name, in levels: series, or interventions such as pulse(\"2020-03\"); the series' difference steps are applied to them.", example: "{storm: pulse(\"2020-03\")}" },
  hold: { type: "object", sentence: "Coefficients held at values, as {phi, theta, seasonalPhi, seasonalTheta, mean, beta, sigma2}; free leaves one to be estimated.", example: "{phi: [free, 0.2]}" },
  method: { type: { oneOf: ["exact", "restricted", "conditional", "yuleWalker", "burg", "leastSquares"] }, default: "exact", sentence: "How it is estimated: exact maximum likelihood, restricted (the better practice for few data with a mean or regressors), conditional sum of squares, or for a pure autoregression Yule-Walker, Burg or least squares." },
  window: { type: "window", sentence: "Cuts the series it is given, both ends included; later data count as held out.", example: "sample" },
  label: { type: "text", sentence: "What the model is called in comparisons; its order unless given.", example: "\"candidate\"" },
};

/** Estimates a model and shows its equation, coefficients, roots and what is doubtful about it. */
export const fit: Kind<FitCell, Fit> = {
  name: "fit",
  sentence: "Estimates an ARMA-type model of a (transformed) series.",
  options: fitOptions,
  body: "options",
  callable: true,
  example: "series: steady\nar: 0\nma: 1\nseason: {ma: 1}",
  run: options => runFit(options),
  show: (result, context) => fitParts(result, context.width),
};

/** Checks what an author may have slipped on, then estimates. */
function runFit(options: FitCell): Fit {
  const asked = checkedFitOptions(options);
  return plainly(() => estimate(asked));
}

/** The options of a fit after the checks that need no estimation. @throws OptionError in words for the author */
function checkedFitOptions(options: FitCell): FitOptions {
  const given = Object.fromEntries(Object.entries(options).filter(([, value]) => value !== null && value !== undefined)) as FitCell;
  const series = needVaryingSeries(given.series, 3, "estimation");
  const season = given.season ?? {};
  if (typeof season !== "object") throw new OptionError("season", `season takes an object such as {ma: 1} or {length: 12, ar: 1}; found ${String(season)}`);
  const length = season.length ?? 1;
  if (!Number.isInteger(length) || length < 1) throw new OptionError("season", `the season's length is a whole number of periods, at least 2; found ${String(season.length)}`);
  const own = { ar: highestLag(given.ar, "ar"), ma: highestLag(given.ma, "ma") };
  const seasonal = { ar: highestLag(season.ar, "season"), ma: highestLag(season.ma, "season") };
  const observed = Array.from(series.values).filter(x => !Number.isNaN(x)).length;
  const coefficients = lagCount(given.ar) + lagCount(given.ma) + lagCount(season.ar) + lagCount(season.ma) + Object.keys(given.regressors ?? {}).length;
  const reach = Math.max(own.ar + seasonal.ar * length, own.ma + seasonal.ma * length);
  if (reach >= observed || coefficients + 2 > observed) {
    const worst = own.ar >= own.ma ? "ar" : "ma";
    const option = seasonal.ar + seasonal.ma > 0 && Math.max(own.ar, own.ma) < observed / 2 ? "season" : worst;
    throw new OptionError(option, `the model reaches back ${count(reach, "period")} with ${count(coefficients, "coefficient")}, but ${nameOf(series)} has only ${count(observed, "observation")}; ask for fewer lags, or use a longer series`);
  }
  return { ...given, series };
}
