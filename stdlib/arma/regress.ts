// Regression coefficients by generalised least squares inside the likelihood, and the innovations that remain.

import { choleskyInto, choleskySolveInto } from "../linear/cholesky.ts";
import { columnInto, constantColumnInto, correctInto, recursionInto } from "./innovations.ts";
import { dot, subtractColumn, subtractNumber, total } from "./kernels.ts";
import type { Data, Work } from "./work.ts";

/** Fills beta and the innovations, and `sum` with the sum of squares, the past's included; returns the log determinant of the
 *  information about what is integrated out, NaN when the columns are not independent. */
export function regressInto(work: Work, data: Data): number {
  const { n, a0, er, q, qy, chol, beta, columnA0, columnE } = work;
  const m = data.columns.length, constant = data.constant ? 1 : 0;
  if (m === 0) {
    recursionInto(er, data.y, work, n);
    work.sum = correctInto(er, work);
    work.sum += dot(er, er, n);
    return 0;
  }
  if (constant) constantColumnInto(work, data.columns[0][0]);
  for (let j = constant; j < m; j++) columnInto(work, data.columns[j], j);
  const flat = constant ? work.flat : n;
  const tail = recursionInto(a0, data.y, work, flat);
  for (let i = 0; i < m; i++) {
    for (let j = constant; j <= i; j++) q[i * m + j] = q[j * m + i] = dot(columnE[i], columnA0[j], n);
    if (i >= constant) qy[i] = dot(columnE[i], a0, n);
  }
  if (constant) {
    const level = work.level;
    for (let i = 0; i < m; i++) q[i] = q[i * m] = dot(columnE[i], columnA0[0], flat) + level * (i === 0 ? (n - flat) * level : total(columnE[i], flat, n));
    qy[0] = dot(columnE[0], a0, flat) + level * tail;
  }
  chol.set(q);
  if (choleskyInto(chol, m) >= 0) return NaN;
  beta.set(qy);
  choleskySolveInto(chol, m, beta);
  let squares = 0;
  if (constant) {
    subtractColumn(er, a0, columnA0[0], beta[0], flat);
    squares = subtractNumber(er, a0, beta[0] * work.level, flat, n);
  }
  for (let j = constant; j < m; j++) subtractColumn(er, j === 0 ? a0 : er, columnA0[j], beta[j], n);
  const past = correctInto(er, work);
  work.sum = past + (m === constant ? squares + dot(er, er, flat) : dot(er, er, n));
  let determinant = 0;
  for (let i = 0; i < (data.integrated ?? data.gaps); i++) determinant += 2 * Math.log(chol[i * m + i]);
  return determinant;
}
