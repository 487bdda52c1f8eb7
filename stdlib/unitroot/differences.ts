// A range of differences tried side by side, with the sign that one was too many.

import { acf } from "../correlogram/acf.ts";
import { observedOf } from "../diagnostics/subject.ts";
import type { Test } from "../diagnostics/test.ts";
import { rounded } from "../diagnostics/test.ts";
import type { Gradual } from "../gradual.ts";
import { atOnce } from "../gradual.ts";
import type { Series } from "../series/series.ts";
import { valuesOf } from "../series/series.ts";
import { adf } from "./adf.ts";
import { kpss } from "./kpss.ts";

/** One way of differencing. */
export interface DifferenceRow {
  /** "none", "1", "1 twice", "12", "1 and 12", "1 twice and 12". */
  readonly label: string;
  /** "no difference", "two differences at lag 1", "differences at lags 1 and 12", for sentences. */
  readonly words: string;
  /** Lags of the `difference` steps. */
  readonly lags: readonly number[];
  readonly d: number; readonly seasonal: number;
  readonly n: number;
  readonly values: Float64Array;
  readonly variance: number;
  readonly lag1: number;
  readonly adf: Test;
  readonly kpss: Test;
  /** What marks this row as differenced once too often, in words; null where nothing does. */
  readonly overDifferenced: string | null;
}

/** Tries no, one and two first differences, without and with one seasonal difference.
 *  The sign of one too many: the variance rises over the row with one less, and the lag-1 autocorrelation (or the one at the
 *  season) comes near -0.5 or below, the value that differencing leaves behind in white noise.
 *  @param seasonLength  in periods; null for no seasonal difference */
export function differences(x: Series | ArrayLike<number>, seasonLength: number | null, options: DifferencesOptions = {}): DifferenceRow[] {
  return atOnce(differencing(x, seasonLength, options));
}

export interface DifferencesOptions {
  /** Most differences at lag 1 (default 2). */
  readonly most?: number;
  /** Confidence at which each row's tests are read, in (0, 1) (default 0.95). */
  readonly level?: number;
}

/** The same in slices, one a row. */
export function* differencing(x: Series | ArrayLike<number>, seasonLength: number | null, { most = 2, level = 0.95 }: DifferencesOptions = {}): Gradual<DifferenceRow[]> {
  const all = (most + 1) * (seasonLength === null ? 1 : 2);
  const values = valuesOf(x), rows: DifferenceRow[] = [];
  for (const seasonal of seasonLength === null ? [0] : [0, 1]) {
    for (let d = 0; d <= most; d++) {
      const lags = [...Array.from({ length: d }, () => 1), ...(seasonal === 1 && seasonLength !== null ? [seasonLength] : [])];
      const tried = lags.reduce((v, lag) => v.slice(lag).map((u, t) => u - v[t]), values);
      const n = observedOf(tried).length;
      if (n < 10) continue;
      const less = [rows.find((r) => r.d === d - 1 && r.seasonal === seasonal), rows.find((r) => r.d === d && r.seasonal === seasonal - 1)];
      const { variance, r } = moments(tried, seasonLength);
      rows.push({
        ...named(d, seasonal === 1 ? seasonLength : null), lags, d, seasonal, n, values: tried, variance, lag1: r[1] ?? NaN,
        adf: adf(tried, { level }), kpss: kpss(tried, { level }), overDifferenced: sign(variance, r, less, seasonLength),
      });
      yield { done: rows.length, total: all, what: "differences" };
    }
  }
  return rows;
}

/** The row of least variance, in words, with what speaks against it. */
export function differencesSentence(rows: readonly DifferenceRow[]): string {
  const usable = rows.filter((r) => r.variance > 0);
  if (usable.length === 0) return "The data cannot answer: no way of differencing leaves ten values that vary.";
  const best = usable.reduce((a, b) => (b.variance < a.variance ? b : a));
  const over = rows.filter((r) => r.overDifferenced !== null);
  const least = `The variance is smallest ${best.lags.length === 0 ? "without differencing" : `after ${best.words}`}${best.overDifferenced === null ? "" : ", although that itself shows the signs of one difference too many"}.`;
  return [least, ...tooMany(over.filter((r) => r !== best), rows.length), "Least variance is a guide, not a test."].join(" ");
}

/** Which rows look like one difference too many, and by what. */
function tooMany(over: readonly DifferenceRow[], tried: number): string[] {
  if (over.length === 0) return [];
  const why = "the variance rises, and the correlation left at that lag is near −0.5";
  if (over.length > 2 && over.length === tried - 1) return [`Every difference tried looks like one too many: ${why}.`];
  if (over.length > 1) return [`Signs of one difference too many (${why}): ${over.map((r) => r.words).join("; ")}.`];
  const { words, lags } = over[0];
  return [`${words[0].toUpperCase()}${words.slice(1)} ${lags.length === 1 ? "looks" : "look"} like one too many: ${why}.`];
}

/** A way of differencing, for tables and for sentences. */
function named(d: number, season: number | null): Pick<DifferenceRow, "label" | "words"> {
  const near = ["", "1", "1 twice"][d] ?? `1, ${d} times`, count = ["", "a difference", "two differences"][d] ?? `${d} differences`;
  if (season === null) return d === 0 ? { label: "none", words: "no difference" } : { label: near, words: `${count} at lag 1` };
  if (d === 0) return { label: String(season), words: `a difference at lag ${season}` };
  return { label: `${near} and ${season}`, words: d === 1 ? `differences at lags 1 and ${season}` : `${count} at lag 1 and one at lag ${season}` };
}

function moments(values: Float64Array, seasonLength: number | null): { variance: number; r: Float64Array } {
  const seen = observedOf(values), mean = seen.reduce((s, v) => s + v, 0) / seen.length;
  const variance = seen.reduce((s, v) => s + (v - mean) ** 2, 0) / Math.max(1, seen.length - 1);
  const lags = Math.min(values.length - 1, Math.max(1, seasonLength ?? 1));
  return { variance, r: variance > 0 ? acf(values, lags) : new Float64Array(lags + 1).fill(NaN) };
}

function sign(variance: number, r: Float64Array, less: readonly (DifferenceRow | undefined)[], seasonLength: number | null): string | null {
  const [oneLess, seasonLess] = less;
  const rose = (row: DifferenceRow): string => `the variance rises from ${rounded(row.variance)} to ${rounded(variance)}`;
  if (oneLess !== undefined && oneLess.variance < variance && r[1] < -0.4) return `${rose(oneLess)} and the lag-1 autocorrelation is ${rounded(r[1], 2)}`;
  if (seasonLess !== undefined && seasonLength !== null && seasonLess.variance < variance && r[seasonLength] < -0.4) return `${rose(seasonLess)} and the lag-${seasonLength} autocorrelation is ${rounded(r[seasonLength], 2)}`;
  return null;
}
