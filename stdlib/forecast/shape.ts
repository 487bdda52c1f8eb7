// What a forecast turns into far ahead, in a sentence: a flat line is often thought a fault, and is not one.

import type { Fit } from "../arma/model.ts";
import { roots } from "../arma/roots.ts";
import type { Forecaster, Rule } from "./model.ts";
import { trailingDifferences } from "./reach.ts";
import { isRule } from "./rules.ts";

/** The long-run shape: mean, flat, line, or a season that repeats. */
export function shapeOf(model: Forecaster): string {
  const onLogs = model.series.steps.some((s) => s.step === "log" || s.step === "boxCox");
  return `${isRule(model) ? ruleShape(model, onLogs) : fitShape(model, onLogs)}${backInData(model)}`;
}

/** What the way back adds to the shape: a mean of what was left of a trend is a line in the data. */
function backInData(model: Forecaster): string {
  const { steps } = model.series, trend = steps.find((s) => s.step === "detrend" && s.degree > 0), season = steps.some((s) => s.step === "seasonallyAdjust");
  if (trend === undefined && !season) return "";
  return ` In the units of the data that stands on ${[...(trend ? ["the trend that was taken out, extended"] : []), ...(season ? ["the season that was taken out, repeated"] : [])].join(" and ")}.`;
}

function fitShape(fit: Fit, onLogs: boolean): string {
  const count = trailingDifferences(fit.series), lags = fit.series.steps.slice(fit.series.steps.length - count).map((s) => (s.step === "difference" ? s.lag : 0));
  const plain = lags.filter((lag) => lag === 1).length, seasonal = lags.filter((lag) => lag > 1), season = seasonal.length > 0 ? Math.max(...seasonal) : 0;
  const drifts = fit.options.mean ?? (typeof fit.options.hold?.mean === "number" || !fit.series.steps.some((s) => s.step === "difference")), regressors = Object.keys(fit.beta).length > 0 ? " The regressors' own course is added to it." : "";
  const line = onLogs ? "a steady rate of growth (a line in the transformed data)" : "a straight line";
  const order = plain + seasonal.length + (drifts && count > 0 ? 1 : 0);
  if (count === 0) {
    const slow = slowReturn(fit);
    if (slow !== null) return `Far ahead the forecast would return to ${drifts ? "the mean of the series" : "zero on the scale of the model"}, but so slowly that it is not seen within as many periods as there are data: till then it ${slow === "season" ? "repeats the last seasons" : "goes on from the last values"}, and the bands keep widening.${regressors}`;
    return drifts
      ? `Far ahead the forecast returns to the mean of the series and stays there, and the bands stop widening: the model has no trend${fit.series.steps.length > 0 ? " on the scale that it works on" : ""}.${regressors}`
      : `Far ahead the forecast returns to zero on the scale of the model, since no mean was asked for.${regressors}`;
  }
  const widening = "the bands keep widening, since each shock stays";
  if (season > 0) {
    const body = order === 1 ? "repeats the last seasons at the level they had" : order === 2 ? `repeats the season along ${line}` : "repeats the season along a line whose slope itself follows the last data";
    return `Far ahead the forecast ${body}; ${widening}.${regressors}`;
  }
  if (order === 1) return `Far ahead the forecast is flat, which is no fault: with one difference and no drift the model knows no direction, so its best guess is a level near the last values; ${widening}.${regressors}`;
  if (order === 2) return `Far ahead the forecast is ${line}${drifts ? ", with the drift that was estimated from the whole sample" : ", whose slope follows the last values"}; ${widening}.${regressors}`;
  return `Far ahead the forecast bends away like a polynomial of degree ${order - 1}: with so many differences it should not be trusted beyond a few periods.${regressors}`;
}

/** Which autoregressive part keeps half of a distance for longer than the series is, if one does: "returns" would then promise too much. */
function slowReturn(fit: Fit): "season" | "level" | null {
  const half = (c: ArrayLike<number>, length: number): number => Math.max(0, ...roots(c).map(({ modulus }) => (modulus > 1 ? length * Math.LN2 / Math.log(modulus) : Infinity)));
  const minus = (c: ArrayLike<number>): number[] => Array.from(c, (x) => -x);
  if (half(minus(fit.seasonalPhi), fit.seasonLength) > fit.series.n) return "season";
  return half(minus(fit.phi), 1) > fit.series.n ? "level" : null;
}

function ruleShape(model: Rule, onLogs: boolean): string {
  const line = onLogs ? "a steady rate of growth" : "a straight line";
  switch (model.rule) {
    case "naive": return "The forecast is flat at the last value, by definition; its bands keep widening.";
    case "seasonalNaive": return "The forecast repeats the last season, by definition; its bands widen season by season.";
    case "drift": return `The forecast is ${line} from the last value, with the mean step of the whole sample.`;
    case "average": return "The forecast is flat at the mean of all values, by definition; its bands do not widen.";
    case "combine": return "The forecast is the mean of its members', and far ahead takes the shape of their mean.";
    case "smoothing": {
      const season = model.season === "none" ? "" : ", and repeats the last season's figures along it";
      if (model.trend === "none") return `Far ahead the forecast is flat at the last level${season}: without a trend the rule knows no direction.`;
      return `Far ahead the forecast ${model.damped ? "bends from the last slope to a flat line" : `is ${model.trend === "multiplicative" ? "a steady rate of growth" : line} with the last slope`}${season}.`;
    }
  }
}
