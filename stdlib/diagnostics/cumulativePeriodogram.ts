// The cumulative periodogram and Bartlett's test: white noise has a straight one.

import { fourier } from "../linear/fft.ts";
import type { Subject } from "./subject.ts";
import { observedOf, testedOf } from "./subject.ts";
import type { Test } from "./test.ts";
import { printedP, unavailable } from "./test.ts";

export interface CumulativePeriodogram extends Test {
  /** Cycles a period, j/n for j = 1..m: zero and the Nyquist frequency are left out. */
  readonly frequency?: Float64Array;
  /** Share of the variation at frequencies up to each, ends at 1. */
  readonly cumulative?: Float64Array;
  /** Distance from the straight line j/m that white noise passes with probability 5%. */
  readonly critical95?: number;
  /** The same with probability 1 - level. */
  readonly limit?: number;
}

/** Cumulative periodogram of the values about their mean; `statistic` is the largest distance from the straight line.
 *  Source: Bartlett (1955); 5% limit 1.358 / (sqrt(q) + 0.12 + 0.11 / sqrt(q)), q = m - 1 (Stephens 1974); p from the
 *  Kolmogorov distribution at the same scaling. A model's estimated coefficients make the true size smaller than stated.
 *  @param taper  share at each end under a cosine bell, 0 <= taper <= 0.5
 *  @param level  confidence of `limit`, and of the sentence */
export function cumulativePeriodogram(x: Subject, taper = 0, level = 0.95): CumulativePeriodogram {
  const { values, words } = testedOf(x), name = "cumulative periodogram";
  const n = values.length, m = Math.floor((n - 1) / 2), nullHypothesis = "white noise: no frequency stands out";
  const seen = observedOf(values);
  if (seen.length < n) return unavailable(nullHypothesis, seen.length, `${n - seen.length} of ${n} values are missing, and a periodogram needs a run without gaps`, { name });
  if (m < 3) return unavailable(nullHypothesis, n, `${n} values are too few for a periodogram`, { name });
  if (seen.every((v) => v === seen[0])) return unavailable(nullHypothesis, n, `all ${n} values are the same`, { name });
  const { re, im } = fourier(tapered(values, taper));
  const cumulative = new Float64Array(m), frequency = new Float64Array(m);
  let sum = 0;
  for (let j = 1; j <= m; j++) { sum += re[j] * re[j] + im[j] * im[j]; cumulative[j - 1] = sum; frequency[j - 1] = j / n; }
  let statistic = 0, at = 0;
  for (let j = 0; j < m; j++) {
    cumulative[j] /= sum;
    const distance = Math.abs(cumulative[j] - (j + 1) / m);
    if (distance > statistic) { statistic = distance; at = j; }
  }
  const root = Math.sqrt(m - 1), scale = root + 0.12 + 0.11 / root;
  const p = kolmogorovUpper(statistic * scale), critical95 = 1.358 / scale, limit = level === 0.95 ? critical95 : kolmogorovQuantile(1 - level) / scale, inside = `${Number((100 * level).toPrecision(6))}% limits`;
  const where = `${Number((1 / frequency[at]).toPrecision(3))} periods a cycle`;
  return {
    name, statistic, p, bound: null, n, nullHypothesis, status: "ok", frequency, cumulative, critical95, limit, critical: { "5%": critical95 },
    sentence: p < 1 - level
      ? `The cumulative periodogram of ${words} leaves its ${inside}, furthest near ${where} (${printedP(p)}): some frequencies carry more than white noise would.`
      : `The cumulative periodogram of ${words} stays within its ${inside} (${printedP(p)}): no frequency stands out from white noise.`,
  };
}

/** Values less their mean, under a split cosine bell on a share of each end. */
export function tapered(values: Float64Array, share: number): Float64Array {
  const n = values.length, mean = values.reduce((s, v) => s + v, 0) / n;
  if (!(share >= 0 && share <= 0.5)) throw new RangeError(`taper is ${share}, expected a share of each end from 0 to 0.5`);
  const m = Math.floor(n * share), out = values.map((v) => v - mean);
  for (let t = 0; t < m; t++) {
    const weight = 0.5 * (1 - Math.cos((Math.PI * (2 * t + 1)) / (2 * m)));
    out[t] *= weight;
    out[n - 1 - t] *= weight;
  }
  return out;
}

/** The x that the Kolmogorov distribution passes with probability p, by halving. @example kolmogorovQuantile(0.05) // 1.3581 */
export function kolmogorovQuantile(p: number): number {
  let low = 0.2, high = 10;
  while (high - low > 1e-12) { const middle = (low + high) / 2; if (kolmogorovUpper(middle) > p) low = middle; else high = middle; }
  return (low + high) / 2;
}

/** P(K > x) for the Kolmogorov distribution. */
export function kolmogorovUpper(x: number): number {
  if (x < 0.2) return 1; // 1 to all digits there
  let sum = 0;
  for (let k = 1; k <= 100; k++) {
    const term = Math.exp(-2 * k * k * x * x);
    sum += k % 2 === 1 ? term : -term;
    if (term < 1e-18) break;
  }
  return Math.min(1, Math.max(0, 2 * sum));
}
