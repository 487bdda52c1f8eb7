// Ordinary least squares by Householder reflections with column exchanges.

/** A least-squares fit. Columns that are linear combinations of the others are left out and listed in `aliased`. */
export interface LeastSquares {
  /** Coefficients by column; 0 for an aliased column. */
  readonly beta: Float64Array;
  /** Standard errors with divisor rows - rank; NaN for an aliased column, or where no degrees of freedom are left. */
  readonly se: Float64Array;
  /** Residual sum of squares. */
  readonly rss: number;
  /** rss / (rows - rank); NaN where no degrees of freedom are left. */
  readonly sigma2: number;
  /** (X'X)^-1, cols x cols flat by rows; rows and columns of aliased columns are 0. */
  readonly inverse: Float64Array;
  readonly residuals: Float64Array;
  readonly fitted: Float64Array;
  readonly rank: number;
  /** rows - rank. */
  readonly df: number;
  /** Columns left out because the others explain them, in increasing order. */
  readonly aliased: readonly number[];
}

/** Fits y = X beta by least squares.
 *  @param x     rows x cols, flat by rows; read, not changed
 *  @param y     length rows
 *  @param tolerance  a column whose part not explained by the others is below this share of its length is aliased
 *  @throws RangeError if the sizes do not agree
 *  Cost 2 rows cols^2. Source: Golub & Van Loan (1996), section 5.4.1.
 *  @example leastSquares(Float64Array.of(1, 1, 1, 2, 1, 3), Float64Array.of(1, 2, 3), 3, 2).beta // [0, 1] */
export function leastSquares(x: Float64Array, y: Float64Array, rows: number, cols: number, tolerance = 1e-10): LeastSquares {
  if (x.length < rows * cols || y.length < rows) {
    throw new RangeError(`leastSquares: X holds ${x.length} numbers and y ${y.length}, expected ${rows * cols} and ${rows}`);
  }
  const q = transposed(x, rows, cols);
  const rhs = Float64Array.from(y.subarray(0, rows));
  const order = Array.from({ length: cols }, (_, j) => j);
  const diagonal = new Float64Array(cols);
  const rank = triangulate(q, rhs, rows, cols, order, diagonal, tolerance);
  const inner = backSubstitute(q, rhs, rows, rank, diagonal);
  const beta = new Float64Array(cols);
  for (let j = 0; j < rank; j++) beta[order[j]] = inner[j];
  const fitted = new Float64Array(rows), residuals = new Float64Array(rows);
  let rss = 0;
  for (let i = 0; i < rows; i++) {
    let sum = 0;
    for (let j = 0; j < cols; j++) sum += x[i * cols + j] * beta[j];
    fitted[i] = sum;
    residuals[i] = y[i] - sum;
    rss += residuals[i] ** 2;
  }
  const inverse = crossProductInverse(q, rows, rank, diagonal, order, cols);
  const df = rows - rank;
  const sigma2 = df > 0 ? rss / df : NaN;
  const aliased = order.slice(rank).sort((a, b) => a - b);
  const se = Float64Array.from({ length: cols }, (_, j) => aliased.includes(j) ? NaN : Math.sqrt(sigma2 * inverse[j * cols + j]));
  return { beta, se, rss, sigma2, inverse, residuals, fitted, rank, df, aliased };
}

/** Columns one after another, so that the reflections run along memory. */
function transposed(x: Float64Array, rows: number, cols: number): Float64Array {
  const q = new Float64Array(rows * cols);
  for (let i = 0; i < rows; i++) for (let j = 0; j < cols; j++) q[j * rows + i] = x[i * cols + j];
  return q;
}

/** Reduces the columns of q to upper triangular form (R above the diagonal, its diagonal apart), the same to rhs. */
function triangulate(q: Float64Array, rhs: Float64Array, rows: number, cols: number, order: number[], diagonal: Float64Array, tolerance: number): number {
  const original = new Float64Array(cols);
  for (let j = 0; j < cols; j++) original[j] = norm(q, j * rows, (j + 1) * rows);
  const limit = Math.min(rows, cols);
  for (let step = 0; step < limit; step++) {
    let best = -1, bestShare = tolerance;
    for (let j = step; j < cols; j++) {
      const share = original[j] > 0 ? norm(q, j * rows + step, (j + 1) * rows) / original[j] : 0;
      // An exchange is only worth its loss of order when the next column itself is nearly explained.
      if (j === step && share > 1e-4) { best = j; break; }
      if (share > bestShare) { best = j; bestShare = share; }
    }
    if (best < 0) return step;
    if (best !== step) exchange(q, rows, step, best, order, original);
    reflect(q, rhs, rows, cols, step, diagonal);
  }
  return limit;
}

function norm(a: Float64Array, from: number, to: number): number {
  let top = 0;
  for (let i = from; i < to; i++) top = Math.max(top, Math.abs(a[i]));
  if (top === 0) return 0;
  let sum = 0;
  for (let i = from; i < to; i++) sum += (a[i] / top) ** 2;
  return top * Math.sqrt(sum);
}

function exchange(q: Float64Array, rows: number, a: number, b: number, order: number[], original: Float64Array): void {
  for (let i = 0; i < rows; i++) {
    const kept = q[a * rows + i];
    q[a * rows + i] = q[b * rows + i];
    q[b * rows + i] = kept;
  }
  [order[a], order[b]] = [order[b], order[a]];
  [original[a], original[b]] = [original[b], original[a]];
}

/** One Householder step: column `step` is turned onto the axis, and with it all that stand behind and the right-hand side. */
function reflect(q: Float64Array, rhs: Float64Array, rows: number, cols: number, step: number, diagonal: Float64Array): void {
  const at = step * rows;
  const length = norm(q, at + step, at + rows);
  const pivot = q[at + step] >= 0 ? length : -length;
  for (let i = step; i < rows; i++) q[at + i] /= pivot;
  q[at + step] += 1;
  diagonal[step] = -pivot;
  const head = q[at + step];
  for (let j = step + 1; j <= cols; j++) {
    const target = j < cols ? q : rhs;
    const base = j < cols ? j * rows : 0;
    let sum = 0;
    for (let i = step; i < rows; i++) sum += q[at + i] * target[base + i];
    sum /= -head;
    for (let i = step; i < rows; i++) target[base + i] += sum * q[at + i];
  }
}

function backSubstitute(q: Float64Array, rhs: Float64Array, rows: number, rank: number, diagonal: Float64Array): Float64Array {
  const beta = new Float64Array(rank);
  for (let i = rank - 1; i >= 0; i--) {
    let sum = rhs[i];
    for (let j = i + 1; j < rank; j++) sum -= q[j * rows + i] * beta[j];
    beta[i] = sum / diagonal[i];
  }
  return beta;
}

/** (X'X)^-1 = R^-1 R^-T, put back into the caller's order of columns. */
function crossProductInverse(q: Float64Array, rows: number, rank: number, diagonal: Float64Array, order: readonly number[], cols: number): Float64Array {
  const inverseR = new Float64Array(rank * rank);
  for (let j = 0; j < rank; j++) {
    inverseR[j * rank + j] = 1 / diagonal[j];
    for (let i = j - 1; i >= 0; i--) {
      let sum = 0;
      for (let k = i + 1; k <= j; k++) sum += q[k * rows + i] * inverseR[k * rank + j];
      inverseR[i * rank + j] = -sum / diagonal[i];
    }
  }
  const inverse = new Float64Array(cols * cols);
  for (let a = 0; a < rank; a++) {
    for (let b = 0; b < rank; b++) {
      let sum = 0;
      for (let k = Math.max(a, b); k < rank; k++) sum += inverseR[a * rank + k] * inverseR[b * rank + k];
      inverse[order[a] * cols + order[b]] = sum;
    }
  }
  return inverse;
}
