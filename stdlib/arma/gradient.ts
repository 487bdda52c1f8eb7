// The exact gradient of the likelihood, in reverse mode through the recursions of its value.
//
// Legend as in likelihood.ts: dS = -2 sum lambda_t (da_i w_{t-i} + db_j e_{t-j}) - lambda' dOmega lambda, lambda = theta(F)^-1 e
// (its first g entries), d log det = tr(K dG) + tr((G^-1 + Omega)^-1 dOmega).

import { gainBackInto } from "./gain.ts";
import { divideBackInto, lagDot, smallBackwardInto } from "./kernels.ts";
import { presampleBack } from "./presample.ts";
import { responseBack } from "./response.ts";
import { contractInto } from "./shape.ts";
import { residualsOf, scratch, type Data, type Work } from "./work.ts";

/** Gradient of the last value by the coefficients (phi, Phi, theta, Theta). Cost about that of a value. */
export function gradientInto(work: Work, data: Data, x: Float64Array, gradient: Float64Array): void {
  const { shape, g, aBar, bBar, omegaBar, lambda, er } = work;
  aBar.fill(0); bBar.fill(0); omegaBar.fill(0); gradient.fill(0);
  if (g > 0) {
    gainBackInto(work);
    responseBack(work.response, work.k, shape.ma.lags, work.b, bBar);
  }
  const weight = data.sigma2 === null ? work.nEffective / (2 * work.sum) : 1 / (2 * work.sigma2);
  if (work.small) smallSums(work, data, weight);
  else {
    if (lambda !== er) { lambda.set(er); divideBackInto(lambda, work.n, shape.ma.lags, work.b); }
    if (aBar.length > 0) addLagSums(aBar, shape.ar.lags, lambda, residualsOf(work, data), work.n, weight);
    addLagSums(bBar, shape.ma.lags, lambda, er, work.n, weight);
  }
  addOuter(work, lambda, weight);
  const integrated = data.integrated ?? data.gaps;
  if (integrated > 0) addIntegrated(work, data, integrated);
  presampleBack(work.pre, omegaBar, shape.ar, work.a, shape.ma, work.b, aBar, bBar);
  contractInto(gradient, shape.ar, x, 0, aBar);
  contractInto(gradient, shape.ma, x, shape.ar.plain.length + shape.ar.seasonal.length, bBar);
}

/** lambda and the lag sums of both sides in one sweep. A mean alone is taken off on the way. */
function smallSums(work: Work, data: Data, weight: number): void {
  const { aBar, bBar, b, sums } = work;
  const meanAlone = data.constant === true && data.columns.length === 1;
  const r = data.columns.length === 0 || meanAlone ? data.y : residualsOf(work, data);
  smallBackwardInto(work.lambda, work.er, r, meanAlone ? work.beta[0] * data.columns[0][0] : 0, work.n, b[0], b.length > 1 ? b[1] : 0, sums);
  for (let i = 0; i < aBar.length; i++) aBar[i] -= 2 * weight * sums[i];
  for (let j = 0; j < bBar.length; j++) bBar[j] -= 2 * weight * sums[2 + j];
}

/** Adds weight * d(quadratic form) by the coefficients of one side, whose lagged series is given. */
function addLagSums(bar: Float64Array, lags: Int32Array, lambda: Float64Array, lagged: Float64Array, n: number, weight: number): void {
  for (let i = 0; i < bar.length; i++) bar[i] -= 2 * weight * lagDot(lambda, lagged, n, lags[i]);
}

/** The same for what hangs on Omega. */
function addOuter(work: Work, lambda: Float64Array, weight: number): void {
  const { g, omegaBar } = work;
  const G = work.pre.g;
  for (let i = 0; i < g; i++) {
    const x = weight * lambda[i];
    omegaBar[i * G + i] -= x * lambda[i];
    for (let j = i + 1; j < g; j++) omegaBar[i * G + j] -= 2 * x * lambda[j];
  }
}

/** Half the log determinant of the information C about what is integrated out: tr(C^-1 dC) is a sum of quadratic forms of the columns of X C^(-T/2). */
function addIntegrated(work: Work, data: Data, count: number): void {
  const { n, shape, b, columnE, chol } = work;
  const delta = scratch(work, n);
  const m = data.columns.length;
  const series = new Float64Array(n), innovations = new Float64Array(n);
  const c = new Float64Array(count);
  for (let j = 0; j < count; j++) {
    // Column j of Lc^-T: solve Lc' c = unit_j.
    c.fill(0);
    c[j] = 1 / chol[j * m + j];
    for (let i = j - 1; i >= 0; i--) {
      let sum = 0;
      for (let t = i + 1; t <= j; t++) sum -= chol[t * m + i] * c[t];
      c[i] = sum / chol[i * m + i];
    }
    series.fill(0); innovations.fill(0);
    for (let i = 0; i <= j; i++) {
      const x = data.columns[i], ex = columnE[i], ci = c[i];
      for (let t = 0; t < n; t++) { series[t] += ci * x[t]; innovations[t] += ci * ex[t]; }
    }
    for (let t = 0; t < n; t++) delta[t] = innovations[t];
    divideBackInto(delta, n, shape.ma.lags, b);
    addLagSums(work.aBar, shape.ar.lags, delta, series, n, 0.5);
    addLagSums(work.bBar, shape.ma.lags, delta, innovations, n, 0.5);
    addOuter(work, delta, 0.5);
  }
}
