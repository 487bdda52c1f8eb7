// Does the variance change with its own past? Two tests on squared residuals.

import { portmanteauRows, whyNot } from "./portmanteau.ts";
import { chiSquareUpper } from "../distributions/chiSquare.ts";
import { fUpper } from "../distributions/fisherF.ts";
import { leastSquares } from "../linear/leastSquares.ts";
import type { Subject } from "./subject.ts";
import { observedOf, testedOf } from "./subject.ts";
import type { Test } from "./test.ts";
import { chiSquareCritical, levelWords, printedP, unavailable } from "./test.ts";

const steady = "a variance that does not depend on its own past";

/** Engle's LM test: squares regressed on a constant and their first lags; T R^2, chi-square with `lags` degrees of freedom,
 *  T the rows whose lags are all observed. `f` and `fP` are the F form, whose size is better in short series.
 *  @param lags   1 <= lags, default 5 (fewer in a short series)
 *  @param level  confidence at which the sentence reads it
 *  @throws RangeError if lags is not a positive whole number. Source: Engle (1982). */
export function archLM(x: Subject, lags?: number, level = 0.95): Test & { readonly f?: number; readonly fP?: number } {
  const { values, words } = testedOf(x), name = "ARCH LM";
  const q = lags ?? Math.max(1, Math.min(5, Math.floor(values.length / 10)));
  if (!Number.isInteger(q) || q < 1) throw new RangeError(`archLM: lags is ${q}, expected a whole number from 1 on`);
  const squares = values.map((v) => v * v);
  const rows: number[] = [];
  for (let t = q; t < squares.length; t++) if (observed(squares, t - q, t)) rows.push(t);
  const n = rows.length;
  if (n < 2 * q + 8) return unavailable(steady, n, `${n} complete rows are too few for a regression on ${q} lags`, { name, lags: q });
  const X = new Float64Array(n * (q + 1)), y = new Float64Array(n);
  rows.forEach((t, i) => {
    y[i] = squares[t];
    X[i * (q + 1)] = 1;
    for (let j = 1; j <= q; j++) X[i * (q + 1) + j] = squares[t - j];
  });
  const mean = y.reduce((s, v) => s + v, 0) / n, total = y.reduce((s, v) => s + (v - mean) ** 2, 0);
  if (!(total > 1e-24 * n * mean * mean)) return unavailable(steady, n, "all squares are the same", { name, lags: q });
  const { rss } = leastSquares(X, y, n, q + 1);
  const statistic = n * Math.max(0, 1 - rss / total), p = chiSquareUpper(statistic, q);
  const f = ((total - rss) / q) / (rss / (n - q - 1));
  return { name, statistic, p, bound: null, df: q, lags: q, critical: chiSquareCritical(q), n, nullHypothesis: steady, status: "ok", f, fP: fUpper(f, q, n - q - 1), sentence: sentenceOf("the ARCH LM test", p, q, words, level) };
}

/** McLeod-Li test: Ljung-Box on the squares, chi-square with `lags` degrees of freedom (none taken off for the model).
 *  Source: McLeod & Li (1983). */
export function mcleodLi(x: Subject, lags?: number, level = 0.95): Test {
  const { values, words } = testedOf(x), name = "McLeod-Li Q";
  const q = lags ?? Math.max(1, Math.min(20, Math.floor(values.length / 5)));
  const squares = values.map((v) => v * v), n = observedOf(squares).length;
  if (values.length < 3) return unavailable(steady, n, `${n} values are too few`, { name, lags: q });
  const row = portmanteauRows(squares, [q], 0).ljungBox[0];
  if (!Number.isFinite(row.statistic)) return unavailable(steady, n, whyNot(squares, n).replace("values", "squares"), { name, lags: q });
  return { name, statistic: row.statistic, p: row.p, bound: null, df: q, lags: q, critical: chiSquareCritical(q), n, nullHypothesis: steady, status: "ok", sentence: sentenceOf("the McLeod-Li test", row.p, q, words, level) };
}

function observed(values: Float64Array, from: number, to: number): boolean {
  for (let t = from; t <= to; t++) if (Number.isNaN(values[t])) return false;
  return true;
}

function sentenceOf(test: string, p: number, lags: number, words: string, level: number): string {
  return p < 1 - level
    ? `By ${test} over ${lags} lags the variance of ${words} changes with its own past (${printedP(p)}, read at the ${levelWords(level)}): limits are then too narrow at some times and too wide at others.`
    : `By ${test} over ${lags} lags there is no sign that the variance of ${words} changes with its own past (${printedP(p)}).`;
}
