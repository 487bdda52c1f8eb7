// The Canova-Hansen test: does the seasonal pattern stay, or does it wander?

import type { Test } from "../diagnostics/test.ts";
import { levelWords, printedP, unavailable } from "../diagnostics/test.ts";
import { choleskyInto, forwardSolveInto } from "../linear/cholesky.ts";
import { leastSquares } from "../linear/leastSquares.ts";
import { defaultSeasonLength } from "../series/every.ts";
import type { Series } from "../series/series.ts";
import { isSeries } from "../series/series.ts";
import { sampleOf } from "./sample.ts";
import { lagRuleOf } from "./longRunVariance.ts";
import { vonMisesQuantile, vonMisesUpper } from "./vonMises.ts";

export interface CanovaHansenOptions {
  /** Periods a season; default from the spacing. */
  readonly length?: number | null;
  /** Lags of the long-run covariance; default floor(4 (n/100)^(1/4)): with a season of 12 and 144 values, 13 lags leave no power. */
  readonly bandwidth?: number | null;
  /** Take a first difference before, so that a unit root of the level is not mistaken for a wandering season; default true. */
  readonly difference?: boolean;
  /** Confidence at which the sentence reads the test. */
  readonly level?: number;
  /** Whether critical values are wanted: they take some milliseconds, which a simulation does not need. */
  readonly critical?: boolean;
}

/** Canova-Hansen test that all seasonal frequencies together are stable, against unit roots at some of them.
 *  Small p: the pattern wanders, which a seasonal difference takes care of. The values are regressed on a constant and the
 *  seasonal harmonics; the statistic accumulates the scores, weighed by their Bartlett long-run covariance, and has the
 *  generalised von Mises distribution with length - 1 degrees of freedom, computed exactly (not from a table).
 *  @throws RangeError for a length below 2 or a bandwidth out of range. Source: Canova & Hansen (1995). */
export function canovaHansen(x: Series | ArrayLike<number>, options: CanovaHansenOptions = {}): Test {
  const nullHypothesis = "a stable seasonal pattern", name = "Canova-Hansen L";
  const length = options.length ?? (isSeries(x) ? defaultSeasonLength(x.every) : null);
  if (length === null) return unavailable(nullHypothesis, 0, "the spacing of the series names no season, and none was given", { name });
  if (!Number.isInteger(length) || length < 2) throw new RangeError(`canovaHansen: length is ${length}, expected a whole number of periods from 2 on`);
  const { values: levels, note, why } = sampleOf(x, 3 * length + 2);
  if (why !== null) return unavailable(nullHypothesis, levels.length, why, { name });
  const { difference = true, level = 0.95, critical = true } = options;
  const values = difference ? levels.slice(1).map((v, t) => v - levels[t]) : levels;
  const n = values.length, df = length - 1;
  const bandwidth = options.bandwidth ?? Math.floor(4 * (n / 100) ** 0.25);
  if (!Number.isInteger(bandwidth) || bandwidth < 0 || bandwidth >= n) throw new RangeError(`canovaHansen: bandwidth is ${bandwidth}, expected a whole number from 0 to ${n - 1}`);
  const scores = seasonalScores(values, length);
  const statistic = scores === null ? NaN : accumulated(scores, n, df, bandwidth);
  if (Number.isNaN(statistic)) return unavailable(nullHypothesis, n, "the seasonal pattern fits the data exactly, so there are no errors to measure it against", { name, df });
  const p = vonMisesUpper(statistic, df);
  return {
    name, statistic, p, bound: null, df, lags: bandwidth, lagRule: options.bandwidth === null || options.bandwidth === undefined ? lagRuleOf("short") : "as given", n, nullHypothesis, status: "ok",
    critical: critical ? { "10%": vonMisesQuantile(0.1, df), "5%": vonMisesQuantile(0.05, df), "1%": vonMisesQuantile(0.01, df) } : null,
    note: [difference ? "run on the first difference, so that a unit root of the level does not pass for a wandering season" : "run on the level", ...(note === null ? [] : [note])].join("; "),
    sentence: p < 1 - level
      ? `The Canova-Hansen test rejects a stable seasonal pattern of length ${length} at the ${levelWords(level)} (${printedP(p)}): a seasonal difference is called for.`
      : `The Canova-Hansen test does not reject a stable seasonal pattern of length ${length} at the ${levelWords(level)} (${printedP(p)}); that is no proof of one.`,
  };
}

/** Harmonics times residuals, flat by rows (n x length - 1); null where the regression leaves nothing. */
function seasonalScores(values: Float64Array, length: number): Float64Array | null {
  const n = values.length, df = length - 1, cols = length;
  const X = new Float64Array(n * cols);
  for (let t = 0; t < n; t++) {
    X[t * cols] = 1;
    let k = 1;
    for (let j = 1; j <= Math.floor(length / 2); j++) {
      const angle = (2 * Math.PI * ((j * t) % length)) / length;
      X[t * cols + k++] = Math.cos(angle);
      if (2 * j < length) X[t * cols + k++] = Math.sin(angle); // the sine at half a cycle a period is 0 throughout
    }
  }
  const { residuals, rss } = leastSquares(X, values, n, cols);
  const size = values.reduce((s, v) => s + v * v, 0);
  if (!(rss > 1e-22 * size)) return null;
  const scores = new Float64Array(n * df);
  for (let t = 0; t < n; t++) for (let k = 0; k < df; k++) scores[t * df + k] = X[t * cols + k + 1] * residuals[t];
  return scores;
}

/** n^-2 sum of F_t' Omega^-1 F_t, F_t the running sums of the scores. */
function accumulated(scores: Float64Array, n: number, df: number, bandwidth: number): number {
  const omega = new Float64Array(df * df);
  const past = new Float64Array(df);
  for (let t = 0; t < n; t++) {
    // The weighted sum of the scores before: one outer product then does for all lags.
    past.fill(0);
    for (let lag = 1; lag <= Math.min(bandwidth, t); lag++) {
      const weight = 1 - lag / (bandwidth + 1);
      for (let a = 0; a < df; a++) past[a] += weight * scores[(t - lag) * df + a];
    }
    for (let a = 0; a < df; a++) for (let b = 0; b <= a; b++) {
      const u = scores[t * df + a], v = scores[t * df + b];
      omega[a * df + b] += (u * v + u * past[b] + past[a] * v) / n;
    }
  }
  if (choleskyInto(omega, df) >= 0) return NaN;
  const running = new Float64Array(df);
  let sum = 0;
  for (let t = 0; t < n; t++) {
    for (let a = 0; a < df; a++) running[a] += scores[t * df + a];
    const turned = Float64Array.from(running);
    forwardSolveInto(omega, df, turned);
    for (const v of turned) sum += v * v;
  }
  return sum / (n * n);
}
