// Cross-correlations after both series went through the filter that makes the first one white.

import { normalQuantile } from "../distributions/normal.ts";
import type { Series } from "../series/series.ts";
import { isSeries } from "../series/series.ts";
import { ccf } from "./acf.ts";
import { autocovariance, centre } from "./autocovariance.ts";
import { checkLevel } from "./bands.ts";
import { commonStretch } from "./commonStretch.ts";

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
  /** First and last period that both series have; null for bare numbers. */
  readonly from: string | null; readonly to: string | null;
  /** The largest cross-correlation outside the limits; null where none is. */
  readonly strongest: { readonly lag: number; readonly value: number } | null;
  readonly notes: readonly string[];
  readonly sentence: string;
}

/** Cross-correlations after prewhitening: an autoregression of x (Yule-Walker, order by AIC up to 10 log10 n) filters both.
 *  Without it, autocorrelation in both series makes chance correlations large. Both should be stationary first.
 *  Two series are aligned by their times, over the periods that both have.
 *  @throws RangeError where they share no period, or lags is out of range. Source: Box & Jenkins (1976), section 11.2. */
export function prewhitenedCcf(x: Series | ArrayLike<number>, y: Series | ArrayLike<number>, lags: number, { level = 0.95, order: given }: { readonly level?: number; readonly order?: number | null } = {}): PrewhitenedCcf {
  checkLevel("prewhitenedCcf", level);
  const { x: a, y: b, from, to, note } = commonStretch("prewhitenedCcf", x, y);
  const notes = note === null ? [] : [`${note}.`], names = [nameOf(x, "the first"), nameOf(y, "the second")] as const;
  const ca = centre(a), cb = centre(b);
  const why = ca.observed < 10 || cb.observed < 10 ? "fewer than ten values are observed" : !(spread(ca.deviations) > 0) || !(spread(cb.deviations) > 0) ? "one of the series does not vary" : null;
  if (why !== null) return { status: "unavailable", note: why, lags: new Int32Array(0), ccf: new Float64Array(0), band: NaN, level, outside: [], order: 0, n: ca.observed, from, to, strongest: null, notes, sentence: `The data cannot answer: ${why}.` };
  const phi = yuleWalker(a, given ?? null);
  const fa = whitened(a, ca.mean, phi), fb = whitened(b, cb.mean, phi), n = fa.reduce((s, v, t) => s + (Number.isNaN(v) || Number.isNaN(fb[t]) ? 0 : 1), 0);
  if (!Number.isInteger(lags) || lags < 0 || lags >= fa.length) throw new RangeError(`prewhitenedCcf: lags is ${lags}, expected a whole number from 0 to ${fa.length - 1}`);
  const ahead = ccf(fa, fb, lags), behind = ccf(fb, fa, lags);
  const values = Float64Array.from([...Array.from(behind).slice(1).reverse(), ...ahead]);
  const band = normalQuantile(0.5 + level / 2) / Math.sqrt(n), at = Int32Array.from({ length: 2 * lags + 1 }, (_, i) => i - lags);
  const outside = Array.from(at).filter((_, i) => Math.abs(values[i]) > band);
  const top = outside.length === 0 ? null : outside.reduce((best, lag) => (Math.abs(values[lag + lags]) > Math.abs(values[best + lags]) ? lag : best));
  const strongest = top === null ? null : { lag: top, value: values[top + lags] };
  return { status: "ok", lags: at, ccf: values, band, level, outside, order: phi.length, n, from, to, strongest, notes, sentence: sentenceOf(at.length, strongest, outside.length, level, names) };
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

function nameOf(x: Series | ArrayLike<number>, otherwise: string): string {
  return (isSeries(x) && x.name) || otherwise;
}

function sentenceOf(tried: number, strongest: PrewhitenedCcf["strongest"], outside: number, level: number, [x, y]: readonly [string, string]): string {
  const limits = `${Number((100 * level).toPrecision(6))}% limits`;
  if (strongest === null) return `After prewhitening no cross-correlation of ${x} and ${y} is outside its ${limits}: no sign that one leads the other, or moves with it.`;
  const { lag, value } = strongest, periods = `${Math.abs(lag)} ${Math.abs(lag) === 1 ? "period" : "periods"}`;
  const where = lag === 0 ? "within the same period" : lag > 0 ? `where ${x} leads ${y} by ${periods}` : `where ${y} leads ${x} by ${periods}`;
  return `After prewhitening ${outside} of ${tried} cross-correlations of ${x} and ${y} ${outside === 1 ? "is" : "are"} outside ${limits} (about ${((1 - level) * tried).toFixed(1)} would be by chance); the largest, ${value.toFixed(2).replace("-", "−")}, is ${where}. That a lead is seen does not show a cause.`;
}
