// Normality: skewness and kurtosis together, and a quantile picture with a band for all points at once.

import { chiSquareUpper } from "../distributions/chiSquare.ts";
import type { Subject } from "./subject.ts";
import { observedOf, testedOf } from "./subject.ts";
import type { Test } from "./test.ts";
import { chiSquareCritical, levelWords, printedP, unavailable } from "./test.ts";

/** Jarque-Bera test: n (skewness^2 / 6 + (kurtosis - 3)^2 / 24), chi-square with 2 degrees of freedom, moments with divisor n.
 *  `kurtosis` is not excess: 3 for a normal distribution. Its size is close to nominal only in long series (n > 200, say).
 *  @param level  confidence at which the sentence reads it. Source: Jarque & Bera (1980). */
export function jarqueBera(x: Subject, level = 0.95): Test & { readonly skewness?: number; readonly kurtosis?: number } {
  const { values, words } = testedOf(x);
  const seen = observedOf(values), n = seen.length;
  const nullHypothesis = "normally distributed", name = "Jarque-Bera";
  if (n < 4) return unavailable(nullHypothesis, n, `${n} observed values are too few for a kurtosis`, { name });
  const mean = seen.reduce((s, v) => s + v, 0) / n;
  // In units of the largest deviation, so that a fourth power of 1e150 does not overflow.
  const unit = seen.reduce((top, v) => Math.max(top, Math.abs(v - mean)), 0);
  let m2 = 0, m3 = 0, m4 = 0;
  for (const v of seen) { const d = (v - mean) / unit, d2 = d * d; m2 += d2; m3 += d2 * d; m4 += d2 * d2; }
  m2 /= n; m3 /= n; m4 /= n;
  if (!(m2 > 0) || seen.every((v) => v === seen[0])) return unavailable(nullHypothesis, n, `all ${n} values are the same`, { name });
  const skewness = m3 / m2 ** 1.5, kurtosis = m4 / (m2 * m2);
  const statistic = n * (skewness ** 2 / 6 + (kurtosis - 3) ** 2 / 24), p = chiSquareUpper(statistic, 2);
  const shape = `skewness ${skewness.toFixed(2)}, kurtosis ${kurtosis.toFixed(2)} against 3`;
  const are = words === "the series" ? "is" : "are";
  return {
    name, statistic, p, bound: null, df: 2, critical: chiSquareCritical(2), n, nullHypothesis, status: "ok", skewness, kurtosis,
    sentence: p < 1 - level
      ? `${words.replace("the", "The")} ${are} not normally distributed by this test at the ${levelWords(level)} (${printedP(p)}; ${shape}): limits from normal quantiles are then only approximate.`
      : `Skewness and kurtosis of ${words} do not contradict a normal distribution (${printedP(p)}; ${shape}); that does not show that it is one.`,
  };
}
