// The estimation problem of a fit in numbers: scaled, centred, gaps as pulses, regressors as an orthogonal basis.

import { leastSquares } from "../linear/leastSquares.ts";
import { differencedBy, differencedRegressor, type Prepared } from "./prepare.ts";
import type { Data } from "./work.ts";
import type { Series } from "../series/series.ts";

export interface Numbers {
  readonly prepared: Prepared;
  /** Positions in the levels: first and one past the last observed. */
  readonly from: number; readonly to: number;
  /** Positions of missing levels in between. */
  readonly gaps: readonly number[];
  /** Observed levels less those used up by the differences. */
  readonly n: number;
  /** What the likelihood sees: divided by `unit`, least-squares fit removed. */
  readonly data: Data;
  /** The same with gaps bridged, for starting regressions. */
  readonly bridged: Float64Array;
  readonly unit: number;
  /** Free columns in the order mean (-1), regressors by position; aliased ones left out. */
  readonly kept: readonly number[];
  readonly aliased: readonly number[];
  /** Least-squares coefficients of the kept columns, and the basis: kept columns times `basis` are the data's columns. */
  readonly ols: Float64Array;
  readonly basis: Float64Array;
  /** Levels between from and to less held parts, gaps NaN, in `unit`, and the kept columns in levels (mean: integrated). */
  readonly levels: Float64Array;
  readonly levelColumns: readonly Float64Array[];
}

/** Above this many gaps the filter is used: the pulses cost the square of their number. */
const MANY_GAPS = 40;

/** @param filtered  the likelihood will be the filter's: no pulses
 *  @throws RangeError where the data cannot answer, saying what is missing */
export function numbersOf(prepared: Prepared, filtered = false): Numbers {
  const { levels, delta, lost, shape } = prepared;
  const name = levels.name || "the series";
  const { from, to, observed } = extent(levels, name);
  if (observed === 0) throw new RangeError(`fit: every value of ${name} is missing${levels.n > 0 ? ` from ${levels.times[0]} to ${levels.times[levels.n - 1]}` : ""}; there is nothing to estimate from`);
  const length = to - from;
  const n = observed - lost;
  const k = parameterCount(prepared);
  if (n < 1 || length <= lost) throw new RangeError(`fit: ${name} has ${observed} observation${observed === 1 ? "" : "s"}, and the differences use up ${lost}; give a longer sample or difference less`);
  if (k > 0 && n <= k) throw new RangeError(`fit: the model has ${k} parameters to estimate (variance counted) and ${name} leaves ${n} observation${n === 1 ? "" : "s"}${lost > 0 ? " after differencing" : ""}; more observations than parameters are needed. Take fewer lags${prepared.names.length > 0 ? " or regressors" : ""}, or a longer sample`);
  if (shape.memory >= length && shape.count > 0) throw new RangeError(`fit: the longest lag of the model is ${shape.memory}, and ${name} has only ${length - lost} periods${lost > 0 ? " after differencing" : ""}; take shorter lags or a longer sample`);
  const gaps: number[] = [];
  if (observed < length) for (let t = from; t < to; t++) if (Number.isNaN(levels.values[t])) gaps.push(t - from);
  // A copy only where something is subtracted below.
  const plain = prepared.heldBeta.every(Number.isNaN) && !(prepared.hasMean && !Number.isNaN(prepared.heldMean));
  const raw = plain ? levels.values.subarray(from, to) : levels.values.slice(from, to);
  const columnsAll = levelColumns(prepared, from, to);
  subtractHeld(prepared, raw, columnsAll);
  const whole = gaps.length > 0 ? bridge(raw) : raw;
  const w = lost > 0 ? differencedBy(delta, whole) : whole;
  const clean = gaps.length > 0 ? cleanRows(raw, delta) : null;
  const size = refuseConstant(w, clean, prepared, name, levels.values.subarray(from, to));
  const free = freeColumns(prepared);
  const differenced = free.map(j => j < 0 ? new Float64Array(w.length).fill(1) : differencedRegressor(delta, columnsAll[j]));
  const { ols, kept, aliased, rss } = firstRegression(w, differenced, clean, free);
  const rows = Math.max(1, clean === null ? w.length : clean.length);
  // What rounding leaves of an exact fit: a few units in the last place of the largest value. (A mean alone is refuseConstant's.)
  if (kept.some(i => free[i] >= 0) && rows > kept.length && rss <= rows * (1e-14 * size) ** 2) throw new RangeError(`fit: the regressors explain ${name} exactly${lost > 0 ? " after differencing" : ""}; there is no randomness left to model`);
  const unit = Math.sqrt(rss / rows) || 1;
  const meanAlone = kept.length === 1 && free[kept[0]] < 0;
  const basis = meanAlone ? Float64Array.of(1) : orthogonalBasis(kept.map(i => differenced[i]), clean);
  const columns = combined(kept.map(i => differenced[i]), basis);
  const y = reduced(w, kept.map(i => differenced[i]), ols, unit);
  const pulses = !filtered && gaps.length <= MANY_GAPS ? gaps.map(t => pulse(t, length, delta)) : [];
  const data: Data = { n: y.length, y, columns: [...pulses, ...columns], gaps: pulses.length, constant: kept.length > 0 && free[kept[0]] < 0 && gaps.length === 0 && !filtered, sigma2: Number.isNaN(prepared.heldSigma2) ? null : prepared.heldSigma2 / unit ** 2 };
  const keptLevels = kept.map(i => lost === 0 ? differenced[i] : free[i] < 0 ? integrated(delta, length) : columnsAll[free[i]]);
  return {
    prepared, from, to, gaps, n, data, bridged: y, unit, kept: kept.map(i => free[i]), aliased: aliased.map(i => free[i]), ols, basis,
    levels: lost === 0 && gaps.length === 0 ? y : reduced(raw, keptLevels, ols, unit), levelColumns: lost === 0 ? columns : combined(keptLevels, basis),
  };
}

/** First and one past the last observed position, and how many are observed. */
function extent(levels: Series, name: string): { from: number; to: number; observed: number } {
  const { values } = levels;
  let from = -1, to = 0, observed = 0;
  for (let t = 0; t < values.length; t++) {
    const v = values[t];
    if (Number.isNaN(v)) continue;
    if (!Number.isFinite(v)) throw new RangeError(`fit: ${name} is not a finite number at ${levels.times[t]}; only finite numbers and gaps can be modelled`);
    if (from < 0) from = t;
    to = t + 1;
    observed++;
  }
  return { from, to, observed };
}

/** (x - sum c_j column_j) / unit */
function reduced(x: Float64Array, columns: readonly Float64Array[], c: Float64Array, unit: number): Float64Array {
  const out = x.slice(), by = 1 / unit;
  for (let j = 0; j < columns.length; j++) { const column = columns[j], cj = c[j]; for (let t = 0; t < out.length; t++) out[t] -= cj * column[t]; }
  for (let t = 0; t < out.length; t++) out[t] *= by;
  return out;
}

/** Free parameters, the variance counted; aliased columns still counted. */
export function parameterCount(p: Prepared): number {
  return p.held.filter(Number.isNaN).length + freeColumns(p).length + (Number.isNaN(p.heldSigma2) ? 1 : 0);
}

function freeColumns(p: Prepared): number[] {
  const out: number[] = [];
  if (p.hasMean && Number.isNaN(p.heldMean)) out.push(-1);
  p.heldBeta.forEach((v, j) => { if (Number.isNaN(v)) out.push(j); });
  return out;
}

/** Regressors over from..to; a value that is missing where the series is too counts as 0 (the gap's pulse absorbs it). */
function levelColumns(p: Prepared, from: number, to: number): Float64Array[] {
  return p.columns.map(x => x.slice(from, to).map(v => Number.isNaN(v) ? 0 : v));
}

function subtractHeld(p: Prepared, levels: Float64Array, columns: readonly Float64Array[]): void {
  p.heldBeta.forEach((beta, j) => { if (!Number.isNaN(beta)) for (let t = 0; t < levels.length; t++) levels[t] -= beta * columns[j][t]; });
  if (p.hasMean && !Number.isNaN(p.heldMean)) {
    const mean = integrated(p.delta, levels.length);
    for (let t = 0; t < levels.length; t++) levels[t] -= p.heldMean * mean[t];
  }
}

/** Levels whose differences are 1 throughout, and which start with zeros. */
export function integrated(delta: Float64Array, length: number): Float64Array {
  const z = new Float64Array(length);
  if (delta.length === 0) return z.fill(1);
  for (let t = delta.length; t < length; t++) {
    let sum = 1;
    for (let i = 1; i <= delta.length; i++) if (delta[i - 1] !== 0) sum += delta[i - 1] * z[t - i];
    z[t] = sum;
  }
  return z;
}

/** Straight lines across the gaps. */
export function bridge(x: Float64Array): Float64Array {
  const out = x.slice();
  for (let t = 0; t < out.length; t++) {
    if (!Number.isNaN(out[t])) continue;
    let end = t;
    while (end < out.length && Number.isNaN(out[end])) end++;
    const before = t > 0 ? out[t - 1] : end < out.length ? out[end] : 0, after = end < out.length ? out[end] : before;
    for (let i = t; i < end; i++) out[i] = before + (after - before) * (i - t + 1) / (end - t + 1);
    t = end;
  }
  return out;
}

/** Rows of the differences that no gap touches. */
function cleanRows(raw: Float64Array, delta: Float64Array): number[] {
  const w = differencedBy(delta, raw);
  const rows: number[] = [];
  w.forEach((v, t) => { if (!Number.isNaN(v)) rows.push(t); });
  return rows;
}

/** Beyond this a square, summed over a series, overflows; below its inverse it vanishes. */
const LARGEST = 1e150;

/** @returns the size of the largest level */
function refuseConstant(w: Float64Array, clean: readonly number[] | null, p: Prepared, name: string, levels: Float64Array): number {
  const rows = clean === null ? w.length : clean.length;
  let low = Infinity, high = -Infinity, size = 0;
  for (let i = 0; i < rows; i++) { const v = w[clean === null ? i : clean[i]]; if (v < low) low = v; if (v > high) high = v; }
  for (let t = 0; t < levels.length; t++) { const v = Math.abs(levels[t]); if (v > size) size = v; }
  if (size > LARGEST || (high > low && high - low < 1 / LARGEST)) throw new RangeError(`fit: the values of ${name} are of a size (${short(size > LARGEST ? size : high - low)}) whose squares no number of a computer holds; bring them to another unit first, with a step such as scale(${size > LARGEST ? "1e-200" : "1e200"}, "new unit")`);
  if (rows === 0 || p.held.every(v => !Number.isNaN(v)) && !Number.isNaN(p.heldSigma2)) return size;
  if (high - low > 4e-15 * size * (1 + p.lost)) return size;
  throw new RangeError(p.lost > 0
    ? `fit: after differencing, ${name} is ${short((low + high) / 2)} throughout: the levels follow a fixed pattern exactly, and there is no variation left to model`
    : `fit: ${name} is ${short(low)} throughout: a constant series has no variation to model`);
}

function short(v: number): string { return String(Number(v.toPrecision(6))); }

function firstRegression(w: Float64Array, columns: readonly Float64Array[], clean: readonly number[] | null, free: readonly number[]): { ols: Float64Array; kept: number[]; aliased: number[]; rss: number } {
  const cols = columns.length;
  if (cols === 0 || (cols === 1 && free[0] < 0)) {
    // Nothing, or a mean alone: no regression needed.
    const all = clean === null || clean.length === 0;
    const count = all ? w.length : clean.length;
    const values = all ? w : Float64Array.from(clean, t => w[t]);
    let sum = 0, rss = 0;
    if (cols === 1) for (let i = 0; i < count; i++) sum += values[i];
    const mean = sum / count;
    for (let i = 0; i < count; i++) { const d = values[i] - mean; rss += d * d; }
    return { ols: new Float64Array(cols).fill(mean), kept: cols === 1 ? [0] : [], aliased: [], rss };
  }
  const rows = clean !== null && clean.length > cols ? clean : Array.from({ length: w.length }, (_, t) => t);
  const x = new Float64Array(rows.length * cols), y = Float64Array.from(rows, t => w[t]);
  rows.forEach((t, i) => { for (let j = 0; j < cols; j++) x[i * cols + j] = columns[j][t]; });
  const fit = leastSquares(x, y, rows.length, cols, 1e-9);
  const kept = free.map((_, i) => i).filter(i => !fit.aliased.includes(i));
  return { ols: Float64Array.from(kept, i => fit.beta[i]), kept, aliased: [...fit.aliased], rss: fit.rss };
}

/** Gram-Schmidt, twice for digits, over the clean rows: an upper triangular matrix, flat by rows. */
function orthogonalBasis(columns: readonly Float64Array[], clean: readonly number[] | null): Float64Array {
  const m = columns.length;
  const basis = new Float64Array(m * m);
  const q: Float64Array[] = [];
  const rows = clean !== null && clean.length > m ? clean : columns.length > 0 ? Array.from({ length: columns[0].length }, (_, t) => t) : [];
  const product = (a: Float64Array, b: Float64Array) => { let sum = 0; for (const t of rows) sum += a[t] * b[t]; return sum; };
  for (let j = 0; j < m; j++) {
    const c = columns[j].slice();
    const t = new Float64Array(m);
    t[j] = 1;
    for (let round = 0; round < 2; round++) {
      for (let i = 0; i < j; i++) {
        const share = product(q[i], c) / product(q[i], q[i]);
        for (let s = 0; s < c.length; s++) c[s] -= share * q[i][s];
        for (let s = 0; s <= i; s++) t[s] -= share * basis[s * m + i];
      }
    }
    const size = Math.sqrt(product(c, c) / Math.max(1, rows.length)) || 1;
    q.push(c.map(v => v / size));
    for (let s = 0; s <= j; s++) basis[s * m + j] = t[s] / size;
  }
  return basis;
}

function combined(columns: readonly Float64Array[], basis: Float64Array): readonly Float64Array[] {
  const m = columns.length;
  if (m === 1 && basis[0] === 1) return columns;
  return columns.map((x, j) => {
    const out = new Float64Array(x.length);
    for (let i = 0; i <= j; i++) { const c = basis[i * m + j]; if (c !== 0) for (let t = 0; t < out.length; t++) out[t] += c * columns[i][t]; }
    return out;
  });
}

/** A level's unit pulse after the differences. */
export function pulse(at: number, length: number, delta: Float64Array): Float64Array {
  const lost = delta.length;
  const out = new Float64Array(length - lost);
  if (at >= lost) out[at - lost] = 1;
  for (let i = 1; i <= lost; i++) if (delta[i - 1] !== 0 && at + i >= lost && at + i < length) out[at + i - lost] -= delta[i - 1];
  return out;
}
