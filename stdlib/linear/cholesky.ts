// Cholesky factors of small dense symmetric matrices, flat by rows.

/** Overwrites the lower triangle of `a` (size x size, flat by rows) with L, a = L L'; the upper triangle is left alone.
 *  @returns the index of the first pivot that is not positive, or -1 when the factor is complete.
 *  Cost size^3 / 3 flops. */
export function choleskyInto(a: Float64Array, size: number): number {
  for (let i = 0; i < size; i++) {
    const row = i * size;
    for (let j = 0; j <= i; j++) {
      const other = j * size;
      let s0 = 0, s1 = 0, s2 = 0, s3 = 0, k = 0;
      for (; k + 3 < j; k += 4) {
        s0 += a[row + k] * a[other + k]; s1 += a[row + k + 1] * a[other + k + 1];
        s2 += a[row + k + 2] * a[other + k + 2]; s3 += a[row + k + 3] * a[other + k + 3];
      }
      for (; k < j; k++) s0 += a[row + k] * a[other + k];
      const sum = a[row + j] - ((s0 + s1) + (s2 + s3));
      if (i === j) {
        if (!(sum > 0)) return i;
        a[row + i] = Math.sqrt(sum);
      } else a[row + j] = sum / a[other + j];
    }
  }
  return -1;
}

/** Solves L L' x = b in place, L from `choleskyInto`. */
export function choleskySolveInto(l: Float64Array, size: number, b: Float64Array): void {
  forwardSolveInto(l, size, b);
  for (let i = size - 1; i >= 0; i--) {
    let sum = b[i];
    for (let k = i + 1; k < size; k++) sum -= l[k * size + i] * b[k];
    b[i] = sum / l[i * size + i];
  }
}

/** Solves L x = b in place. */
export function forwardSolveInto(l: Float64Array, size: number, b: Float64Array): void {
  for (let i = 0; i < size; i++) {
    const row = i * size;
    let sum = b[i];
    for (let k = 0; k < i; k++) sum -= l[row + k] * b[k];
    b[i] = sum / l[row + i];
  }
}

/** Inverse of a symmetric positive definite matrix, or null when it is not (numerically) positive definite.
 *  Rows and columns are first scaled to a unit diagonal, so that units do not decide what counts as singular.
 *  @param tolerance  smallest squared pivot of the scaled matrix that is accepted, in (0, 1) */
export function inversePositive(a: Float64Array, size: number, tolerance = 1e-13): Float64Array | null {
  const scale = new Float64Array(size);
  for (let i = 0; i < size; i++) {
    const d = a[i * size + i];
    if (!(d > 0) || !Number.isFinite(d)) return null;
    scale[i] = 1 / Math.sqrt(d);
  }
  const l = new Float64Array(size * size);
  for (let i = 0; i < size; i++) for (let j = 0; j < size; j++) l[i * size + j] = a[i * size + j] * scale[i] * scale[j];
  if (choleskyInto(l, size) >= 0) return null;
  for (let i = 0; i < size; i++) if (l[i * size + i] ** 2 < tolerance) return null;
  const inverse = new Float64Array(size * size);
  const column = new Float64Array(size);
  for (let j = 0; j < size; j++) {
    column.fill(0);
    column[j] = 1;
    choleskySolveInto(l, size, column);
    for (let i = 0; i < size; i++) inverse[i * size + j] = column[i] * scale[i] * scale[j];
  }
  return inverse;
}
