// What an outlier of each type does to the residuals of a model, and the spread to hold it against.

import { expandedPolynomials } from "../arma/coefficients.ts";
import type { Fit } from "../arma/model.ts";
import { differencePolynomial, undifferenced } from "../arma/prepare.ts";

/** The four types of Chen & Liu (1993). */
export type OutlierType = "additive" | "innovational" | "levelShift" | "temporaryChange";

/** A pattern as a filter: left(B) / (theta(B) (1 - keep B)), sparse lags with their coefficients, lag 0 being 1. */
interface Filter { readonly left: readonly Term[]; readonly theta: readonly Term[]; readonly keep: number }
interface Term { readonly lag: number; readonly value: number }

function filterOf(type: OutlierType, fit: Fit, decay: number): Filter {
  if (type === "innovational") return { left: [], theta: [], keep: 0 };
  const { phi, theta } = expandedPolynomials(fit);
  const left = multiply([1, ...phi.map((v) => -v)], [1, ...differencePolynomial(undifferenced(fit.series).differences).map((v) => -v)]);
  return { left: terms(left.slice(1)), theta: terms(theta), keep: type === "additive" ? 0 : type === "levelShift" ? 1 : decay };
}

/** Response of the residuals to a unit outlier, lags 0..n-1: pi(B), pi(B)/(1 - B), pi(B)/(1 - decay B), or 1 alone.
 *  pi(B) is of the scale before the differences: (1 - delta(B)) phi(B) / theta(B). */
export function patternOf(type: OutlierType, fit: Fit, decay: number, n: number): Float64Array {
  const { left, theta, keep } = filterOf(type, fit, decay), out = new Float64Array(n);
  if (n > 0) out[0] = 1;
  for (const { lag, value } of left) if (lag < n) out[lag] = value;
  // First divide by theta, then by 1 - keep B: both as recursions on what is already there.
  for (let j = 0; j < n; j++) for (const { lag, value } of theta) if (lag <= j) out[j] -= value * out[j - lag];
  if (keep > 0) for (let j = 1; j < n; j++) out[j] += keep * out[j - 1];
  return out;
}

/** Sum over t from i on of e[t] x[t - i], x the pattern of `patternOf`, for every i at once: the pattern's filter run
 *  backwards over e. Cost n times the filter's non-zero lags, however long the pattern's memory. */
export function patternProducts(type: OutlierType, fit: Fit, decay: number, e: Float64Array): Float64Array {
  const { left, theta, keep } = filterOf(type, fit, decay), n = e.length;
  const divided = Float64Array.from(e), out = new Float64Array(n);
  for (let i = n - 1; i >= 0; i--) for (const { lag, value } of theta) if (i + lag < n) divided[i] -= value * divided[i + lag];
  for (let i = n - 1; i >= 0; i--) {
    out[i] = divided[i];
    for (const { lag, value } of left) if (i + lag < n) out[i] += value * divided[i + lag];
    if (keep > 0 && i + 1 < n) out[i] += keep * out[i + 1];
  }
  return out;
}

function terms(coefficients: ArrayLike<number>): Term[] {
  return Array.from(coefficients, (value, i) => ({ lag: i + 1, value })).filter(({ value }) => value !== 0);
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
