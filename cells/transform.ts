// Steps applied to a series and remembered, so that forecasts come back in the units of the data.

import { applyStep, cut, stepText, type Series, type Step } from "../stdlib/index.ts";
import { OptionError, type Kind, type RunContext } from "./kind.ts";
import { seriesChart } from "./parts/seriesParts.ts";
import { originalName } from "./parts/scale.ts";
import { stepFrom } from "./parts/stepFunctions.ts";
import { capital, listOf } from "./parts/words.ts";

export interface TransformCell {
  readonly series: Series;
  readonly window?: { readonly from?: string; readonly to?: string };
  readonly steps: readonly unknown[];
}

export const transform: Kind<TransformCell, Series> = {
  name: "transform",
  sentence: "Applies steps to a series and remembers them, so that forecasts come back in the units of the data.",
  options: {
    series: { type: "series", required: true, sentence: "The series to transform.", example: "crossings" },
    window: { type: "window", sentence: "Cuts the series before the steps, so that no step sees later data.", example: "sample" },
    steps: { type: "list", required: true, sentence: "Steps in their order: log, boxCox(lambda), difference(lag), scale(factor, unit), perDay, detrend(degree), seasonallyAdjust(length), fill(how), aggregate(to, how).", example: "[log, difference(1)]" },
  },
  body: "options",
  callable: true,
  example: "series: crossings\nsteps: [log, difference(1)]",
  run: (options, context) => runTransform(options, context),
  show: (series, context) => [
    { part: "text", text: `${capital(series.name || originalName(series))} ${series.steps.length === 0 ? "takes no step: it is the series as it came" : `is ${originalName(series)} after ${listOf(series.steps.map(stepText))}`}.` },
    seriesChart(series, context),
    ...oneWay(series).map((text) => ({ part: "text" as const, tone: "note" as const, text })),
  ],
};

function runTransform(options: TransformCell, context: Pick<RunContext, "name" | "note">): Series {
  const { window } = options;
  let series = options.series;
  try {
    series = cut(series, window);
  } catch (error) {
    if (error instanceof RangeError) throw new OptionError("window", error.message);
    throw error;
  }
  Array.from(options.steps).forEach((item, i) => {
    const before = series;
    series = takeStep(series, item, i);
    if (series.steps.at(-1)?.step === "aggregate") noteDropped(before, series, context);
  });
  return context.name === null ? series : { ...series, name: context.name };
}

function takeStep(series: Series, item: unknown, i: number): Series {
  try {
    const step: Step | null = stepFrom(item);
    if (step !== null) return applyStep(series, step);
  } catch (error) {
    if (error instanceof RangeError) throw new OptionError("steps", `step ${i + 1}, ${error.message}`);
    throw error;
  }
  throw new OptionError("steps", `item ${i + 1} of \`steps\` is no step; use log, boxCox(0.5), difference(1), scale(0.001, "thousands"), perDay, detrend(1), seasonallyAdjust(12), fill("linear") or aggregate("quarter", "sum")`);
}

function noteDropped(before: Series, after: Series, context: Pick<RunContext, "note">): void {
  if (before.every === null || after.every === null) return;
  const first = before.times[0], last = before.times[before.n - 1];
  const dropped = droppedEnds(before, after);
  if (dropped > 0) context.note(`${dropped === 1 ? "1 period" : `${dropped} periods`} of ${before.name || "the series"} (${first} to ${last}) at the ends fill no whole ${after.every} and ${dropped === 1 ? "is" : "are"} dropped`);
}

function droppedEnds(before: Series, after: Series): number {
  const start = cut(before, { from: after.times[0] });
  const inside = cut(start, { to: after.times[after.n - 1] });
  return before.n - inside.n;
}

/** Steps that a forecast does not come back through. */
function oneWay(series: Series): readonly string[] {
  return series.steps.some((s) => s.step === "fill" || s.step === "aggregate") ? [`Forecasts will be of the ${series.steps.some((s) => s.step === "aggregate") ? "aggregated" : "filled"} series: that step is not undone.`] : [];
}
