// Cross-correlations after both series went through the filter that makes the first one white.

import { normalQuantile } from "../distributions/normal.ts";
import type { Series } from "../series/series.ts";
import { valuesOf } from "../series/series.ts";
import { ccf } from "./acf.ts";
import { autocovariance, centre } from "./autocovariance.ts";
import { checkLevel } from "./bands.ts";

export interface PrewhitenedCcf {
  readonly status: "ok" | "unavailable";
  readonly note?: string;
  /** -lags..lags: at k the correlation of x at t with y at t + k, so positive lags are x leading y. */
  readonly lags: Int32Array;
  readonly ccf: Float64Array;
  /** Half-width for two unrelated series. */
  readonly band: number;
  readonly level: number;
  readonly outside: readonly number[];
  /** Order of the autoregressive filter. */
  readonly order: number;
  readonly n: number;
  readonly sentence: string;
}

/** Cross-correlations after prewhitening: an autoregression of x (Yule-Walker, order by AIC up to 10 log10 n) filters both.
 *  Without it, autocorrelation in both series makes chance correlations large. Both should be stationary first.
 *  @throws RangeError where lengths differ or lags is out of range. Source: Box & Jenkins (1976), section 11.2. */
export function prewhitenedCcf(x: Series | ArrayLike<number>, y: Series | ArrayLike<number>, lags: number, { level = 0.95, order: given }: { readonly level?: number; readonly order?: number | null } = {}): PrewhitenedCcf {
  checkLevel("prewhitenedCcf", level);
  const a = valuesOf(x), b = valuesOf(y);
  if (a.length !== b.length) throw new RangeError(`prewhitenedCcf: the first series has ${a.length} values and the second ${b.length}: cut both to the same window`);
  const ca = centre(a), cb = centre(b);
  const why = ca.observed < 10 || cb.observed < 10 ? "fewer than ten values are observed" : !(spread(ca.deviations) > 0) || !(spread(cb.deviations) > 0) ? "one of the series does not vary" : null;
  if (why !== null) return { status: "unavailable", note: why, lags: new Int32Array(0), ccf: new Float64Array(0), band: NaN, level, outside: [], order: 0, n: ca.observed, sentence: `The data cannot answer: ${why}.` };
  const phi = yuleWalker(a, given ?? null);
  const fa = whitened(a, ca.mean, phi), fb = whitened(b, cb.mean, phi), n = fa.reduce((s, v, t) => s + (Number.isNaN(v) || Number.isNaN(fb[t]) ? 0 : 1), 0);
  if (!Number.isInteger(lags) || lags < 0 || lags >= fa.length) throw new RangeError(`prewhitenedCcf: lags is ${lags}, expected a whole number from 0 to ${fa.length - 1}`);
  const ahead = ccf(fa, fb, lags), behind = ccf(fb, fa, lags);
  const values = Float64Array.from([...Array.from(behind).slice(1).reverse(), ...ahead]);
  const band = normalQuantile(0.5 + level / 2) / Math.sqrt(n), at = Int32Array.from({ length: 2 * lags + 1 }, (_, i) => i - lags);
  const outside = Array.from(at).filter((_, i) => Math.abs(values[i]) > band);
  return { status: "ok", lags: at, ccf: values, band, level, outside, order: phi.length, n, sentence: sentenceOf(at, values, outside, level) };
}

function yuleWalker(x: Float64Array, given: number | null): Float64Array {
  const n = x.length, most = given ?? Math.min(Math.floor(10 * Math.log10(n)), Math.floor(n / 4));
  if (!Number.isInteger(most) || most < 0 || most >= n) throw new RangeError(`prewhitenedCcf: order is ${most}, expected a whole number from 0 to ${n - 1}`);
  const gamma = autocovariance(x, most), phi = new Float64Array(most + 1);
  let error = gamma[0], bestCriterion = n * Math.log(error), best = new Float64Array(0);
  for (let k = 1; k <= most; k++) {
    let top = gamma[k];
    for (let j = 1; j < k; j++) top -= phi[j] * gamma[k - j];
    const last = top / error, before = Float64Array.from(phi);
    phi[k] = last;
    for (let j = 1; j < k; j++) phi[j] = before[j] - last * before[k - j];
    error *= 1 - last * last;
    const criterion = n * Math.log(error) + 2 * k;
    if (given !== null ? k === most : criterion < bestCriterion) { bestCriterion = criterion; best = phi.slice(1, k + 1); }
  }
  return best;
}

function whitened(x: Float64Array, mean: number, phi: Float64Array): Float64Array {
  const p = phi.length;
  return Float64Array.from({ length: x.length - p }, (_, i) => phi.reduce((s, c, l) => s - c * (x[i + p - l - 1] - mean), x[i + p] - mean));
}

function spread(deviations: Float64Array): number {
  return deviations.reduce((s, v) => s + v * v, 0);
}

function sentenceOf(at: Int32Array, values: Float64Array, outside: readonly number[], level: number): string {
  const chance = ((1 - level) * at.length).toFixed(1);
  if (outside.length === 0) return `After prewhitening no cross-correlation is outside its ${100 * level}% limits: no sign that one series leads the other.`;
  let top = 0;
  values.forEach((v, i) => { if (Math.abs(v) > Math.abs(values[top])) top = i; });
  const lag = at[top], who = lag > 0 ? `the first leads the second by ${lag}` : lag < 0 ? `the second leads the first by ${-lag}` : "the same period";
  return `After prewhitening ${outside.length} of ${at.length} cross-correlations ${outside.length === 1 ? "is" : "are"} outside ${100 * level}% limits (about ${chance} would be by chance); the largest, ${values[top].toFixed(2)}, is where ${lag === 0 ? "both are of the same period" : who}.`;
}
