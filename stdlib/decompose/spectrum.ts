// The periodogram, raw and smoothed: which frequencies carry the variation.

import { tapered } from "../diagnostics/cumulativePeriodogram.ts";
import { chiSquareQuantile } from "../distributions/chiSquare.ts";
import { fourier } from "../linear/fft.ts";
import type { Series } from "../series/series.ts";
import { valuesOf } from "../series/series.ts";

export interface SpectrumOptions {
  /** Half-widths of modified Daniell averages, applied one after another; [] for the raw periodogram. Default [about sqrt(n)/2]. */
  readonly smooth?: readonly number[] | null;
  /** Share at each end under a cosine bell. */
  readonly taper?: number;
  readonly level?: number;
}

export interface Spectrum {
  readonly status: "ok" | "unavailable";
  readonly note?: string;
  /** Cycles a period, j/n for j = 1..floor(n/2). */
  readonly frequency: Float64Array;
  /** Periodogram |sum x e^(-2 pi i f t)|^2 / n, corrected for the taper; its mean over all n frequencies is the variance. */
  readonly raw: Float64Array;
  /** The same averaged over neighbours. */
  readonly smoothed: Float64Array;
  /** Degrees of freedom of a smoothed ordinate, and the factors that turn one into limits at `level`. */
  readonly df: number; readonly lowFactor: number; readonly highFactor: number; readonly level: number;
  /** Width of the average, in cycles a period. */
  readonly bandwidth: number;
  /** Frequency of the largest periodogram ordinate under the largest smoothed one, and the periods of its cycle. */
  readonly peak: { readonly frequency: number; readonly period: number } | null;
  readonly sentence: string;
}

/** Spectrum of the values about their mean, as a density over frequencies of cycles a period.
 *  @throws RangeError for a taper outside 0 to 0.5 or a half-width that is not a whole number
 *  Source: Bloomfield (2000), chapters 8 and 9. */
export function spectrum(x: Series | ArrayLike<number>, options: SpectrumOptions = {}): Spectrum {
  const values = valuesOf(x), n = values.length, { taper = 0, level = 0.95 } = options;
  const widths = options.smooth ?? [Math.max(1, Math.round(Math.sqrt(n) / 2))];
  for (const m of widths) if (!Number.isInteger(m) || m < 1) throw new RangeError(`spectrum: a half-width is ${m}, expected whole numbers from 1 on, or [] for the raw periodogram`);
  const why = n < 8 ? `${n} values are too few for a spectrum` : values.some(Number.isNaN) ? "the series has gaps: fill them first" : values.every((v) => v === values[0]) ? "all values are the same" : null;
  const none = new Float64Array(0);
  if (why !== null) return { status: "unavailable", note: why, frequency: none, raw: none, smoothed: none, df: NaN, lowFactor: NaN, highFactor: NaN, level, bandwidth: NaN, peak: null, sentence: `The data cannot answer: ${why}.` };
  const { re, im } = fourier(tapered(values, taper));
  const kept = 1 - (5 / 8) * 2 * taper; // mean of the squared taper weights
  const full = new Float64Array(n);
  for (let j = 0; j < n; j++) full[j] = (re[j] ** 2 + im[j] ** 2) / (n * kept);
  full[0] = 0.5 * (full[1] + full[n - 1]); // the mean was taken off: the ordinate at 0 would draw its neighbours down
  const weights = kernel(widths), half = (weights.length - 1) / 2, m = Math.floor(n / 2);
  if (half >= n / 2) throw new RangeError(`spectrum: the averages reach ${half} ordinates to each side, and ${n} values have only ${m}`);
  const frequency = Float64Array.from({ length: m }, (_, j) => (j + 1) / n), raw = full.slice(1, m + 1), smoothed = new Float64Array(m);
  for (let j = 1; j <= m; j++) for (let k = -half; k <= half; k++) smoothed[j - 1] += weights[k + half] * full[(j + k + n) % n];
  const squares = weights.reduce((s, w) => s + w * w, 0), fourth = (1 - (93 / 128) * 2 * taper) / kept ** 2;
  const df = 2 / (squares * fourth);
  let top = 0;
  smoothed.forEach((s, j) => { if (s > smoothed[top]) top = j; });
  // An average is as high all along a line that it holds: the line itself is where the periodogram is highest inside it.
  for (let j = Math.max(0, top - half), end = Math.min(m - 1, top + half); j <= end; j++) if (raw[j] > raw[top]) top = j;
  const peak = { frequency: frequency[top], period: 1 / frequency[top] };
  return {
    status: "ok", frequency, raw, smoothed, df, lowFactor: df / chiSquareQuantile(0.5 + level / 2, df), highFactor: df / chiSquareQuantile(0.5 - level / 2, df), level,
    bandwidth: Math.sqrt((weights.reduce((s, w, i) => s + w * (i - half) ** 2, 0) + 1 / 12)) / n, peak,
    sentence: `The ${widths.length === 0 ? "periodogram" : "smoothed spectrum"} is highest ${widths.length === 0 ? "at" : "about"} ${Number(peak.frequency.toPrecision(3))} cycles a period, one cycle in ${Number(peak.period.toPrecision(3))} periods; a highest point there always is, and its limits are ${(df / chiSquareQuantile(0.5 + level / 2, df)).toFixed(2)} to ${(df / chiSquareQuantile(0.5 - level / 2, df)).toFixed(1)} times its height.`,
  };
}

/** Weights of repeated modified Daniell averages: each is flat with half weight at its ends. */
function kernel(widths: readonly number[]): Float64Array {
  return widths.reduce((whole: Float64Array, m) => {
    const own = Float64Array.from({ length: 2 * m + 1 }, (_, k) => (k === 0 || k === 2 * m ? 1 / (4 * m) : 1 / (2 * m)));
    const out = new Float64Array(whole.length + 2 * m);
    whole.forEach((a, i) => own.forEach((b, j) => { out[i + j] += a * b; }));
    return out;
  }, Float64Array.of(1));
}
