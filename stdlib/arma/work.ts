// What the likelihood is asked of, and the arrays it works in.

import { subtractColumn, subtractNumber } from "./kernels.ts";
import { makePresample, type Presample } from "./presample.ts";
import { FIRST, makeResponse, type Response } from "./response.ts";
import type { Shape } from "./shape.ts";

/** What is fitted: w - X beta, the first `gaps` columns being pulses of missing values. */
export interface Data {
  readonly n: number;
  readonly y: Float64Array;
  readonly columns: readonly Float64Array[];
  readonly gaps: number;
  /** The first columns, as many as this, have coefficients that are integrated out: the gaps (the default), or for the restricted
   *  likelihood all. */
  readonly integrated?: number;
  /** Whether the first column is the same number throughout (there are then no gaps): its innovations are constant after a
   *  while, and cost next to nothing. */
  readonly constant?: boolean;
  /** Innovation variance, or null when it is estimated. */
  readonly sigma2: number | null;
}

/** Work arrays of one model shape and length; filled by `valueAt`, read by `gradientInto` and by who wants residuals. */
export interface Work {
  readonly shape: Shape; readonly n: number;
  /** Where the long arrays stand. */
  readonly block: Float64Array;
  /** min(memory, n). */
  readonly g: number;
  readonly a: Float64Array; readonly b: Float64Array;
  readonly aBar: Float64Array; readonly bBar: Float64Array;
  readonly pre: Presample; readonly response: Response;
  /** Of gain.ts: L, the factor C of I + L'GL, W = C^-1 L', K, scratch; g x g each. */
  readonly l: Float64Array; readonly d: Float64Array; readonly wk: Float64Array; readonly k: Float64Array; readonly s1: Float64Array;
  readonly omegaBar: Float64Array;
  readonly u: Float64Array; readonly v: Float64Array;
  /** a0 of the series, and its innovations less those of the columns. */
  readonly a0: Float64Array; readonly er: Float64Array;
  /** theta(F)^-1 er, where a gradient has been asked for; `er` itself where there is no moving average. */
  readonly lambda: Float64Array;
  /** a0 and innovations of the columns; of a constant one, the first `flat` values, and `level` is what follows. */
  readonly columnA0: Float64Array[]; readonly columnE: Float64Array[];
  flat: number; level: number;
  /** The residual series y - X beta, where someone asked for it. */
  r: Float64Array | null; rKnown: boolean;
  delta: Float64Array;
  readonly q: Float64Array; readonly qy: Float64Array; readonly chol: Float64Array;
  readonly beta: Float64Array;
  /** Dense lags 1..2 on both sides: the fused kernels serve. */
  readonly small: boolean;
  readonly sums: Float64Array;
  /** Sum of squares, log determinant (what is integrated out included), effective n, and the negative log-likelihood at the last `valueAt`. */
  sum: number; logDet: number; nEffective: number; f: number; sigma2: number;
}

/** @param lender  a work of a larger shape for the same data, whose place serves: its last value is lost */
export function makeWork(shape: Shape, data: Data, lender?: Work): Work {
  const n = data.n, m = data.columns.length, g = Math.min(shape.memory, n), p = shape.ar.lags.length, q = shape.ma.lags.length;
  // Long arrays are views of one block: a block of memory costs far more to get and to give back than a view.
  const own = data.columns.map((_, j) => j === 0 && data.constant ? Math.min(n, FIRST) : n);
  const size = (q > 0 ? 3 : 2) * n + 2 * own.reduce((a, b) => a + b, 0) + 3 * Math.min(n, FIRST) + 6 * g * g + 2 * g;
  const block = lender && lender.block.length >= size ? lender.block.fill(0, 0, size) : new Float64Array(size);
  let at = 0;
  const take = (length: number) => { const view = block.subarray(at, at + length); at += length; return view; };
  const er = take(n), dense = (lags: Int32Array) => lags.length <= 2 && lags.every((l, i) => l === i + 1);
  return {
    shape, n, block, g,
    a: new Float64Array(p), b: new Float64Array(q), aBar: new Float64Array(p), bBar: new Float64Array(q),
    pre: makePresample(shape.ar.degree, shape.ma.degree), response: makeResponse(n, g, take),
    l: take(g * g), d: take(g * g), wk: take(g * g), k: take(g * g), s1: take(g * g), omegaBar: new Float64Array(shape.memory ** 2),
    u: take(g), v: take(g), a0: take(n), er, lambda: q > 0 ? take(n) : er,
    columnA0: own.map(take), columnE: own.map(take), flat: 0, level: 0, r: null, rKnown: false, delta: take(Math.min(n, FIRST)),
    q: new Float64Array(m * m), qy: new Float64Array(m), chol: new Float64Array(m * m), beta: new Float64Array(m),
    small: q > 0 && dense(shape.ar.lags) && dense(shape.ma.lags), sums: new Float64Array(4),
    sum: 0, logDet: 0, nEffective: n, f: Infinity, sigma2: NaN,
  };
}

/** Scratch of at least the length asked for. */
export function scratch(work: Work, length: number): Float64Array {
  if (work.delta.length < length) work.delta = new Float64Array(Math.min(work.n, 2 * length));
  return work.delta;
}

/** The residual series y - X beta at the last value. */
export function residualsOf(work: Work, data: Data): Float64Array {
  const r = work.r ??= new Float64Array(work.n);
  if (!work.rKnown) { residualsInto(r, work, data, 0); work.rKnown = true; }
  return r;
}

/** The same from `from` on, into an array of that length. */
export function residualsInto(out: Float64Array, work: Work, data: Data, from: number): void {
  if (work.r !== null && work.rKnown) { out.set(work.r.subarray(from)); return; }
  const { n, beta } = work, { y, columns } = data, constant = data.constant ? 1 : 0;
  subtractNumber(out, from === 0 ? y : y.subarray(from), constant ? beta[0] * columns[0][0] : 0, 0, n - from);
  for (let j = constant; j < columns.length; j++) subtractColumn(out, out, columns[j].subarray(from), beta[j], n - from);
}

/** Innovations of a column from `start` on. */
export function columnBlockInto(out: Float64Array, work: Work, data: Data, j: number, start: number, length: number): void {
  const e = work.columnE[j], end = j === 0 && data.constant ? Math.min(length, work.flat - start) : length;
  for (let t = 0; t < end; t++) out[t] = e[start + t];
  for (let t = Math.max(0, end); t < length; t++) out[t] = work.level;
}
