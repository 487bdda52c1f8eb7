// What scale a series stands on after its steps, in words and as TeX.

import type { AppliedStep, Series } from "../../stdlib/index.ts";
import { figure, listOf } from "./words.ts";

/** "crossings", "the log of crossings", "the log of crossings, differenced at lags 1 and 12". */
export function scaleText(series: Series): string {
  const lags = differenceLags(series.steps);
  let text = originalName(series);
  for (const step of series.steps) {
    if (step.step !== "difference") text = stepText(text, step);
  }
  if (lags.length === 0) return text;
  return `${text}, differenced at lag${lags.length > 1 ? "s" : ""} ${listOf(lags)}`;
}

function stepText(inner: string, step: AppliedStep): string {
  switch (step.step) {
    case "log": return `the log of ${inner}`;
    case "boxCox": return `${inner} (Box-Cox, λ = ${figure(step.lambda)})`;
    case "scale": return `${inner} times ${figure(step.factor)}`;
    case "perDay": return `${inner} a day`;
    case "detrend": return `${inner} less its trend`;
    case "seasonallyAdjust": return `${inner}, seasonally adjusted`;
    case "fill": return `${inner} with gaps filled`;
    case "aggregate": return `${inner} by ${step.how} over ${step.to}`;
    case "difference": return `${inner}, differenced at lag ${step.lag}`;
  }
}

/** The name of the series as it was loaded, before any step. */
export function originalName(series: Series): string {
  return (series.steps[0]?.before.name ?? series.name) || "the series";
}

/** Lags of the difference steps, in their order. */
export function differenceLags(steps: readonly AppliedStep[]): readonly number[] {
  return steps.flatMap(step => step.step === "difference" ? [step.lag] : []);
}

/** Axis title: what is drawn, with its unit where the scale still has one. */
export function axisTitle(series: Series): string {
  const text = scaleText(series);
  const keepsUnit = series.steps.every(step => step.step !== "log" && step.step !== "boxCox");
  return keepsUnit && series.unit ? `${text} (${series.unit})` : text;
}
