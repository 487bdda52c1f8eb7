// Seasonal-trend decomposition by loess.

import { defaultSeasonLength } from "../series/every.ts";
import type { Series } from "../series/series.ts";
import { isSeries, valuesOf } from "../series/series.ts";
import { loess, loessAt } from "./loess.ts";

export interface StlOptions {
  /** Periods a season; default from the spacing. */
  readonly length?: number | null;
  /** Seasonal loess window, odd, in seasons (7 or more is usual); "periodic" for a pattern that stays. */
  readonly seasonalWindow?: number | "periodic";
  /** Trend and low-pass loess windows, odd; defaults: next odd number above 1.5 length / (1 - 1.5 / seasonalWindow), and above length - 1. */
  readonly trendWindow?: number | null; readonly lowPassWindow?: number | null;
  /** Weigh down outlying values over 15 outer rounds. */
  readonly robust?: boolean;
  readonly seasonalDegree?: 0 | 1; readonly trendDegree?: 0 | 1; readonly lowPassDegree?: 0 | 1;
  /** Evaluate loess every so many points and draw straight lines between; default a tenth of each window. */
  readonly jump?: number | null;
  readonly inner?: number; readonly outer?: number;
}

export interface Decomposition {
  readonly status: "ok" | "unavailable";
  readonly note?: string;
  readonly trend: Float64Array; readonly seasonal: Float64Array; readonly remainder: Float64Array;
  /** Robustness weights of the last round, 1 where not robust. */
  readonly weights: Float64Array;
  readonly length: number;
  readonly windows: { readonly seasonal: number; readonly trend: number; readonly lowPass: number };
}

/** STL: value = trend + seasonal + remainder.
 *  @throws RangeError where the length is missing or below 2, or a window is not a positive odd number
 *  Source: Cleveland, Cleveland, McRae & Terpenning (1990). */
export function stl(x: Series | ArrayLike<number>, options: StlOptions = {}): Decomposition {
  const values = valuesOf(x), n = values.length;
  const length = options.length ?? (isSeries(x) ? defaultSeasonLength(x.every) : null);
  if (length === null) throw new RangeError("stl: the spacing of the series names no season: give its length in periods");
  if (!Number.isInteger(length) || length < 2) throw new RangeError(`stl: length is ${length}, expected a whole number of periods from 2 on`);
  const { seasonalWindow = 7, robust = false } = options;
  const periodic = seasonalWindow === "periodic", ns = periodic ? 10 * n + 1 : seasonalWindow;
  const nt = options.trendWindow ?? nextOdd(Math.ceil((1.5 * length) / (1 - 1.5 / ns))), nl = options.lowPassWindow ?? nextOdd(length);
  for (const [name, w] of [["seasonalWindow", ns], ["trendWindow", nt], ["lowPassWindow", nl]] as const) {
    if (!Number.isInteger(w) || w < 3 || w % 2 === 0) throw new RangeError(`stl: ${name} is ${w}, expected an odd number from 3 on${name === "seasonalWindow" ? ' or "periodic"' : ""}`);
  }
  const windows = { seasonal: ns, trend: nt, lowPass: nl };
  const fail = (note: string): Decomposition => ({ status: "unavailable", note, trend: new Float64Array(0), seasonal: new Float64Array(0), remainder: new Float64Array(0), weights: new Float64Array(0), length, windows });
  if (n < 2 * length) return fail(`${n} values are fewer than two seasons of ${length}`);
  if (values.some(Number.isNaN)) return fail("the series has gaps: fill them first");
  const jump = (w: number): number => options.jump ?? Math.ceil(w / 10);
  const plan: Plan = {
    length, ns, nt, nl, js: jump(ns), jt: jump(nt), jl: jump(nl),
    ds: periodic ? 0 : options.seasonalDegree ?? 0, dt: options.trendDegree ?? 1, dl: options.lowPassDegree ?? 1, inner: options.inner ?? (robust ? 1 : 2),
  };
  const outer = options.outer ?? (robust ? 15 : 0);
  const trend = new Float64Array(n), seasonal = new Float64Array(n);
  let weights: Float64Array | null = null;
  for (let round = 0; ; round++) {
    innerLoop(values, trend, seasonal, weights, plan);
    if (round >= outer) break;
    weights = robustness(values, trend, seasonal);
  }
  if (periodic) averageByPosition(seasonal, length);
  const remainder = values.map((v, t) => v - trend[t] - seasonal[t]);
  return { status: "ok", trend, seasonal, remainder, weights: weights ?? new Float64Array(n).fill(1), length, windows };
}

interface Plan { length: number; ns: number; nt: number; nl: number; js: number; jt: number; jl: number; ds: 0 | 1; dt: 0 | 1; dl: 0 | 1; inner: number }

/** Steps 1 to 6 of the paper's inner loop, fills `trend` and `seasonal`. */
function innerLoop(values: Float64Array, trend: Float64Array, seasonal: Float64Array, weights: Float64Array | null, plan: Plan): void {
  const { length, ns, nt, nl, js, jt, jl, ds, dt, dl } = plan, n = values.length;
  for (let i = 0; i < plan.inner; i++) {
    // 1, 2: detrended values smoothed by position in the season, one season further at each end.
    const cycle = new Float64Array(n + 2 * length);
    for (let position = 0; position < length; position++) {
      const count = Math.ceil((n - position) / length);
      const sub = new Float64Array(count), w = weights === null ? null : new Float64Array(count);
      for (let k = 0; k < count; k++) {
        const t = position + k * length;
        sub[k] = values[t] - trend[t];
        if (w !== null && weights !== null) w[k] = weights[t];
      }
      const smooth = loess(sub, ns, ds, js, w);
      const before = loessAt(sub, ns, ds, 0, 1, Math.min(ns, count), w), after = loessAt(sub, ns, ds, count + 1, Math.max(1, count - ns + 1), count, w);
      cycle[position] = before ?? smooth[0];
      for (let k = 0; k < count; k++) cycle[position + (k + 1) * length] = smooth[k];
      cycle[position + (count + 1) * length] = after ?? smooth[count - 1];
    }
    // 3: low-pass filter of it; 4: seasonal = cycle less that.
    const low = loess(average(average(average(cycle, length), length), 3), nl, dl, jl, null);
    for (let t = 0; t < n; t++) seasonal[t] = cycle[t + length] - low[t];
    // 5, 6: deseasonalised values smoothed.
    trend.set(loess(values.map((v, t) => v - seasonal[t]), nt, dt, jt, weights));
  }
}

function average(x: Float64Array, window: number): Float64Array {
  const out = new Float64Array(x.length - window + 1);
  let sum = 0;
  for (let t = 0; t < window; t++) sum += x[t];
  out[0] = sum / window;
  for (let t = 1; t < out.length; t++) { sum += x[t + window - 1] - x[t - 1]; out[t] = sum / window; }
  return out;
}

/** Bisquare weights of the remainder, six medians wide; the median of an even number is the mean of the middle two. */
function robustness(values: Float64Array, trend: Float64Array, seasonal: Float64Array): Float64Array {
  const r = values.map((v, t) => Math.abs(v - trend[t] - seasonal[t]));
  const sorted = Float64Array.from(r).sort(), n = r.length;
  const width = 3 * (sorted[Math.floor((n - 1) / 2)] + sorted[Math.floor(n / 2)]);
  return r.map((v) => (v <= 0.001 * width ? 1 : v <= 0.999 * width ? (1 - (v / width) ** 2) ** 2 : 0));
}

function averageByPosition(seasonal: Float64Array, length: number): void {
  for (let position = 0; position < length; position++) {
    let sum = 0, count = 0;
    for (let t = position; t < seasonal.length; t += length) { sum += seasonal[t]; count++; }
    for (let t = position; t < seasonal.length; t += length) seasonal[t] = sum / count;
  }
}

function nextOdd(x: number): number {
  const whole = Math.round(x);
  return whole % 2 === 0 ? whole + 1 : whole;
}
