// A range of differences tried side by side, with the sign that one was too many.

import { acf } from "../correlogram/acf.ts";
import { observedOf } from "../diagnostics/subject.ts";
import type { Test } from "../diagnostics/test.ts";
import type { Series } from "../series/series.ts";
import { valuesOf } from "../series/series.ts";
import { adf } from "./adf.ts";
import { kpss } from "./kpss.ts";

/** One way of differencing. */
export interface DifferenceRow {
  /** "none", "1", "12", "1 and 12", ... in the order they would be applied. */
  readonly label: string;
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
 *  @param seasonLength  null for no seasonal difference */
export function differences(x: Series | ArrayLike<number>, seasonLength: number | null, most = 2): DifferenceRow[] {
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
        label: lags.length === 0 ? "none" : lags.join(" and "), lags, d, seasonal, n, values: tried, variance, lag1: r[1] ?? NaN,
        adf: adf(tried), kpss: kpss(tried), overDifferenced: sign(variance, r, less, seasonLength),
      });
    }
  }
  return rows;
}

/** The row of least variance, in words, with what speaks against it. */
export function differencesSentence(rows: readonly DifferenceRow[]): string {
  const usable = rows.filter((r) => r.variance > 0);
  if (usable.length === 0) return "The data cannot answer: no way of differencing leaves ten values that vary.";
  const best = usable.reduce((a, b) => (b.variance < a.variance ? b : a));
  const what = best.d + best.seasonal === 0 ? "without differencing" : `after ${best.lags.length === 1 ? "a difference" : "differences"} at lag ${best.label}`;
  const over = rows.filter((r) => r.overDifferenced !== null).map((r) => r.label);
  const warning = over.length === 0 ? "" : `; ${over.map((l) => `"${l}"`).join(" and ")} ${over.length === 1 ? "shows" : "show"} signs of one difference too many`;
  return `The variance is smallest ${what}${best.overDifferenced === null ? "" : " (although that row itself shows signs of one too many)"}${warning}. Least variance is a guide, not a test.`;
}

function moments(values: Float64Array, seasonLength: number | null): { variance: number; r: Float64Array } {
  const seen = observedOf(values), mean = seen.reduce((s, v) => s + v, 0) / seen.length;
  const variance = seen.reduce((s, v) => s + (v - mean) ** 2, 0) / Math.max(1, seen.length - 1);
  const lags = Math.min(values.length - 1, Math.max(1, seasonLength ?? 1));
  return { variance, r: variance > 0 ? acf(values, lags) : new Float64Array(lags + 1).fill(NaN) };
}

function sign(variance: number, r: Float64Array, less: readonly (DifferenceRow | undefined)[], seasonLength: number | null): string | null {
  const [oneLess, seasonLess] = less;
  const rose = (row: DifferenceRow): string => `the variance rises from ${row.variance.toPrecision(3)} to ${variance.toPrecision(3)}`;
  if (oneLess !== undefined && oneLess.variance < variance && r[1] < -0.4) return `${rose(oneLess)} and the lag-1 autocorrelation is ${r[1].toFixed(2)}`;
  if (seasonLess !== undefined && seasonLength !== null && seasonLess.variance < variance && r[seasonLength] < -0.4) return `${rose(seasonLess)} and the lag-${seasonLength} autocorrelation is ${r[seasonLength].toFixed(2)}`;
  return null;
}
