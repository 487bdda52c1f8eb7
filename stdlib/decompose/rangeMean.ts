// The range-mean picture: does the spread of a block grow with its level?

import { defaultSeasonLength } from "../series/every.ts";
import type { Series } from "../series/series.ts";
import { isSeries, valuesOf } from "../series/series.ts";

export interface RangeMean {
  readonly mean: Float64Array; readonly range: Float64Array; readonly sd: Float64Array;
  /** First time (or position, from 1) of each block. */
  readonly from: readonly string[];
  readonly length: number;
  /** Slope of log sd on log mean: about 1 asks for a logarithm, 0 for nothing, 0.5 for a square root; NaN where not defined. */
  readonly slope: number;
  readonly sentence: string;
}

/** Mean, range and standard deviation of consecutive whole blocks, an incomplete one dropped at the start.
 *  @param length  periods a block; default a season, else about the square root of n. Source of the picture: Jenkins (1979). */
export function rangeMean(x: Series | ArrayLike<number>, length?: number | null): RangeMean {
  const values = valuesOf(x), n = values.length;
  const block = length ?? (isSeries(x) ? defaultSeasonLength(x.every) : null) ?? Math.max(4, Math.round(Math.sqrt(n)));
  if (!Number.isInteger(block) || block < 2) throw new RangeError(`rangeMean: length is ${block}, expected a whole number of periods from 2 on`);
  const mean: number[] = [], range: number[] = [], sd: number[] = [], from: string[] = [];
  for (let start = n % block; start + block <= n; start += block) {
    const part = values.slice(start, start + block).filter((v) => !Number.isNaN(v));
    if (part.length < 2) continue;
    const centre = part.reduce((a, b) => a + b, 0) / part.length;
    mean.push(centre);
    range.push(part.reduce((a, b) => Math.max(a, b), -Infinity) - part.reduce((a, b) => Math.min(a, b), Infinity));
    sd.push(Math.sqrt(part.reduce((a, v) => a + (v - centre) ** 2, 0) / (part.length - 1)));
    from.push(isSeries(x) ? x.times[start] : String(start + 1));
  }
  const slope = logSlope(mean, sd);
  return { mean: Float64Array.from(mean), range: Float64Array.from(range), sd: Float64Array.from(sd), from, length: block, slope, sentence: sentenceOf(mean.length, slope) };
}

function logSlope(mean: readonly number[], sd: readonly number[]): number {
  if (mean.length < 3 || mean.some((m) => m <= 0) || sd.some((s) => s <= 0)) return NaN;
  const x = mean.map(Math.log), y = sd.map(Math.log), mx = x.reduce((a, b) => a + b, 0) / x.length, my = y.reduce((a, b) => a + b, 0) / y.length;
  const bottom = x.reduce((a, v) => a + (v - mx) ** 2, 0);
  return bottom > 0 ? x.reduce((a, v, i) => a + (v - mx) * (y[i] - my), 0) / bottom : NaN;
}

function sentenceOf(blocks: number, slope: number): string {
  if (blocks < 3) return `The data cannot answer: ${blocks} whole ${blocks === 1 ? "block is" : "blocks are"} too few.`;
  if (Number.isNaN(slope)) return "Some block means or spreads are not above 0, so that no power of the level can be read.";
  const word = slope > 0.75 ? "grows in proportion to the level, which a logarithm evens out" : slope > 0.25 ? "grows with the level, about as a square root evens out" : slope < -0.25 ? "is smaller where the level is higher" : "is about the same at every level";
  return `Over ${blocks} blocks the spread ${word} (slope ${slope.toFixed(2).replace("-", "−")} of log spread on log level).`;
}
