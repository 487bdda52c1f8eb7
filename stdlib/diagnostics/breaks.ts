// Did the level change? Two tests on the running sum of residuals, the second with a date.

import { chiSquareUpper } from "../distributions/chiSquare.ts";
import { logGamma } from "../distributions/special.ts";
import { kolmogorovQuantile, kolmogorovUpper } from "./cumulativePeriodogram.ts";
import type { Subject, Tested } from "./subject.ts";
import { observedOf, testedOf } from "./subject.ts";
import type { Test } from "./test.ts";
import { levelWords, printedP, rejects, unavailable } from "./test.ts";

const steady = "a level that does not change";

export interface Cusum extends Test {
  /** Running sums over sigma sqrt(n), one per value (carried through gaps), starting and ending near 0. */
  readonly path?: Float64Array;
  /** Value that the path passes somewhere with probability 1 - level when nothing changes. */
  readonly limit?: number;
  /** Time or position (from 1) where the path is furthest out. */
  readonly furthest?: string;
}

/** CUSUM of the values about their own mean: the largest distance of the running sum from 0, over sigma sqrt(n).
 *  p from the Kolmogorov distribution (the supremum of a Brownian bridge). Values must be uncorrelated: give it residuals.
 *  @param level  confidence of `limit`, and of the sentence. Source: Ploberger & Kramer (1992). */
export function cusum(x: Subject, level = 0.95): Cusum {
  const tested = testedOf(x), name = "CUSUM";
  const { mean, sigma, n, why } = moments(tested);
  if (why !== null) return unavailable(steady, n, why, { name });
  const { values, words } = tested;
  const path = new Float64Array(values.length);
  let sum = 0, statistic = 0, at = 0;
  for (let t = 0; t < values.length; t++) {
    if (!Number.isNaN(values[t])) sum += values[t] - mean;
    path[t] = sum / (sigma * Math.sqrt(n));
    if (Math.abs(path[t]) > statistic) { statistic = Math.abs(path[t]); at = t; }
  }
  const p = kolmogorovUpper(statistic), furthest = timeOf(tested, at), limits = `${Number((100 * level).toPrecision(6))}% limits`;
  return {
    name, statistic, p, bound: null, n, nullHypothesis: steady, status: "ok", path, limit: level === 0.95 ? 1.358 : kolmogorovQuantile(1 - level), furthest, critical: { "1%": 1.628, "5%": 1.358, "10%": 1.224 },
    sentence: p < 1 - level
      ? `The running sum of ${words} leaves its ${limits}, furthest at ${furthest} (${printedP(p)}): the level changed somewhere.`
      : `The running sum of ${words} stays within its ${limits} (${printedP(p)}): no sign of a changed level.`,
  };
}

export interface LargestBreak extends Test {
  /** First time (or position, from 1) of the new level. */
  readonly at?: string;
  readonly index?: number;
  readonly before?: number; readonly after?: number;
  /** F at each possible first index of the new level; NaN outside the middle part. */
  readonly path?: Float64Array;
}

/** Largest-break test of one change of level at an unknown date: the largest Wald statistic among the dates that leave
 *  `trim` of the values at each end. p by the approximation of Estrella (2003), given up to 0.3.
 *  @param trim   0.05 to 0.4   @param level  confidence at which the sentence reads it   @throws RangeError outside. Source: Andrews (1993). */
export function largestBreak(x: Subject, trim = 0.15, level = 0.95): LargestBreak {
  if (!(trim >= 0.05 && trim <= 0.4)) throw new RangeError(`largestBreak: trim is ${trim}, expected a share from 0.05 to 0.4`);
  const tested = testedOf(x), name = "largest-break Wald";
  const { n, why } = moments(tested);
  if (why !== null) return unavailable(steady, n, why, { name });
  if (n < 20) return unavailable(steady, n, `${n} observed values are too few to look for a break among the middle ${Math.round(100 - 200 * trim)}%`, { name });
  const { values, words } = tested;
  const kept: number[] = [];
  values.forEach((v, t) => { if (!Number.isNaN(v)) kept.push(t); });
  const total = kept.reduce((s, t) => s + values[t], 0), centre = total / n;
  const all = kept.reduce((s, t) => s + (values[t] - centre) ** 2, 0);
  const path = new Float64Array(values.length).fill(NaN);
  let sum = 0, best = -1, at = 0;
  for (let i = 1; i < n; i++) {
    sum += values[kept[i - 1]] - centre;
    if (i < trim * n || i > (1 - trim) * n) continue;
    const between = (sum * sum * n) / (i * (n - i)), wald = (n * between) / Math.max(all - between, 1e-15 * all);
    path[kept[i]] = wald;
    if (wald > best) { best = wald; at = i; }
  }
  const mean = (from: number, to: number): number => kept.slice(from, to).reduce((s, t) => s + values[t], 0) / (to - from);
  const exact = supremumP(best, trim), index = kept[at], when = timeOf(tested, index);
  const { p, bound } = exact > 0.3 ? { p: 0.3, bound: "above" as const } : { p: exact, bound: null };
  const before = mean(0, at), after = mean(at, n);
  return {
    name, statistic: best, p, bound, n, nullHypothesis: steady, status: "ok", at: when, index, before, after, path,
    critical: trim === 0.15 ? { "1%": 12.16, "5%": 8.68, "10%": 7.12 } : null, // Andrews (2003), corrected table, one parameter
    sentence: rejects({ p, bound }, 1 - level) === true
      ? `The largest change of level in ${words} is at ${when} (from ${before.toPrecision(3)} to ${after.toPrecision(3)}), more than chance would make it at the ${levelWords(level)} (${printedP(p, bound)}).`
      : `The largest change of level in ${words}, at ${when}, is no larger than chance would make it (${printedP(p, bound)}).`,
  };
}

/** P(sup of the squared normalised Brownian bridge over [trim, 1 - trim] > c), one parameter; good in the upper tail (Estrella 2003). */
export function supremumP(c: number, trim: number): number {
  if (c < 2) return 1; // the approximation is for the upper tail
  if (c > 1400) return 0; // below the smallest double
  const front = Math.exp(0.5 * Math.log(c) - c / 2 - 0.5 * Math.log(2) - logGamma(0.5));
  return Math.min(1, Math.max(front * ((1 - 1 / c) * 2 * Math.log((1 - trim) / trim) + 2 / c), chiSquareUpper(c, 1)));
}

function moments({ values }: Tested): { mean: number; sigma: number; n: number; why: string | null } {
  const seen = observedOf(values), n = seen.length;
  const mean = seen.reduce((s, v) => s + v, 0) / n, sigma = Math.sqrt(seen.reduce((s, v) => s + (v - mean) ** 2, 0) / n);
  const why = n < 8 ? `${n} observed values are too few` : seen.every((v) => v === seen[0]) ? `all ${n} values are the same` : null;
  return { mean, sigma, n, why };
}

function timeOf({ series }: Tested, index: number): string {
  return series?.times[index] ?? String(index + 1);
}
