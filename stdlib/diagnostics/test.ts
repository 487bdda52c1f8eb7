// The result of a hypothesis test: one plain shape for every test here.

import { chiSquareQuantile } from "../distributions/chiSquare.ts";

/** A test's outcome. Where the data cannot answer, `status` is "unavailable", `p` is NaN and `note` says why in words. */
export interface Test {
  /** The statistic under its published name, as a reader would cite it: "Ljung-Box Q". */
  readonly name?: string;
  readonly statistic: number;
  /** p-value from the tail named by the alternative; NaN where the data cannot answer. */
  readonly p: number;
  /** "below": the true p is smaller than `p` (the published table ends there); "above": it is larger; null where p is p. */
  readonly bound: "below" | "above" | null;
  /** Degrees of freedom of a chi-square (or t) statistic; null where none are left. */
  readonly df?: number | null;
  /** Lags of the regression or sum, or the bandwidth of a long-run variance. */
  readonly lags?: number;
  /** How `lags` was chosen, in words. */
  readonly lagRule?: string;
  /** Critical values by significance level: "1%", "5%", "10%"; null where the data cannot answer or none are printed. */
  readonly critical: Readonly<Record<string, number>> | null;
  /** Observations used. */
  readonly n: number;
  /** The null hypothesis in words: "a unit root: shocks never die out". */
  readonly nullHypothesis: string;
  readonly status?: "ok" | "unavailable";
  readonly note?: string;
  /** One sentence from the numbers, exact about what was and was not shown. */
  readonly sentence?: string;
}

/** A test that the data cannot answer, with the reason in words. */
export function unavailable(nullHypothesis: string, n: number, note: string, more: Partial<Test> = {}): Test {
  return { ...more, statistic: NaN, p: NaN, bound: null, critical: null, n, nullHypothesis, status: "unavailable", note, sentence: `The data cannot answer: ${note}.` };
}

/** Upper critical values of a chi-square variable. @example chiSquareCritical(1)["5%"] // 3.841459 */
export function chiSquareCritical(df: number): Readonly<Record<string, number>> {
  return { "10%": chiSquareQuantile(0.9, df), "5%": chiSquareQuantile(0.95, df), "1%": chiSquareQuantile(0.99, df) };
}

/** Whether a test rejects its null hypothesis at significance `alpha`; null where it cannot be said: the data did not answer,
 *  or the printed table ends before that level. */
export function rejects(test: Pick<Test, "p" | "bound">, alpha: number): boolean | null {
  const { p, bound } = test;
  if (Number.isNaN(p)) return null;
  if (bound === "below") return p <= alpha ? true : null;
  if (bound === "above") return p >= alpha ? false : null;
  return p < alpha;
}

/** "5% level" of a confidence of 0.95, as it stands in a sentence. */
export function levelWords(level: number): string {
  return `${Number((100 * (1 - level)).toPrecision(3))}% level`;
}

/** A number in three digits or so, with a true minus sign. */
export function rounded(value: number, digits = 3): string {
  return String(Number(value.toPrecision(digits))).replace("-", "−");
}

/** A p-value as it stands in a sentence: "p = 0.031", "p < 0.001", "p < 0.01" and "p > 0.10" where a table ends. */
export function printedP(p: number, bound: Test["bound"] = null): string {
  if (Number.isNaN(p)) return "p not available";
  if (bound === "below") return `p < ${p}`;
  if (bound === "above") return `p > ${p.toFixed(2)}`;
  if (p < 0.001) return "p < 0.001";
  return `p = ${p < 0.1 ? p.toFixed(3) : p.toFixed(2)}`;
}
