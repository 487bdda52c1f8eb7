// Many sample paths at once: drawn, taken back to the units of the data, summed. One array holds them all, since thousands of
// small ones cost more than what is computed in them.

import { normalQuantile } from "../distributions/normal.ts";
import { seeded, stratified } from "./random.ts";
import { undoAt, type UndoStep } from "./undo.ts";

/** Sample paths, kept by period: all draws of one period stand together. */
export interface Paths {
  readonly count: number;
  readonly horizon: number;
  /** Draw i of period h (0 is the first) stands at h * count + i. */
  readonly values: Float64Array;
}

/** Paths behind a limit that has no closed form: enough for a 90% limit to about 2% of its distance from the median, and to 0.3%
 *  for sums along which the paths are drawn (`factorAlong`). */
export const pathCount = 4000;

/** @param fill  writes path i, of length horizon; called in the order of the paths */
export function pathsOf(count: number, horizon: number, fill: (path: Float64Array, i: number) => void): Paths {
  const values = new Float64Array(horizon * count), path = new Float64Array(horizon);
  for (let i = 0; i < count; i++) {
    fill(path, i);
    for (let h = 0; h < horizon; h++) values[h * count + i] = path[h];
  }
  return { count, horizon, values };
}

/** All draws of one period; a view, not a copy. */
export const drawsOf = ({ values, count }: Paths, h: number): Float64Array => values.subarray(h * count, (h + 1) * count);

/** One path by itself. */
export const pathAt = ({ values, count, horizon }: Paths, i: number): Float64Array => Float64Array.from({ length: horizon }, (_, h) => values[h * count + i]);

/** Sum of each path over periods from..end, half open. */
export function sumsOver(paths: Paths, from: number, end: number): Float64Array {
  const sums = new Float64Array(paths.count);
  for (let h = from; h < end; h++) { const draws = drawsOf(paths, h); for (let i = 0; i < sums.length; i++) sums[i] += draws[i]; }
  return sums;
}

/** Normal paths in pairs that mirror each other about the mean, so that means of linear things come out exact. Each of their
 *  numbers is stratified over the pairs.
 *  @param factor  horizon rows, flat: its product with its transpose is the covariance. Cost count / 2 times its size */
export function normalPaths(mean: Float64Array, factor: Float64Array, count: number, seed: number): Paths {
  const horizon = mean.length, columns = factor.length / horizon, pairs = Math.ceil(count / 2), e = normalRows(columns, pairs, seed);
  const values = new Float64Array(horizon * count), off = new Float64Array(pairs);
  for (let h = 0; h < horizon; h++) {
    off.fill(0);
    for (let k = 0; k < columns; k++) {
      const c = factor[h * columns + k], from = k * pairs;
      if (c !== 0) for (let i = 0; i < pairs; i++) off[i] += c * e[from + i];
    }
    for (let i = 0; i < count; i++) values[h * count + i] = i % 2 === 0 ? mean[h] + off[i >> 1] : mean[h] - off[i >> 1];
  }
  return { count, horizon, values };
}

/** Paths of a model that makes them of standard normal numbers, again in mirrored pairs. */
export function drawnPaths(draw: (normal: Float64Array, path: Float64Array) => void, count: number, horizon: number, seed: number): Paths {
  const pairs = Math.ceil(count / 2), rows = normalRows(horizon, pairs, seed), e = new Float64Array(horizon);
  return pathsOf(count, horizon, (path, i) => {
    for (let h = 0; h < horizon; h++) e[h] = i % 2 === 0 ? rows[h * pairs + (i >> 1)] : -e[h];
    draw(e, path);
  });
}

/** Stratified standard normal numbers in rows of `count`. */
function normalRows(rows: number, count: number, seed: number): Float64Array {
  const numbers = stratified(rows, count, seeded(seed));
  for (let at = 0; at < numbers.length; at++) numbers[at] = normalQuantile(numbers[at]);
  return numbers;
}

/** Undoes steps on all paths: from the modelled scale to the end's units. The paths given are used up. */
export function undoPaths(steps: readonly UndoStep[], paths: Paths): Paths {
  for (const step of steps) {
    for (let h = 0; h < paths.horizon; h++) {
      const draws = drawsOf(paths, h);
      if (step.undo !== "difference") { for (let i = 0; i < draws.length; i++) draws[i] = undoAt(step, h, draws[i]); continue; }
      const before = h < step.lag ? null : drawsOf(paths, h - step.lag);
      for (let i = 0; i < draws.length; i++) draws[i] += before === null ? step.tail[h] : before[i];
    }
  }
  return paths;
}
