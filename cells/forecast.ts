// The kind that forecasts from the end of a model's window.

import { forecasting, type Forecast, type ForecastOptions, type Series } from "../stdlib/index.ts";
import { OptionError, type Kind, type OptionTable, type RunContext } from "./kind.ts";
import { needForecaster } from "./parts/forecaster.ts";
import { forecastParts } from "./parts/forecastParts.ts";
import { inSlices } from "./parts/inSlices.ts";

export interface ForecastCell {
  readonly model: unknown;
  readonly horizon: number;
  readonly levels?: readonly number[];
  readonly regressors?: Readonly<Record<string, Series>>;
  readonly scenarios?: ForecastOptions["scenarios"];
  readonly totals?: ForecastOptions["totals"];
  readonly bands?: ForecastOptions["bands"];
  readonly seed?: number;
  readonly threshold?: number | readonly number[];
  readonly paths?: number;
  readonly data?: Series;
}

const longestHorizon = 5000;

const forecastOptions: OptionTable = {
  model: { type: "forecaster", required: true, sentence: "What forecasts: a fit, a rule such as rule.naive(crossings), or a ranked row of a comparison such as contest.best.", example: "airline" },
  horizon: { type: "integer", required: true, min: 1, max: longestHorizon, sentence: "How many periods ahead, from the end of the model's window.", example: "12" },
  levels: { type: { listOf: "level" }, default: [0.5, 0.9], sentence: "Confidence of the bands, each a share between 0 and 1.", example: "[0.5, 0.9]" },
  regressors: { type: "object", sentence: "Future values of the regressors that are series, by the names the fit uses; interventions extend by themselves.", example: "{price: priceAhead}" },
  scenarios: { type: "object", sentence: "Several futures of the regressors side by side, by label, each as in regressors; differences are from the first. What regressors gives holds in all of them.", example: "{cheap: {price: low}, dear: {price: high}}" },
  totals: { type: "any", sentence: "Spans to total: \"year\" for each calendar year touched, a year such as \"2025\", or a list of {from, to}.", example: "\"year\"" },
  bands: { type: { oneOf: ["plugIn", "simulated", "calibrated"] }, default: "plugIn", sentence: "How the bands are made: from the model's formula, by simulation with uncertain parameters and resampled shocks, or from held-out errors." },
  threshold: { type: { anyOf: ["number", { listOf: "number" }] }, sentence: "A value, or several, in the units of the data; the probability of lying above it is given for each period and for the whole span.", example: "1500" },
  paths: { type: "integer", default: 0, min: 0, max: 1000, sentence: "How many sample paths to draw and to give." },
  seed: { type: "integer", default: 1, min: 0, sentence: "Seed of everything that is simulated: the same seed gives the same paths." },
  data: { type: "series", sentence: "The whole loaded series, where the model saw only a part of it: what came after the origin is drawn as held out.", example: "crossings" },
};

/** Point forecasts, bands and totals in the units of the data. */
export const forecast: Kind<ForecastCell, Forecast> = {
  name: "forecast",
  sentence: "Point forecasts, bands and totals in the units of the data, from the end of the model's window.",
  options: forecastOptions,
  body: "options",
  callable: true,
  example: "model: airline\nhorizon: 12",
  run: (options, context) => runForecast(options, context),
  show: result => forecastParts(result),
};

async function runForecast(options: ForecastCell, context: RunContext): Promise<Forecast> {
  const model = needForecaster(options.model);
  const { horizon } = options;
  if (!Number.isInteger(horizon) || horizon < 1) throw new OptionError("horizon", `the horizon is a whole number of periods, 1 or more; found ${String(horizon)}`);
  if (horizon > longestHorizon) throw new OptionError("horizon", `a horizon of ${horizon} periods is longer than ${longestHorizon}, the most that is forecast`);
  const levels = options.levels ?? [0.5, 0.9];
  for (const level of levels) {
    if (!(level > 0 && level < 1)) throw new OptionError("levels", `each level is a share between 0 and 1, such as 0.9; found ${String(level)}${level > 1 && level < 100 ? `: for ${level}% write ${level / 100}` : ""}`);
  }
  const twice = levels.find((level, i) => levels.indexOf(level) < i);
  if (twice !== undefined) throw new OptionError("levels", `levels has ${twice} twice; give each once`);
  const rest = Object.fromEntries(Object.entries(options).filter(([name, value]) => value !== null && value !== undefined && name !== "model"));
  return inSlices(forecasting(model, { ...rest, horizon, levels }), context);
}
