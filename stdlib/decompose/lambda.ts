// The Box-Cox parameter: which power makes the spread independent of the level, or the residuals most nearly normal.

import { chiSquareQuantile } from "../distributions/chiSquare.ts";
import { defaultSeasonLength } from "../series/every.ts";
import type { Series } from "../series/series.ts";
import { isSeries, valuesOf } from "../series/series.ts";

export interface LambdaOptions {
  /** Periods of a block (guerrero) and of the seasonal dummies (likelihood); default from the spacing, else 2. */
  readonly length?: number | null;
  /** Range searched. */
  readonly from?: number; readonly to?: number;
  /** What the likelihood takes off first: the mean, a straight trend, or a trend and the season. */
  readonly regression?: "mean" | "trend" | "season";
  readonly level?: number;
}

/** The profile of a parameter, its best value, an interval where the method gives one, and a sentence. */
export interface LambdaProfile {
  readonly status: "ok" | "unavailable";
  readonly note?: string;
  readonly lambda: number;
  /** Interval by the likelihood ratio; NaN for Guerrero's method, which gives none, or where the range ends first. */
  readonly low: number; readonly high: number;
  readonly level: number;
  /** Coefficient of variation (guerrero) or profile log likelihood, at `grid`. */
  readonly grid: Float64Array; readonly profile: Float64Array;
  readonly how: "guerrero" | "likelihood";
  readonly sentence: string;
}

/** The Box-Cox lambda by a method; NaN where the data cannot answer (`lambdaProfile` says why).
 *  @throws RangeError for an unknown method or range */
export function estimateLambda(x: Series | ArrayLike<number>, how: "guerrero" | "likelihood" = "guerrero", options: LambdaOptions = {}): number {
  return lambdaProfile(x, how, options).lambda;
}

/** The same with its profile and, by likelihood, its interval.
 *  "guerrero": least coefficient of variation of sd_i / mean_i^(1 - lambda) over consecutive whole blocks, an incomplete one
 *  dropped at the start (Guerrero 1993). "likelihood": -n/2 log(RSS/n) + (lambda - 1) sum log y (Box & Cox 1964). */
export function lambdaProfile(x: Series | ArrayLike<number>, how: "guerrero" | "likelihood" = "guerrero", options: LambdaOptions = {}): LambdaProfile {
  if (how !== "guerrero" && how !== "likelihood") throw new RangeError(`estimateLambda: "${String(how)}" is not a method: use "guerrero" or "likelihood"`);
  const { from = -1, to = 2, level = 0.95, regression = "mean" } = options;
  if (!(from < to)) throw new RangeError(`estimateLambda: from is ${from} and to ${to}, expected a rising range`);
  const values = valuesOf(x), season = isSeries(x) ? defaultSeasonLength(x.every) : null;
  const length = options.length ?? season ?? 2;
  const grid = Float64Array.from({ length: 61 }, (_, i) => from + ((to - from) * i) / 60);
  const why = whyNot(values, how, length);
  if (why !== null) {
    const none = new Float64Array(0);
    return { status: "unavailable", note: why, lambda: NaN, low: NaN, high: NaN, level, grid: none, profile: none, how, sentence: `The data cannot answer: ${why}.` };
  }
  // Guerrero's criterion is to be least: its sign is turned so that both are maximised.
  const objective = how === "guerrero" ? guerrero(values, length) : likelihood(values, regression, length);
  const score = how === "guerrero" ? (lambda: number) => -objective(lambda) : objective;
  const lambda = maximum(score, grid);
  const profile = grid.map(objective);
  const [low, high] = how === "likelihood" ? interval(score, lambda, chiSquareQuantile(level, 1) / 2) : [NaN, NaN];
  return { status: "ok", lambda, low, high, level, grid, profile, how, sentence: sentenceOf(how, lambda, low, high, level, from, to) };
}

/** Coefficient of variation of the blocks' scaled deviations, as a function of lambda. */
export function guerrero(values: Float64Array, length: number): (lambda: number) => number {
  const blocks = Math.floor(values.length / length), skip = values.length - blocks * length;
  const means = new Float64Array(blocks), sds = new Float64Array(blocks);
  for (let b = 0; b < blocks; b++) {
    const block = values.slice(skip + b * length, skip + (b + 1) * length).filter((v) => !Number.isNaN(v));
    [means[b], sds[b]] = moments(block);
  }
  const usable = [...means.keys()].filter((b) => Number.isFinite(sds[b]));
  return (lambda) => {
    const [mean, sd] = moments(Float64Array.from(usable, (b) => sds[b] / means[b] ** (1 - lambda)));
    return sd / mean;
  };
}

/** Profile log likelihood less its constant, as a function of lambda. Cost O(n) a value: the residual sum of squares is that
 *  within positions of the season (one position without a season), less what the slope explains there. */
export function likelihood(values: Float64Array, regression: "mean" | "trend" | "season", length: number): (lambda: number) => number {
  const kept = [...values.keys()].filter((t) => !Number.isNaN(values[t])), n = kept.length;
  const positions = regression === "season" ? length : 1, at = Int32Array.from(kept, (t) => t % positions);
  const counts = new Float64Array(positions), means = new Float64Array(positions);
  for (const p of at) counts[p]++;
  const slope = Float64Array.from(kept), z = new Float64Array(n);
  if (regression === "mean") slope.fill(0);
  centreWithin(slope, at, counts, means);
  const reach = slope.reduce((s, v) => s + v * v, 0);
  const logs = Float64Array.from(kept, (t) => Math.log(values[t])), sumLogs = logs.reduce((a, b) => a + b, 0);
  return (lambda) => {
    for (let i = 0; i < n; i++) z[i] = Math.abs(lambda) < 1e-12 ? logs[i] : Math.expm1(lambda * logs[i]) / lambda;
    centreWithin(z, at, counts, means);
    let along = 0, rss = 0;
    for (let i = 0; i < n; i++) along += slope[i] * z[i];
    const b = reach > 0 ? along / reach : 0;
    for (let i = 0; i < n; i++) rss += (z[i] - b * slope[i]) ** 2;
    return (-n / 2) * Math.log(rss / n) + (lambda - 1) * sumLogs;
  };
}

/** Takes off, in place, the mean of each position. */
function centreWithin(z: Float64Array, at: Int32Array, counts: Float64Array, means: Float64Array): void {
  means.fill(0);
  for (let i = 0; i < z.length; i++) means[at[i]] += z[i] / counts[at[i]];
  for (let i = 0; i < z.length; i++) z[i] -= means[at[i]];
}

function whyNot(values: Float64Array, how: string, length: number): string | null {
  const seen = values.filter((v) => !Number.isNaN(v));
  if (seen.length < 8) return `${seen.length} observed values are too few`;
  const least = Math.min(...seen.slice(0, 1), seen.reduce((a, b) => Math.min(a, b), Infinity));
  if (least <= 0) return `a power or a logarithm needs values above 0, and the least is ${least}`;
  if (seen.every((v) => v === seen[0])) return "all values are the same";
  if (how === "guerrero" && (!Number.isInteger(length) || length < 2 || values.length < 3 * length)) return `Guerrero's method compares blocks of ${length} values and needs three of them`;
  return null;
}

function moments(x: Float64Array): [number, number] {
  const mean = x.reduce((a, b) => a + b, 0) / x.length;
  return [mean, Math.sqrt(x.reduce((a, v) => a + (v - mean) ** 2, 0) / (x.length - 1))];
}

/** The best grid point, then golden sections around it. */
function maximum(score: (lambda: number) => number, grid: Float64Array): number {
  const tried = grid.map(score);
  let best = 0;
  tried.forEach((value, i) => { if (value > tried[best]) best = i; });
  const ratio = (Math.sqrt(5) - 1) / 2;
  let a = grid[Math.max(0, best - 1)], b = grid[Math.min(grid.length - 1, best + 1)];
  let c = b - ratio * (b - a), d = a + ratio * (b - a), fc = score(c), fd = score(d);
  while (b - a > 1e-8) {
    if (fc > fd) { b = d; d = c; fd = fc; c = b - ratio * (b - a); fc = score(c); } else { a = c; c = d; fc = fd; d = a + ratio * (b - a); fd = score(d); }
  }
  return (a + b) / 2;
}

/** Where the log likelihood has fallen by `drop` on each side; NaN where it has not by 5 away. */
function interval(score: (lambda: number) => number, at: number, drop: number): [number, number] {
  const target = score(at) - drop;
  const side = (direction: number): number => {
    let inside = at, outside = NaN;
    for (let step = 0.05; step <= 5.001; step *= 1.5) if (score(at + direction * step) < target) { outside = at + direction * step; break; } else inside = at + direction * step;
    if (Number.isNaN(outside)) return NaN;
    while (Math.abs(outside - inside) > 1e-9) { const middle = (inside + outside) / 2; if (score(middle) < target) outside = middle; else inside = middle; }
    return (inside + outside) / 2;
  };
  return [side(-1), side(1)];
}

/** Two decimals, true minus sign. */
function two(value: number): string {
  return value.toFixed(2).replace("-", "−");
}

function sentenceOf(how: string, lambda: number, low: number, high: number, level: number, from: number, to: number): string {
  const edge = Math.min(lambda - from, to - lambda) < 1e-3 ? " It lies at the edge of the range that was searched." : "";
  if (how === "guerrero") {
    const near = Math.abs(lambda) < 0.25 ? "near 0, a logarithm" : Math.abs(lambda - 1) < 0.25 ? "near 1, no transformation" : Math.abs(lambda - 0.5) < 0.25 ? "near 0.5, a square root" : Math.abs(lambda + 1) < 0.25 ? "near −1, a reciprocal" : "away from the usual powers";
    return `The spread depends least on the level at lambda ${two(lambda)}, ${near}; the method gives no interval.${edge}`;
  }
  const share = `${Number((100 * level).toPrecision(4))}%`;
  const ends = Number.isNaN(low) || Number.isNaN(high) ? `; the likelihood is too flat for a ${share} interval` : ` (${share} interval ${two(low)} to ${two(high)})`;
  const holds = Number.isNaN(low) || Number.isNaN(high) ? null : [[0, "a logarithm (0)"], [0.5, "a square root (0.5)"], [1, "no transformation (1)"]].filter(([v]) => Number(v) >= low && Number(v) <= high).map(([, w]) => w);
  return `By likelihood lambda is ${two(lambda)}${ends}${holds === null ? "" : holds.length === 0 ? "; none of logarithm, square root and no transformation lies inside" : `; ${holds.join(", ").replace(/, ([^,]*)$/, " and $1")} ${holds.length === 1 ? "lies" : "lie"} inside`}. The interval supposes independent residuals.${edge}`;
}
