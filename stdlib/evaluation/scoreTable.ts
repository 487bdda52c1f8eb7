// Scores of forecasts from many origins, by horizon and over all of them, in the units of the data.

import { naiveScale } from "./accuracy.ts";
import { binomialRange } from "./binomialRange.ts";
import type { Rolled, RollingFrame } from "./rolling.ts";
import { intervalLoss, pinballLoss } from "./scores.ts";

/** How often a band held what happened, and the range that chance allows a band of that level with so many tries. */
export interface Coverage {
  readonly level: number;
  /** Share of the actual values inside the band. */
  readonly share: number;
  readonly n: number;
  /** Exact 95% binomial range for independent tries; forecasts that overlap are not, so that their range is wider. */
  readonly low: number; readonly high: number;
  /** Whether the share lies in that range. */
  readonly within: boolean;
}

/** One model at one horizon, or over "all" horizons. Bias, RMSE and RMSSE judge the mean forecast; the absolute measures
 *  judge the median, which is the point that makes them smallest (Gneiting 2011). */
export interface Score {
  readonly label: string;
  readonly horizon: number | "all";
  /** Forecasts that could be scored. */
  readonly n: number;
  readonly bias: number; readonly mae: number; readonly rmse: number;
  /** Percent. */
  readonly mape: number; readonly smape: number;
  readonly mase: number; readonly rmsse: number;
  /** Mean pinball loss over the limits of all bands. */
  readonly pinball: number;
  readonly crps: number;
  readonly intervalScore: readonly { readonly level: number; readonly score: number }[];
  readonly coverage: readonly Coverage[];
}

/** In-sample errors of the seasonal naive rule before each origin, which MASE and RMSSE are measured in. */
function scalesOf(frame: RollingFrame, length: number): { readonly absolute: Float64Array; readonly rootSquared: Float64Array } {
  const each = frame.at.map((t) => naiveScale(frame.base.values.subarray(0, t + 1), length));
  return { absolute: Float64Array.from(each, (s) => s.absolute), rootSquared: Float64Array.from(each, (s) => s.rootSquared) };
}

/** Score rows of one model: one a horizon, and "all" last.
 *  @param length  season length of MASE and RMSSE */
export function scoreTable(rolled: Rolled, frame: RollingFrame, length: number): Score[] {
  const scales = scalesOf(frame, length), { horizon } = frame;
  const rows = Array.from({ length: horizon }, (_, h) => scoreOver(rolled, frame, scales, [h], h + 1));
  return [...rows, scoreOver(rolled, frame, scales, Array.from({ length: horizon }, (_, h) => h), "all")];
}

function scoreOver(rolled: Rolled, frame: RollingFrame, scales: ReturnType<typeof scalesOf>, steps: readonly number[], horizon: number | "all"): Score {
  const sums = { n: 0, bias: 0, absolute: 0, squared: 0, percent: 0, symmetric: 0, scaled: 0, scaledSquared: 0, pinball: 0, crps: 0 };
  const inside = rolled.bands.map(() => 0), interval = rolled.bands.map(() => 0);
  for (let k = 0; k < rolled.done; k++) {
    for (const h of steps) {
      const at = k * frame.horizon + h, y = frame.base.values[frame.at[k] + h + 1], mean = rolled.mean[at], median = rolled.median[at];
      if (Number.isNaN(y) || Number.isNaN(median)) continue;
      const error = y - mean, miss = Math.abs(y - median);
      sums.n++; sums.bias += error; sums.squared += error * error; sums.absolute += miss;
      sums.percent += y === 0 ? NaN : (100 * miss) / Math.abs(y);
      sums.symmetric += miss === 0 ? 0 : (200 * miss) / (Math.abs(y) + Math.abs(median));
      sums.scaled += miss / scales.absolute[k]; sums.scaledSquared += (error / scales.rootSquared[k]) ** 2;
      sums.crps += rolled.crps[at];
      rolled.bands.forEach(({ level, low, high }, i) => {
        const a = low[at], b = high[at];
        if (y >= a && y <= b) inside[i]++;
        interval[i] += intervalLoss(y, a, b, level);
        sums.pinball += (pinballLoss(y, a, (1 - level) / 2) + pinballLoss(y, b, (1 + level) / 2)) / (2 * rolled.bands.length);
      });
    }
  }
  const { n } = sums, over = (sum: number): number => (n > 0 ? sum / n : NaN);
  return {
    label: rolled.label, horizon, n, bias: over(sums.bias), mae: over(sums.absolute), rmse: Math.sqrt(over(sums.squared)), mape: over(sums.percent), smape: over(sums.symmetric),
    mase: over(sums.scaled), rmsse: Math.sqrt(over(sums.scaledSquared)), pinball: rolled.bands.length > 0 ? over(sums.pinball) : NaN, crps: over(sums.crps),
    intervalScore: rolled.bands.map(({ level }, i) => ({ level, score: over(interval[i]) })),
    coverage: rolled.bands.map(({ level }, i) => coverageOf(level, inside[i], n)),
  };
}

function coverageOf(level: number, hits: number, n: number): Coverage {
  const share = n > 0 ? hits / n : NaN, { low, high } = binomialRange(n, level);
  return { level, share, n, low, high, within: share >= low - 1e-12 && share <= high + 1e-12 };
}
