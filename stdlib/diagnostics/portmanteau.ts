// Portmanteau tests: are the first correlations, taken together, larger than chance would make them?

import { acf } from "../correlogram/acf.ts";
import { partialFrom } from "../correlogram/pacf.ts";
import { chiSquareUpper } from "../distributions/chiSquare.ts";
import type { Subject } from "./subject.ts";
import { observedOf, testedOf } from "./subject.ts";
import type { Test } from "./test.ts";
import { chiSquareCritical, levelWords, printedP, unavailable } from "./test.ts";

/** One lag of a portmanteau test followed across lags. `df` is null and `p` NaN where the model leaves none. */
export interface PortmanteauRow { readonly lag: number; readonly statistic: number; readonly df: number | null; readonly p: number }

/** The three tests across lags. */
export interface PortmanteauRows { readonly ljungBox: readonly PortmanteauRow[]; readonly boxPierce: readonly PortmanteauRow[]; readonly monti: readonly PortmanteauRow[] }

const nullHypothesis = "no autocorrelation up to this lag";

/** Ljung-Box test at one lag: n(n + 2) sum of r_k^2 / (n - k), chi-square with lag less the model's free ARMA coefficients.
 *  @param x        a series, numbers or a fit; gaps are allowed, n is then the number observed
 *  @param lag      1 <= lag < n
 *  @param modelDf  coefficients to take off the degrees of freedom; a fit knows its own
 *  @param level    confidence at which the sentence reads it
 *  @throws RangeError if lag is out of range. Source: Ljung & Box (1978). */
export function ljungBox(x: Subject, lag: number, modelDf?: number, level = 0.95): Test {
  return portmanteauTest("Ljung-Box Q", x, lag, modelDf, level, (rows) => rows.ljungBox);
}

/** Box-Pierce test at one lag: n sum of r_k^2; smaller than Ljung-Box in short series, where it rejects too seldom.
 *  Source: Box & Pierce (1970). Arguments as for `ljungBox`. */
export function boxPierce(x: Subject, lag: number, modelDf?: number, level = 0.95): Test {
  return portmanteauTest("Box-Pierce Q", x, lag, modelDf, level, (rows) => rows.boxPierce);
}

/** Monti's test at one lag: n(n + 2) sum of p_k^2 / (n - k) over partial autocorrelations; stronger against a missing
 *  moving-average term. Source: Monti (1994). Arguments as for `ljungBox`. */
export function monti(x: Subject, lag: number, modelDf?: number, level = 0.95): Test {
  return portmanteauTest("Monti Q", x, lag, modelDf, level, (rows) => rows.monti);
}

/** The three tests at every lag from 1, or at chosen lags. Empty where the values do not vary.
 *  @throws RangeError if a lag is not a whole number from 1 to n - 1 */
export function portmanteauRows(values: Float64Array, lags: number | readonly number[], modelDf: number): PortmanteauRows {
  const chosen = typeof lags === "number" ? Array.from({ length: lags }, (_, i) => i + 1) : lags;
  const most = Math.max(...chosen, 1);
  chosen.forEach((lag) => checkLag(lag, values.length));
  const n = observedOf(values).length;
  const r = acf(values, most), partial = partialFrom(r);
  const sums = { ljungBox: new Float64Array(most + 1), boxPierce: new Float64Array(most + 1), monti: new Float64Array(most + 1) };
  for (let k = 1; k <= most; k++) {
    sums.ljungBox[k] = sums.ljungBox[k - 1] + (n * (n + 2) * r[k] * r[k]) / (n - k);
    sums.boxPierce[k] = sums.boxPierce[k - 1] + n * r[k] * r[k];
    sums.monti[k] = sums.monti[k - 1] + (n * (n + 2) * partial[k] * partial[k]) / (n - k);
  }
  const rowsOf = (sum: Float64Array): PortmanteauRow[] => chosen.map((lag) => {
    const df = lag - modelDf;
    return { lag, statistic: sum[lag], df: df > 0 ? df : null, p: df > 0 && Number.isFinite(sum[lag]) ? chiSquareUpper(sum[lag], df) : NaN };
  });
  return { ljungBox: rowsOf(sums.ljungBox), boxPierce: rowsOf(sums.boxPierce), monti: rowsOf(sums.monti) };
}

function portmanteauTest(name: string, x: Subject, lag: number, given: number | undefined, level: number, pick: (rows: PortmanteauRows) => readonly PortmanteauRow[]): Test {
  const { values, modelDf, words } = testedOf(x);
  const less = given ?? modelDf;
  checkLag(lag, values.length);
  const n = observedOf(values).length;
  const row = pick(portmanteauRows(values, [lag], less))[0];
  if (!Number.isFinite(row.statistic)) return unavailable(nullHypothesis, n, whyNot(values, n), { name, lags: lag });
  if (row.df === null) {
    const note = `none left: ${lag} ${lag === 1 ? "lag" : "lags"} and ${less} estimated ${less === 1 ? "coefficient" : "coefficients"} leave no degrees of freedom; take a lag above ${less}`;
    return { ...unavailable(nullHypothesis, n, note, { name, lags: lag }), statistic: row.statistic, df: null };
  }
  return { name, statistic: row.statistic, p: row.p, bound: null, df: row.df, lags: lag, critical: chiSquareCritical(row.df), n, nullHypothesis, status: "ok", sentence: sentence(name, lag, row, words, level) };
}

function sentence(name: string, lag: number, row: PortmanteauRow, words: string, level: number): string {
  const numbers = `${name}(${lag}) = ${row.statistic.toFixed(1)} on ${row.df} df, ${printedP(row.p)}`;
  return row.p < 1 - level
    ? `Over the first ${lag} lags together ${words} are autocorrelated beyond chance at the ${levelWords(level)} (${numbers}).`.replace("the series are", "the series is")
    : `The first ${lag} autocorrelations of ${words} together are no larger than chance would make them (${numbers}); that does not show that there is none.`;
}

/** Why there are no correlations, in words. */
export function whyNot(values: Float64Array, observed: number): string {
  if (observed < 2) return `${observed === 0 ? "no values are" : "only one value is"} observed`;
  const seen = observedOf(values);
  if (seen.every((v) => v === seen[0])) return `all ${observed} observed values are the same, and a correlation needs values that vary`;
  return "no two observed values stand far enough apart for one of the lags";
}

function checkLag(lag: number, n: number): void {
  if (!Number.isInteger(lag) || lag < 1 || lag >= n) throw new RangeError(`portmanteau test: lag is ${lag}, expected a whole number from 1 to ${n - 1} for ${n} values`);
}
