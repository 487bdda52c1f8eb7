// How strong season and trend are, as shares of variance.

import type { Series } from "../series/series.ts";
import { sampleOf } from "../unitroot/sample.ts";
import { stl } from "./stl.ts";

export interface SeasonalStrength {
  /** max(0, 1 - var(remainder) / var(seasonal + remainder)), 0 to 1. */
  readonly seasonal: number;
  /** max(0, 1 - var(remainder) / var(trend + remainder)), 0 to 1. */
  readonly trend: number;
  readonly sentence: string;
}

/** Strength of season and trend from STL with a seasonal window of 13 (a pattern that may drift slowly).
 *  null where the data cannot answer (gaps, fewer than two seasons, nothing varies).
 *  Source: Wang, Smith & Hyndman (2006). There, above 0.64 a seasonal difference is usual. */
export function seasonalStrength(x: Series | ArrayLike<number>, length: number): SeasonalStrength | null {
  const { values, why } = sampleOf(x, 2 * length);
  if (why !== null) return null;
  const { status, trend, seasonal, remainder } = stl(values, { length, seasonalWindow: 13 });
  if (status !== "ok") return null;
  const noise = variance(remainder);
  const share = (part: Float64Array): number => {
    const whole = variance(part.map((v, t) => v + remainder[t]));
    return whole > 0 ? Math.max(0, 1 - noise / whole) : 0;
  };
  const s = share(seasonal), t = share(trend);
  const word = s > 0.64 ? "a strong season; above 64% a seasonal difference is usual" : s > 0.3 ? "a moderate season" : "a weak one";
  return { seasonal: s, trend: t, sentence: `The season explains ${(100 * s).toFixed(0)}% of what is left after the trend: ${word}.` };
}

function variance(x: Float64Array): number {
  const mean = x.reduce((a, v) => a + v, 0) / x.length;
  return x.reduce((a, v) => a + (v - mean) ** 2, 0) / x.length;
}
