// The seasonal part of a series, for `seasonallyAdjust`: what is subtracted, and what a forecast gets back.

import { stl } from "../decompose/stl.ts";
import { autoregressiveFill } from "./autoregressiveFill.ts";
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

/** The seasonal part of a series at each of its periods, by STL with a seasonal window of 13 seasons, so that the pattern may
 *  drift slowly. Gaps are bridged by an autoregression while it is estimated. */
export function seasonRemoved(series: Series, length: number): Float64Array {
  const gaps = series.values.some(Number.isNaN);
  const values = gaps ? autoregressiveFill(series.values, series.every) : series.values;
  const { status, note, seasonal } = stl(values, { length, seasonalWindow: 13 });
  if (status !== "ok") throw new RangeError(`seasonallyAdjust(${length}): ${note ?? "the season cannot be estimated"}`);
  return seasonal;
}
