// Fewer points for a long line, such that the picture stays the same: what the pixels cannot show is left out.

/** Positions to keep of a line of values in time order: in each of `width / 2` stretches its first, last, smallest and largest
 *  value, and one missing value where there is any, so that every extreme and every gap is still drawn.
 *  @param width  pixels across; lines of up to 2 points a pixel are kept whole
 *  @returns      increasing positions. Cost O(n) */
export function thin(values: ArrayLike<number>, width: number): Int32Array {
  const n = values.length;
  const stretches = Math.max(1, Math.floor(width / 2));
  if (n <= 4 * stretches) return Int32Array.from({ length: n }, (_, i) => i);
  const kept: number[] = [];
  for (let s = 0; s < stretches; s++) {
    const from = Math.floor((s * n) / stretches), end = Math.floor(((s + 1) * n) / stretches);
    let low = -1, high = -1, gap = -1;
    for (let i = from; i < end; i++) {
      const v = values[i];
      if (Number.isNaN(v)) { if (gap < 0) gap = i; continue; }
      if (low < 0 || v < values[low]) low = i;
      if (high < 0 || v > values[high]) high = i;
    }
    const wanted = [from, low, high, gap, end - 1].filter((i) => i >= 0).sort((a, b) => a - b);
    for (const i of wanted) if (kept.length === 0 || kept[kept.length - 1] !== i) kept.push(i);
  }
  return Int32Array.from(kept);
}

/** The values at some positions. */
export function pick<T>(values: ArrayLike<T>, positions: ArrayLike<number>): T[] {
  return Array.from(positions, (i) => values[i]);
}

/** The numbers at some positions, as doubles. */
export function pickNumbers(values: ArrayLike<number>, positions: ArrayLike<number>): Float64Array {
  return Float64Array.from(positions, (i) => values[i]);
}
