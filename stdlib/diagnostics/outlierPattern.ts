// What an outlier of each type does to the residuals of a model, and the spread to hold it against.

import { expandedPolynomials } from "../arma/coefficients.ts";
import type { Fit } from "../arma/model.ts";
import { differencePolynomial, undifferenced } from "../arma/prepare.ts";

/** The four types of Chen & Liu (1993). */
export type OutlierType = "additive" | "innovational" | "levelShift" | "temporaryChange";

/** Response of the residuals to a unit outlier, lags 0..n-1: pi(B), pi(B)/(1 - B), pi(B)/(1 - decay B), or 1 alone.
 *  pi(B) is of the scale before the differences: (1 - delta(B)) phi(B) / theta(B). */
export function patternOf(type: OutlierType, fit: Fit, decay: number, n: number): Float64Array {
  const out = new Float64Array(n);
  if (type === "innovational") { out[0] = 1; return out; }
  const { phi, theta } = expandedPolynomials(fit);
  const left = multiply([1, ...phi.map((v) => -v)], [1, ...differencePolynomial(undifferenced(fit.series).differences).map((v) => -v)]);
  const keep = type === "additive" ? 0 : type === "levelShift" ? 1 : decay;
  for (let j = 0; j < n; j++) {
    let pi = left[j] ?? 0;
    // First divide by theta, then by 1 - keep B: both as recursions on what is already there.
    for (let i = 1; i <= Math.min(j, theta.length); i++) if (theta[i - 1] !== 0) pi -= theta[i - 1] * out[j - i];
    out[j] = pi;
  }
  if (keep > 0) for (let j = 1; j < n; j++) out[j] += keep * out[j - 1];
  for (let j = n - 1; j > 0 && Math.abs(out[j]) < 1e-14; j--) out[j] = 0;
  return out;
}

function multiply(a: readonly number[], b: readonly number[]): number[] {
  const out = Array.from({ length: a.length + b.length - 1 }, () => 0);
  a.forEach((u, i) => b.forEach((v, j) => { out[i + j] += u * v; }));
  return out;
}

/** 1.483 times the median absolute deviation from the median: the standard deviation of a normal sample, whatever a few values do. */
export function robustSigma(e: Float64Array): number {
  const centre = median(e);
  return 1.483 * median(e.map((v) => Math.abs(v - centre)));
}

function median(x: Float64Array): number {
  const sorted = Float64Array.from(x).sort(), n = sorted.length;
  return (sorted[Math.floor((n - 1) / 2)] + sorted[Math.floor(n / 2)]) / 2;
}
