// The kind that sets unit-root and stationarity tests side by side.

import { defaultSeasonLength, lambdaProfile, rangeMean, testingStationarity, type LambdaProfile, type RangeMean, type Series, type Stationarity } from "../stdlib/index.ts";
import { OptionError, type Kind, type OptionTable, type RunContext } from "./kind.ts";
import { inSlices } from "./parts/inSlices.ts";
import { needLevel, needVaryingSeries } from "./parts/needs.ts";
import { axisTitle, scaleText } from "./parts/scale.ts";
import { stationarityParts } from "./parts/stationarityParts.ts";

export interface StationarityCell {
  readonly series: unknown;
  readonly trend?: "none" | "constant" | "linear" | "quadratic";
  readonly lags?: number | "aic" | "bic" | "maic";
  readonly bandwidth?: number | "short" | "long" | "automatic";
  readonly level?: number;
}

/** The tests with the series that they are of. */
export interface ShownStationarity extends Stationarity {
  readonly of: string;
  readonly axis: string;
  readonly series: Series;
  /** Box-Cox lambda by two methods, and the blocks behind the picture; null where a log, a power or a difference came before. */
  readonly lambda: { readonly guerrero: LambdaProfile; readonly likelihood: LambdaProfile } | null;
  readonly rangeMean: RangeMean | null;
}

const stationarityOptions: OptionTable = {
  series: { type: "series", required: true, sentence: "The series to test, on the scale that would be modelled.", example: "crossings" },
  trend: { type: { oneOf: ["none", "constant", "linear", "quadratic"] }, default: "constant", sentence: "What the series would be stationary around: nothing, a constant, a line, or a parabola." },
  lags: { type: { anyOf: ["integer", { oneOf: ["aic", "bic", "maic"] }] }, min: 0, sentence: "Lagged differences in the Dickey-Fuller regressions: a number, or the criterion that chooses it; without this option AIC for ADF and, as its authors have it, BIC for DF-GLS." },
  bandwidth: { type: { anyOf: ["integer", { oneOf: ["short", "long", "automatic"] }] }, default: "short", min: 0, sentence: "Autocovariances in the long-run variance of the other tests: a number, or the rule that chooses it from the number of observations." },
  level: { type: "level", default: 0.95, sentence: "Confidence at which a test is read as rejecting its null hypothesis." },
};

/** Tests whose null hypotheses oppose each other, read together. */
export const stationarity: Kind<StationarityCell, ShownStationarity> = {
  name: "stationarity",
  sentence: "Unit-root and stationarity tests side by side, each with its null hypothesis in words.",
  options: stationarityOptions,
  body: "options",
  callable: true,
  example: "series: crossings",
  run: (options, context) => runStationarity(options, context),
  show: (result, context) => stationarityParts(result, context.width),
};

async function runStationarity(options: StationarityCell, context: RunContext): Promise<ShownStationarity> {
  const series = needVaryingSeries(options.series, 6, "a unit-root test");
  const level = needLevel(options.level);
  const { trend = "constant", lags, bandwidth } = options;
  if (typeof lags === "number" && lags > series.n / 2) throw new OptionError("lags", `lags is ${lags}: with ${series.n} values the regression would have more lags than data to estimate them; ask for at most ${Math.floor(series.n / 4)}`);
  const given = { series, trend, level, ...(lags === undefined || lags === null ? {} : { lags }), ...(bandwidth === undefined || bandwidth === null ? {} : { bandwidth }) };
  const result = await inSlices(testingStationarity(given), context);
  await context.breathe();
  return { ...result, of: scaleText(series), axis: axisTitle(series), series, ...spreadOf(series, trend) };
}

/** The question of a power comes before any difference: it is asked of a positive series on its own scale only. */
function spreadOf(series: Series, trend: string): Pick<ShownStationarity, "lambda" | "rangeMean"> {
  const changed = series.steps.some(step => step.step === "log" || step.step === "boxCox" || step.step === "difference" || step.step === "detrend");
  if (changed || series.values.some(value => value <= 0)) return { lambda: null, rangeMean: null };
  const season = defaultSeasonLength(series.every);
  const enough = season === null || season < 2 ? series.n >= 16 : series.n >= 3 * season;
  if (!enough) return { lambda: null, rangeMean: null };
  const regression = season !== null && season > 1 ? "season" : trend === "constant" || trend === "none" ? "mean" : "trend";
  return { lambda: { guerrero: lambdaProfile(series, "guerrero"), likelihood: lambdaProfile(series, "likelihood", { regression }) }, rangeMean: rangeMean(series) };
}
