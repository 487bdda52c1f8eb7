// Eigenvalues and eigenvectors of small symmetric matrices.

/** All eigenvalues, and the eigenvectors as columns, of a symmetric matrix, flat by rows; in no particular order.
 *  Cyclic Jacobi rotations (Golub & Van Loan 1996, section 8.4): slow for large sizes, accurate to the last digits for small ones.
 *  @example symmetricEigen(Float64Array.of(2, 1, 1, 2), 2).values // 3 and 1 */
export function symmetricEigen(matrix: Float64Array, size: number): { readonly values: Float64Array; readonly vectors: Float64Array } {
  const a = Float64Array.from(matrix), v = new Float64Array(size * size);
  for (let i = 0; i < size; i++) v[i * size + i] = 1;
  for (let sweep = 0; sweep < 60; sweep++) {
    let off = 0, all = 0;
    for (let i = 0; i < size; i++) for (let j = 0; j < size; j++) { all += a[i * size + j] ** 2; if (i !== j) off += a[i * size + j] ** 2; }
    if (off <= 1e-30 * all) break;
    for (let p = 0; p < size - 1; p++) for (let q = p + 1; q < size; q++) rotate(a, v, size, p, q);
  }
  return { values: Float64Array.from({ length: size }, (_, i) => a[i * size + i]), vectors: v };
}

/** Turns rows and columns p and q so that their entry becomes 0. */
function rotate(a: Float64Array, v: Float64Array, size: number, p: number, q: number): void {
  const apq = a[p * size + q];
  if (apq === 0) return;
  const tau = (a[q * size + q] - a[p * size + p]) / (2 * apq);
  const t = (tau >= 0 ? 1 : -1) / (Math.abs(tau) + Math.sqrt(1 + tau * tau)), c = 1 / Math.sqrt(1 + t * t), s = t * c;
  for (let k = 0; k < size; k++) {
    const kp = a[k * size + p], kq = a[k * size + q];
    a[k * size + p] = c * kp - s * kq;
    a[k * size + q] = s * kp + c * kq;
  }
  for (let k = 0; k < size; k++) {
    const pk = a[p * size + k], qk = a[q * size + k];
    a[p * size + k] = c * pk - s * qk;
    a[q * size + k] = s * pk + c * qk;
    const vp = v[k * size + p], vq = v[k * size + q];
    v[k * size + p] = c * vp - s * vq;
    v[k * size + q] = s * vp + c * vq;
  }
}
