// What can make a forecast, however it was named: a fit, a rule, or a ranked row that holds one.

import type { Forecaster } from "../../stdlib/index.ts";
import { OptionError } from "../kind.ts";

/** A fit or rule; a ranked row of a comparison stands for the model in it. */
export function needForecaster(value: unknown, option = "model"): Forecaster {
  if (typeof value === "object" && value !== null) {
    if ("rule" in value || ("sigma2" in value && "residuals" in value)) return value as Forecaster;
    for (const key of ["model", "fit"] as const) {
      const inner = (value as Record<string, unknown>)[key];
      if (typeof inner === "object" && inner !== null) return needForecaster(inner, option);
    }
    if ("best" in value) throw new OptionError(option, `${option} is a whole comparison; name one of its rows, such as .best`);
    if ("values" in value && "times" in value) throw new OptionError(option, `${option} is a series; fit a model to it first, or use a rule such as rule.naive(…)`);
  }
  throw new OptionError(option, `${option} needs a fit, a rule or a ranked row of a comparison; found ${value === null || value === undefined ? "nothing" : typeof value === "object" ? "an object of another kind" : String(value)}`);
}
