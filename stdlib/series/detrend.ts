// A polynomial trend in time by least squares, and its extension.

import type { Series } from "./series.ts";

/** A fitted polynomial: its value at any position (0 is the first value it was fitted to; beyond n extends it). */
export type Trend = (t: number) => number;

/** Least-squares polynomial of a degree (0 a level, 1 a line) in the position, missing values left out.
 *  Fitted on polynomials made orthogonal over the observed positions (Forsythe 1957), so that high degrees keep their digits.
 *  @throws RangeError where fewer than degree + 1 values are observed */
export function polynomialTrend(values: Float64Array, degree: number): Trend {
  if (!Number.isInteger(degree) || degree < 0 || degree > 10) throw new RangeError(`detrend: the degree is ${degree}; give a whole number from 0 (a level) to 10, usually 1 (a line)`);
  const n = values.length;
  const at: number[] = [];
  for (let t = 0; t < n; t++) if (!Number.isNaN(values[t])) at.push(t);
  if (at.length <= degree) throw new RangeError(`detrend(${degree}): ${at.length} values are observed; a trend of degree ${degree} needs at least ${degree + 1}`);
  const scaled = (t: number): number => (n === 1 ? 0 : (2 * t) / (n - 1) - 1);
  const x = Float64Array.from(at, scaled);
  const y = Float64Array.from(at, (t) => values[t]);
  // P_0 = 1, P_{k+1} = (x - a_k) P_k - b_k P_{k-1}; c_k are the coefficients on the P_k.
  const a: number[] = [], b: number[] = [], c: number[] = [];
  let older = new Float64Array(x.length);
  let present = new Float64Array(x.length).fill(1);
  let olderNorm = 1;
  for (let k = 0; k <= degree; k++) {
    let norm = 0, product = 0, shifted = 0;
    for (let i = 0; i < x.length; i++) {
      const square = present[i] * present[i];
      norm += square; product += y[i] * present[i]; shifted += x[i] * square;
    }
    c.push(product / norm);
    a.push(shifted / norm);
    b.push(k === 0 ? 0 : norm / olderNorm);
    for (let i = 0; i < x.length; i++) y[i] -= c[k] * present[i];
    const next = x.map((v, i) => (v - a[k]) * present[i] - b[k] * older[i]);
    older = present; present = next; olderNorm = norm;
  }
  return (t) => {
    const v = scaled(t);
    let p0 = 0, p1 = 1, sum = 0;
    for (let k = 0; k <= degree; k++) {
      sum += c[k] * p1;
      const next = (v - a[k]) * p1 - b[k] * p0;
      p0 = p1; p1 = next;
    }
    return sum;
  };
}

/** The trend of a series at each of its periods. */
export function trendRemoved(series: Series, degree: number): Float64Array {
  const trend = polynomialTrend(series.values, degree);
  return Float64Array.from({ length: series.n }, (_, t) => trend(t));
}
