// Further places to start the search from, where the likelihood may have several maxima.

import type { Search } from "./search.ts";
import { makeShape, type Factor, type Shape } from "./shape.ts";

/** The maximum of a smaller model, its innovations and its negative log-likelihood.
 *  @param rounds  steps of the search, fewer for a rough answer */
export type Maximise = (shape: Shape, rounds?: number) => Smaller | null;
interface Smaller { readonly x: Float64Array; readonly innovations: Float64Array; readonly value: number; readonly sigma2: number }

/** A place that promises (by the score) to come this near to what was found is walked from, even without other grounds for doubt.
 *  Of 573 simulated mixed models that gave none, the first start had missed the maximum in 35; 31 of them had such a place, and
 *  so had 14% of the others. */
const HOPE = 1.5;

/** Whether the plain and the seasonal factors give grounds for doubt, and whether hope alone is to be followed too. */
export interface Doubt { readonly plain: boolean; readonly seasonal: boolean; readonly hope: boolean }

/** Starts in the order phi, Phi, theta, Theta.
 *  Further maxima of a mixed model sit where both sides share a nearly common factor, so the smaller model without it is
 *  estimated and the innovations asked where a pair of factors would help most (a score test at each place of a grid). */
export function otherStarts(search: Search, found: Float64Array, value: number, where: Doubt, maximise: Maximise): Float64Array[] {
  const { shape, held } = search;
  const out: Float64Array[] = [];
  const [ar, sar, ma, sma] = shape.factors;
  const free = !held.some(v => !Number.isNaN(v)) && !search.evaluate;
  const full = (lags: Int32Array) => lags.every((l, i) => l === i + 1);
  const mixed = ar.lags.length > 0 && ma.lags.length > 0 && free && full(ar.lags) && full(ma.lags);
  const orders: readonly (1 | 2)[] = ar.lags.length > 1 && ma.lags.length > 1 ? [1, 2] : [1];
  if (!where.plain) {
    if (where.hope && mixed) for (const order of orders) out.push(...pairs(search, order, shape => maximise(shape, 1), value + HOPE));
  } else if (mixed) {
    for (const order of orders) out.push(...pairs(search, order, maximise));
    // A small model's smaller one may itself sit on the wrong maximum: two fixed places besides.
    if (shape.count <= 3) for (const c of [0.9, -0.9]) { const x = new Float64Array(shape.count); x[ar.from] = c; x[ma.from] = -0.7 * c; out.push(x); }
  } else if (ma.lags.length > 1 && free && full(ma.lags)) {
    const small = maximise(reduced(shape, 0, 1));
    if (small) out.push(padded(search, small.x, 0, 1, [], []));
  } else out.push(...fixedPlaces(shape, found));
  if (where.seasonal && sar.lags.length > 0 && sma.lags.length > 0) {
    for (const [a, b] of [[0.8, -0.5], [0, 0]]) {
      const x = Float64Array.from(found);
      x[sar.from] = a;
      x[sma.from] = b;
      out.push(x);
    }
  }
  return out;
}

/** Where nothing can be asked of a smaller model (lags missing or held): nothing at all, either side alone, and a pair of factors
 *  at either end of the line, the rest as found. */
function fixedPlaces(shape: Shape, found: Float64Array): Float64Array[] {
  const [ar, , ma] = shape.factors;
  const out = [new Float64Array(shape.count)];
  const without = (f: Factor) => { const x = Float64Array.from(found); for (let i = 0; i < f.lags.length; i++) x[f.from + i] = 0; return x; };
  if (ar.lags.length === 0 || ma.lags.length === 0) return out;
  out.push(without(ar), without(ma));
  for (const c of [0.9, -0.9]) {
    const x = without(ar);
    for (let i = 0; i < ma.lags.length; i++) x[ma.from + i] = 0;
    x[ar.from] = c ** ar.lags[0];
    x[ma.from] = -0.7 * x[ar.from];
    out.push(x);
  }
  return out;
}

function reduced(shape: Shape, lessAr: number, lessMa: number): Shape {
  const seasons = (lags: Int32Array) => Array.from(lags, l => l / shape.season);
  const all = (count: number) => Array.from({ length: count }, (_, i) => i + 1);
  return makeShape(all(shape.ar.plain.length - lessAr), seasons(shape.ar.seasonal), all(shape.ma.plain.length - lessMa), seasons(shape.ma.seasonal), shape.season);
}

/** Coefficients of the larger model from those of the smaller one, the plain factors multiplied by 1 + c_1 B + ... */
function padded(search: Search, x: Float64Array, lessAr: number, lessMa: number, arFactor: readonly number[], maFactor: readonly number[]): Float64Array {
  const { shape } = search;
  const p = shape.ar.plain.length, P = shape.ar.seasonal.length, q = shape.ma.plain.length, Q = shape.ma.seasonal.length;
  const out = new Float64Array(shape.count);
  const phi = Array.from(x.subarray(0, p - lessAr), v => -v), theta = Array.from(x.subarray(p - lessAr + P, p - lessAr + P + q - lessMa));
  times(phi, arFactor).forEach((v, i) => { out[i] = -v; });
  for (let i = 0; i < P; i++) out[p + i] = x[p - lessAr + i];
  times(theta, maFactor).forEach((v, i) => { out[p + P + i] = v; });
  for (let i = 0; i < Q; i++) out[p + P + q + i] = x[p - lessAr + P + q - lessMa + i];
  return out;
}

/** (1 + a_1 B + ...)(1 + b_1 B + ...), without the leading 1. */
function times(a: readonly number[], b: readonly number[]): number[] {
  const out = Array.from({ length: a.length + b.length }, () => 0);
  a.forEach((v, i) => { out[i] += v; });
  b.forEach((v, j) => { out[j] += v; });
  a.forEach((v, i) => b.forEach((w, j) => { out[i + j + 1] += v * w; }));
  return out;
}

interface Place { readonly factor: number[]; readonly shift: number[]; readonly gain: number; readonly at: readonly [number, number] }

/** Starts with one (real) or two (complex) factors more on both sides than the smaller model.
 *  @param within  only places whose promised value lies below this */
function pairs(search: Search, order: 1 | 2, maximise: Maximise, within = Infinity): Float64Array[] {
  const small = maximise(reduced(search.shape, order, order));
  if (small === null) return [];
  const places = order === 1 ? POINTS.map(a => realPlace(small.innovations, a)) : CIRCLES.map(at => complexPlace(small.innovations, at));
  places.sort((a, b) => b.gain - a.gain);
  // Large models have many ridges and cost more a pass: fewer of them are walked.
  const most = search.shape.count > 6 ? 1 : search.shape.count > 4 ? 2 : search.shape.count > 3 ? 3 : 5;
  const chosen: Place[] = [];
  for (const p of places) {
    if (chosen.length === most || small.value - p.gain / (2 * small.sigma2) > within) break;
    if (chosen.every(c => Math.hypot(c.at[0] - p.at[0], c.at[1] - p.at[1]) > (search.shape.count > 3 ? 0.35 : 0.2))) chosen.push(p);
  }
  return chosen.map(p => {
    // phi's factor differs from theta's by the shift that the score asks for, no more than keeps it inside.
    const arFactor = p.factor.map((v, i) => v - clamp(p.shift[i], order === 1 ? 0.9 * (1 - Math.abs(v)) : 0.15));
    return padded(search, small.x, order, order, arFactor, p.factor);
  });
}

function clamp(v: number, bound: number): number { return Math.max(-bound, Math.min(bound, v)); }

/** Inverse roots at which a pair of factors is tried: real ones, and complex ones on two circles. */
const POINTS = [-0.97, -0.9, -0.8, -0.65, -0.5, -0.3, -0.1, 0.1, 0.3, 0.5, 0.65, 0.8, 0.9, 0.97];
const CIRCLES = [0.7, 0.92].flatMap(r => Array.from({ length: 9 }, (_, k): [number, number] => [r * Math.cos((k + 1) * Math.PI / 10), r * Math.sin((k + 1) * Math.PI / 10)]));

/** How much the sum of squares would fall with a pair of factors 1 - aB: regression of e_t on a lag of (1 - aB)^-1 e. */
function realPlace(e: Float64Array, a: number): Place {
  let z = 0, squares = 0, product = 0;
  for (let t = 0; t < e.length; t++) {
    const v = e[t];
    squares += z * z; product += z * v;
    z = v + a * z;
  }
  return { factor: [-a], shift: [product / squares], gain: product * product / squares, at: [a, 0] };
}

/** The same for a complex pair, on two lags. */
function complexPlace(e: Float64Array, at: readonly [number, number]): Place {
  const c1 = -2 * at[0], c2 = at[0] ** 2 + at[1] ** 2;
  let z1 = 0, z2 = 0, s11 = 0, s12 = 0, s22 = 0, b1 = 0, b2 = 0;
  for (let t = 0; t < e.length; t++) {
    const v = e[t];
    s11 += z1 * z1; s12 += z1 * z2; s22 += z2 * z2; b1 += z1 * v; b2 += z2 * v;
    const z = (v - c2 * z2) - c1 * z1;
    z2 = z1; z1 = z;
  }
  const det = s11 * s22 - s12 * s12;
  const d1 = (b1 * s22 - b2 * s12) / det, d2 = (b2 * s11 - b1 * s12) / det;
  return { factor: [c1, c2], shift: [d1, d2], gain: d1 * b1 + d2 * b2, at };
}
