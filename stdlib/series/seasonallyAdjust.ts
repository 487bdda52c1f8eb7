// The seasonal part of a series, for `seasonallyAdjust`: what is subtracted, and what a forecast gets back.

import { defaultSeasonLength } from "./every.ts";
import type { Series } from "./series.ts";

/** Length of the season: as given, or the usual one of the spacing.
 *  @throws RangeError where neither is there, or the series is shorter than two seasons */
export function seasonLengthOf(series: Series, length: number | undefined): number {
  const found = length ?? defaultSeasonLength(series.every);
  if (found === null) throw new RangeError(`seasonallyAdjust: ${series.name || "the series"} has no usual season; give its length in periods, as in seasonallyAdjust(12)`);
  if (!Number.isInteger(found) || found < 2) throw new RangeError(`seasonallyAdjust: the length is ${found}; give a whole number of periods, 2 or more`);
  if (series.n < 2 * found) throw new RangeError(`seasonallyAdjust(${found}): ${series.name || "the series"} has ${series.n} values; two whole seasons (${2 * found}) are needed`);
  return found;
}

/** Seasonal figures by position in the season: means of the differences from a centred moving average of one season, made to
 *  add up to 0 (the classical decomposition, e.g. Kendall and Stuart 1966, chapter 46). */
export function seasonRemoved(series: Series, given: number | undefined): Float64Array {
  const length = seasonLengthOf(series, given);
  const { values, n } = series;
  const sums = new Float64Array(length), counts = new Float64Array(length);
  const half = Math.floor(length / 2);
  for (let t = half; t < n - half; t++) {
    let average = 0;
    for (let j = -half; j <= half; j++) average += values[t + j] * (length % 2 === 0 && Math.abs(j) === half ? 0.5 : 1);
    const difference = values[t] - average / length;
    if (!Number.isNaN(difference)) { sums[t % length] += difference; counts[t % length] += 1; }
  }
  const figure = sums.map((s, j) => s / counts[j]);
  const level = figure.reduce((a, b) => a + b, 0) / length;
  if (Number.isNaN(level)) throw new RangeError(`seasonallyAdjust(${length}): too many missing values to see the season; fill them first, as in fill("linear")`);
  return Float64Array.from({ length: n }, (_, t) => figure[t % length] - level);
}
