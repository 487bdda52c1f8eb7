// Two tables that read the orders of a mixed model: extended autocorrelations and smallest canonical correlations.

import { chiSquareUpper } from "../distributions/chiSquare.ts";
import { choleskyInto, forwardSolveInto } from "../linear/cholesky.ts";
import { leastSquares } from "../linear/leastSquares.ts";
import { symmetricEigen } from "../linear/symmetricEigen.ts";
import type { Series } from "../series/series.ts";
import { valuesOf } from "../series/series.ts";
import { acf } from "./acf.ts";
import { byChance } from "./suggestOrders.ts";

/** A table over AR orders 0..maxAr (rows) and MA orders 0..maxMa (columns). */
export interface OrderTable {
  readonly status: "ok" | "unavailable";
  readonly note?: string;
  readonly maxAr: number; readonly maxMa: number;
  /** Flat by rows: the extended autocorrelation, or the test's p-value. */
  readonly values: Float64Array;
  /** Flat by rows: 1 where the value is beyond chance at the 5% level, 0 where not. */
  readonly beyond: Uint8Array;
  /** Corner of the largest triangle or rectangle of zeros, as orders to begin with; null where there is none. */
  readonly suggests: { readonly ar: number; readonly ma: number } | null;
  readonly sentence: string;
}

/** Extended sample autocorrelations: entry (k, j) is the lag j + 1 autocorrelation after an AR(k) part, estimated so that an MA(j)
 *  part does not disturb it, is taken off. For an ARMA(p, q) the zeros fill a triangle with its corner at (p, q).
 *  `beyond`: outside two standard errors by Bartlett (1946), sqrt((1 + 2 sum of r_i^2, i <= j) / (n - k - j)), since a zero there
 *  supposes an MA(j). The 1 / sqrt(n - k - j) printed in the source marks too many zeros beyond the right order, and then too
 *  high an MA order is read (simulated, test/bench/identify.ts). Source: Tsay & Tiao (1984). */
export function extendedAcf(x: Series | ArrayLike<number>, maxAr = 5, maxMa = 8): OrderTable {
  const values = valuesOf(x), n = values.length, why = whyNot(values, maxAr, maxMa);
  if (why !== null) return unavailableTable(maxAr, maxMa, why);
  const mean = values.reduce((a, b) => a + b, 0) / n, z = values.map((v) => v - mean);
  // phi[k] holds the k coefficients of the current iteration, lag 1 first; iteration 0 is least squares.
  let phi = Array.from({ length: maxAr + maxMa + 2 }, (_, k) => (k === 0 ? new Float64Array(0) : autoregression(z, k)));
  const table = new Float64Array((maxAr + 1) * (maxMa + 1)), beyond = new Uint8Array(table.length);
  const plain = acf(z, maxMa + 1);
  for (let j = 0; j <= maxMa; j++) {
    phi = iterated(phi);
    for (let k = 0; k <= maxAr; k++) {
      const own = k === 0 ? plain : acf(filtered(z, phi[k]), j + 1), r = own[j + 1];
      table[k * (maxMa + 1) + j] = r;
      beyond[k * (maxMa + 1) + j] = Math.abs(r) > 2 * Math.sqrt(bartlettFactor(own, j) / (n - k - j)) ? 1 : 0;
    }
  }
  if (table.some(Number.isNaN)) return unavailableTable(maxAr, maxMa, exactly);
  const suggests = triangle(beyond, maxAr, maxMa);
  return { status: "ok", maxAr, maxMa, values: table, beyond, suggests, sentence: sentenceOf("extended autocorrelations", "triangle", suggests) };
}

/** Smallest canonical correlations: entry (m, j) is the p-value of no correlation between some combination of m + 1 neighbours
 *  and the same neighbours j + 1 periods before. For an ARMA(p, q) it is large in the rectangle m >= p, j >= q.
 *  Source: Tsay & Tiao (1985): -(n - m - j) log(1 - lambda / d) on one degree of freedom, d Bartlett's variance factor. */
export function smallestCanonical(x: Series | ArrayLike<number>, maxAr = 5, maxMa = 5): OrderTable {
  const values = valuesOf(x), n = values.length, why = whyNot(values, maxAr, maxMa);
  if (why !== null) return unavailableTable(maxAr, maxMa, why);
  const mean = values.reduce((a, b) => a + b, 0) / n, z = values.map((v) => v - mean);
  const table = new Float64Array((maxAr + 1) * (maxMa + 1)), beyond = new Uint8Array(table.length);
  for (let m = 0; m <= maxAr; m++) for (let j = 0; j <= maxMa; j++) {
    const { lambda, combined } = smallestPair(z, m, j);
    const factor = bartlettFactor(acf(combined, j), j);
    const statistic = -(n - m - j) * Math.log(Math.max(1e-300, 1 - Math.min(1, lambda / factor)));
    const p = chiSquareUpper(statistic, 1);
    table[m * (maxMa + 1) + j] = p;
    beyond[m * (maxMa + 1) + j] = p < 0.05 ? 1 : 0;
  }
  if (table.some(Number.isNaN)) return unavailableTable(maxAr, maxMa, exactly);
  const suggests = rectangle(beyond, maxAr, maxMa);
  return { status: "ok", maxAr, maxMa, values: table, beyond, suggests, sentence: sentenceOf("smallest canonical correlations", "rectangle", suggests) };
}

/** What the variance of the correlation after an MA(j) is multiplied by. */
function bartlettFactor(r: Float64Array, j: number): number {
  let sum = 1;
  for (let i = 1; i <= j; i++) sum += 2 * r[i] * r[i];
  return sum;
}

const exactly = "some combination of neighbouring values is exact, which leaves no errors to correlate";

function autoregression(z: Float64Array, order: number): Float64Array {
  const rows = z.length - order, X = new Float64Array(rows * order);
  for (let i = 0; i < rows; i++) for (let j = 1; j <= order; j++) X[i * order + j - 1] = z[i + order - j];
  return leastSquares(X, z.slice(order), rows, order).beta;
}

/** One step of the paper's recursion: from k + 1 and k coefficients to k less biased ones. */
function iterated(phi: readonly Float64Array[]): Float64Array[] {
  const next = [new Float64Array(0)];
  for (let k = 1; k + 1 < phi.length; k++) {
    const ratio = phi[k + 1][k] / phi[k][k - 1];
    next.push(Float64Array.from({ length: k }, (_, l) => phi[k + 1][l] - (l === 0 ? -1 : phi[k][l - 1]) * ratio));
  }
  return next;
}

function filtered(z: Float64Array, phi: Float64Array): Float64Array {
  const k = phi.length;
  return Float64Array.from({ length: z.length - k }, (_, i) => phi.reduce((s, c, l) => s - c * z[i + k - l - 1], z[i + k]));
}

/** Smallest squared canonical correlation of (z_t .. z_{t-m}) with (z_{t-j-1} .. z_{t-j-1-m}), and the combination of the first. */
function smallestPair(z: Float64Array, m: number, j: number): { lambda: number; combined: Float64Array } {
  const size = m + 1, start = m + j + 1;
  const yy = new Float64Array(size * size), xx = new Float64Array(size * size), xy = new Float64Array(size * size);
  for (let t = start; t < z.length; t++) for (let a = 0; a < size; a++) for (let b = 0; b < size; b++) {
    yy[a * size + b] += z[t - a] * z[t - b];
    xx[a * size + b] += z[t - j - 1 - a] * z[t - j - 1 - b];
    xy[a * size + b] += z[t - j - 1 - a] * z[t - b];
  }
  if (choleskyInto(yy, size) >= 0 || choleskyInto(xx, size) >= 0) return { lambda: NaN, combined: z };
  // K = Lx^-1 (X'Y) Ly^-T has the canonical correlations as singular values: K'K their squares.
  const half = new Float64Array(size * size), k = new Float64Array(size * size), column = new Float64Array(size);
  for (let b = 0; b < size; b++) {
    for (let a = 0; a < size; a++) column[a] = xy[a * size + b];
    forwardSolveInto(xx, size, column);
    for (let a = 0; a < size; a++) half[a * size + b] = column[a];
  }
  for (let a = 0; a < size; a++) {
    for (let b = 0; b < size; b++) column[b] = half[a * size + b];
    forwardSolveInto(yy, size, column);
    for (let b = 0; b < size; b++) k[a * size + b] = column[b];
  }
  const gram = new Float64Array(size * size);
  for (let a = 0; a < size; a++) for (let b = 0; b < size; b++) for (let c = 0; c < size; c++) gram[a * size + b] += k[c * size + a] * k[c * size + b];
  const { values, vectors } = symmetricEigen(gram, size);
  let least = 0;
  values.forEach((v, i) => { if (v < values[least]) least = i; });
  // Back from the whitened coordinates: Ly' v = u.
  const v = Float64Array.from({ length: size }, (_, i) => vectors[i * size + least]);
  for (let a = size - 1; a >= 0; a--) {
    for (let b = a + 1; b < size; b++) v[a] -= yy[b * size + a] * v[b];
    v[a] /= yy[a * size + a];
  }
  const combined = Float64Array.from({ length: z.length - m }, (_, i) => v.reduce((s, c, a) => s + c * z[i + m - a], 0));
  return { lambda: Math.max(0, values[least]), combined };
}

/** The corner (p, q) of least p + q from which on the triangle j >= q + k - p is free of marks, but for as many as chance
 *  leaves there more than one time in twenty. */
function triangle(beyond: Uint8Array, maxAr: number, maxMa: number): { ar: number; ma: number } | null {
  return corner(maxAr, maxMa, (p, q, k, j) => k >= p && j >= q + (k - p), beyond);
}

function rectangle(beyond: Uint8Array, maxAr: number, maxMa: number): { ar: number; ma: number } | null {
  return corner(maxAr, maxMa, (p, q, k, j) => k >= p && j >= q, beyond);
}

function corner(maxAr: number, maxMa: number, inside: (p: number, q: number, k: number, j: number) => boolean, beyond: Uint8Array): { ar: number; ma: number } | null {
  for (let total = 0; total <= maxAr + maxMa - 3; total++) {
    let best: { ar: number; ma: number } | null = null, fewest = Infinity;
    for (let p = Math.min(total, maxAr - 1); p >= 0; p--) {
      const q = total - p;
      if (q > maxMa - 2) continue;
      let cells = 0, marks = 0;
      for (let k = 0; k <= maxAr; k++) for (let j = 0; j <= maxMa; j++) if (inside(p, q, k, j)) { cells++; marks += beyond[k * (maxMa + 1) + j]; }
      const own = beyond[p * (maxMa + 1) + q];
      if (own === 0 && marks <= byChance(cells, 0.05) && marks / cells < fewest) { fewest = marks / cells; best = { ar: p, ma: q }; }
    }
    if (best !== null) return best;
  }
  return null;
}

function sentenceOf(what: string, shape: string, suggests: { ar: number; ma: number } | null): string {
  return suggests === null
    ? `The ${what} show no ${shape} of zeros: they suggest no low order.`
    : `The ${what} are within chance in a ${shape} from AR ${suggests.ar}, MA ${suggests.ma} on: ARMA(${suggests.ar},${suggests.ma}) is a place to begin.`;
}

function whyNot(values: Float64Array, maxAr: number, maxMa: number): string | null {
  if (!Number.isInteger(maxAr) || maxAr < 1 || !Number.isInteger(maxMa) || maxMa < 1) throw new RangeError(`order table: largest orders are ${maxAr} and ${maxMa}, expected whole numbers from 1 on`);
  if (values.some(Number.isNaN)) return "the series has gaps: fill them first";
  if (values.length < 3 * (maxAr + maxMa + 2)) return `${values.length} values are too few for orders up to ${maxAr} and ${maxMa}`;
  return values.every((v) => v === values[0]) ? "all values are the same" : null;
}

function unavailableTable(maxAr: number, maxMa: number, why: string): OrderTable {
  return { status: "unavailable", note: why, maxAr, maxMa, values: new Float64Array(0), beyond: new Uint8Array(0), suggests: null, sentence: `The data cannot answer: ${why}.` };
}
