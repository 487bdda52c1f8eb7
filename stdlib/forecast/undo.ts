// The way back from the modelled scale to the units of the data: each recorded step turned round, last one first.

import { daysIn, timeAt, timesFrom } from "../series/calendar.ts";
import { polynomialTrend } from "../series/detrend.ts";
import type { Series } from "../series/series.ts";
import { original, stepText, type AppliedStep } from "../series/steps.ts";
import type { Note } from "../arma/model.ts";

/** One step turned round, for the coming periods (index 0 is one step ahead). */
export type UndoStep =
  | { readonly undo: "affine"; /** x becomes add + times x. */ readonly add: Float64Array; readonly times: Float64Array }
  | { readonly undo: "exp" }
  | { readonly undo: "boxCox"; readonly lambda: number }
  /** x becomes x plus the value `lag` periods before; `tail` holds the last `lag` observed ones. */
  | { readonly undo: "difference"; readonly lag: number; readonly tail: Float64Array };

export interface Undo {
  readonly steps: readonly UndoStep[];
  /** The series on the scale that the way back ends at: the data, or the aggregated data. */
  readonly base: Series;
  /** The coming periods. */
  readonly times: readonly string[];
  readonly notes: readonly Note[];
}

/** @param series   the modelled series with its steps
 *  @param kept     how many of its steps are still to be undone (the model has undone the later ones itself)
 *  @param horizon  periods ahead
 *  @throws RangeError where a difference cannot be undone because the last values are missing */
export function undoOf(series: Series, kept: number, horizon: number): Undo {
  const times = timesFrom(timeAt(series.start, series.every, series.n), series.every, horizon), notes: Note[] = [], steps: UndoStep[] = [];
  for (let i = kept - 1; i >= 0; i--) {
    const applied = series.steps[i], after = i + 1 < series.steps.length ? series.steps[i + 1].before : series;
    if (applied.step === "aggregate") {
      notes.push(...aggregateNotes(applied, series.steps.slice(0, i)));
      return { steps, base: after, times, notes };
    }
    if (applied.step === "fill") notes.push({ code: "filled", tone: "note", text: `Gaps were filled (${stepText(applied)}) before the model saw the series: the forecasts are of the filled series, and the filled values count as if they had been observed.` });
    if (applied.step === "seasonallyAdjust") notes.push({ code: "season-repeated", tone: "note", text: "The season that was taken out is put back by repeating its last year (the last season's figures); how sure those figures are is not in the bands." });
    if (applied.step === "detrend") notes.push({ code: "trend-extended", tone: "note", text: `The trend that was taken out (degree ${applied.degree}) is extended beyond the sample as it stands; how sure it is is not in the bands.` });
    const undone = turned(applied, after, times, horizon);
    if (undone) steps.push(undone);
  }
  return { steps, base: original(series), times, notes };
}

function aggregateNotes(applied: AppliedStep & { readonly step: "aggregate" }, earlier: readonly AppliedStep[]): Note[] {
  const notes: Note[] = [{ code: "aggregated", tone: "note", text: `The data were aggregated (${stepText(applied)}): the forecasts are of the aggregated series, since a total does not say how it spreads over its parts.` }];
  const left = earlier.filter((s) => s.step !== "fill");
  if (left.length > 0) notes.push({ code: "not-undone", tone: "caution", text: `The steps before the aggregation (${left.map((s) => stepText(s)).join(", ")}) cannot be undone: the forecasts stay on the scale they led to. Aggregate first to have them in the units of the data.` });
  return notes;
}

function turned(applied: AppliedStep, after: Series, times: readonly string[], horizon: number): UndoStep | null {
  const affine = (add: (h: number) => number, by: (h: number) => number): UndoStep =>
    ({ undo: "affine", add: Float64Array.from({ length: horizon }, (_, h) => add(h)), times: Float64Array.from({ length: horizon }, (_, h) => by(h)) });
  const { before } = applied, n = before.n;
  switch (applied.step) {
    case "log": return { undo: "exp" };
    case "boxCox": return applied.lambda === 0 ? { undo: "exp" } : { undo: "boxCox", lambda: applied.lambda };
    case "scale": return affine(() => 0, () => 1 / applied.factor);
    case "perDay": return affine(() => 0, (h) => daysIn(times[h], before.every ?? "P1D"));
    case "detrend": {
      const trend = polynomialTrend(before.values, applied.degree);
      return affine((h) => trend(n + h), () => 1);
    }
    case "seasonallyAdjust": {
      const season = applied.removed ?? before.values.map((v, t) => v - after.values[t]), length = seasonLength(applied, season);
      return affine((h) => season[n - length + (h % length)], () => 1);
    }
    case "difference": return { undo: "difference", lag: applied.lag, tail: lastOf(before, applied.lag) };
    case "fill": return null;
    case "aggregate": return null;
  }
}

/** As given, or the shortest period with which what was removed repeats itself. */
function seasonLength(applied: { readonly length?: number }, season: Float64Array): number {
  if (applied.length !== undefined) return applied.length;
  const size = Math.max(...season.map(Math.abs));
  for (let length = 1; length < season.length; length++) {
    let same = true;
    for (let t = length; t < season.length && same; t++) same = Math.abs(season[t] - season[t - length]) <= 1e-12 * size;
    if (same) return length;
  }
  return season.length;
}

function lastOf(before: Series, lag: number): Float64Array {
  const tail = before.values.slice(before.n - lag), gap = tail.findIndex((v) => Number.isNaN(v));
  if (gap >= 0) throw new RangeError(`difference(${lag}) cannot be undone: ${before.name || "the series"} has no value at ${before.times[before.n - lag + gap]}, among its last ${lag}. Fill it first, as in fill("model")`);
  return tail;
}

/** Whether a step keeps normal errors normal. */
export const isLinear = (step: UndoStep): boolean => step.undo === "affine" || step.undo === "difference";

/** Undoes steps on a path (a path of the modelled scale in, one in the end's units out). */
function undoPath(steps: readonly UndoStep[], path: Float64Array): Float64Array {
  let x = path;
  for (const step of steps) {
    if (step.undo === "difference") x = summed(x, step.lag, step.tail);
    else {
      const after = new Float64Array(x.length);
      for (let h = 0; h < after.length; h++) after[h] = undoAt(step, h, x[h]);
      x = after;
    }
  }
  return x;
}

/** Undoes steps that act on each period by itself. */
export function undoValue(steps: readonly UndoStep[], h: number, z: number): number {
  let x = z;
  for (const step of steps) x = undoAt(step, h, x);
  return x;
}

/** One step undone on the value of one period. */
export function undoAt(step: UndoStep, h: number, x: number): number {
  switch (step.undo) {
    case "affine": return step.add[h] + step.times[h] * x;
    case "exp": return Math.exp(x);
    case "boxCox": {
      // Outside the range of the transformation lies its end: 0 for lambda above 0, no finite value below.
      const base = 1 + step.lambda * x;
      if (base <= 0) return step.lambda > 0 ? 0 : Infinity;
      return Math.exp(Math.log1p(step.lambda * x) / step.lambda);
    }
    case "difference": throw new RangeError("a difference is undone on whole paths");
  }
}

/** The modelled scale's value that a value in the end's units comes from; -Infinity or Infinity beyond the reach of the scale. */
export function redoValue(steps: readonly UndoStep[], h: number, value: number): number {
  let x = value;
  for (let i = steps.length - 1; i >= 0; i--) {
    const step = steps[i];
    if (step.undo === "affine") x = (x - step.add[h]) / step.times[h];
    else if (step.undo === "exp") x = x > 0 ? Math.log(x) : -Infinity;
    else if (step.undo === "boxCox") x = x > 0 ? Math.expm1(step.lambda * Math.log(x)) / step.lambda : step.lambda > 0 ? -1 / step.lambda : -Infinity;
    else throw new RangeError("a difference is redone on whole paths");
  }
  return x;
}

/** y(h) = x(h) + y(h - lag), with the observed tail before the first. */
function summed(x: Float64Array, lag: number, tail: Float64Array): Float64Array {
  const y = new Float64Array(x.length);
  for (let h = 0; h < x.length; h++) y[h] = x[h] + (h < lag ? tail[h] : y[h - lag]);
  return y;
}

/** A linear step on a mean. */
export const undoMean = (step: UndoStep, mean: Float64Array): Float64Array => undoPath([step], mean);

/** A linear step on a covariance matrix, flat by rows. */
export function undoCovariance(step: UndoStep, c: Float64Array, size: number): Float64Array {
  const out = Float64Array.from(c);
  if (step.undo === "affine") for (let i = 0; i < size; i++) for (let j = 0; j < size; j++) out[i * size + j] *= step.times[i] * step.times[j];
  if (step.undo === "difference") {
    const { lag } = step;
    for (let i = lag; i < size; i++) for (let j = 0; j < size; j++) out[i * size + j] += out[(i - lag) * size + j];
    for (let i = 0; i < size; i++) for (let j = lag; j < size; j++) out[i * size + j] += out[i * size + j - lag];
  }
  return out;
}
