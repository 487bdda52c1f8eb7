// The starting states of an additive smoothing model that fit best with given weights.

import { choleskyInto, choleskySolveInto } from "../../linear/cholesky.ts";
import type { SmoothingForm, States0, Weights } from "./innovations.ts";
import type { Likelihood } from "./likelihood.ts";

/** The starting states that make the sum of squared errors smallest: it is quadratic in them, so that its slope and its
 *  curvature anywhere tell where. Season figures add up to 0; NaN where the data cannot tell.
 *  @param likelihood  of the same values and form
 *  Cost n * states + states^3. */
export function bestStates(likelihood: Likelihood, y: Float64Array, form: SmoothingForm, weights: Weights): States0 {
  const m = form.season === "none" ? 0 : form.length, trended = form.trend === "additive" ? 1 : 0, free = 1 + trended + m;
  likelihood.value({ ...weights, level: 0, trend: 0, seasonal: new Float64Array(m) });
  const slope = likelihood.slope(), half = likelihood.sum / (2 * likelihood.count);
  const matrix = curvatureOfStates(y, form, weights), x = new Float64Array(free);
  x[0] = -half * slope.level;
  if (trended) x[1] = -half * slope.trend;
  for (let j = 0; j < m; j++) x[1 + trended + j] = -half * slope.seasonal[j];
  solveInto(x, matrix, m);
  const seasonal = x.slice(1 + trended), centre = m > 0 ? seasonal.reduce((a, b) => a + b, 0) / m : 0;
  return { level: x[0] + centre, trend: trended ? x[1] : 0, seasonal: seasonal.map((s) => s - centre) };
}

/** Half the second derivatives of the sum of squared errors by level, trend (where there is one) and season figures, flat by rows.
 *  Backwards in time: an error is h'x less its value, x the states before it, which become (F - g h')x, so that the matrix P of all later errors
 *  becomes F'PF - h w' - w h', where u = Pg and w = F'u - h (1 + g'u) / 2. Only level, trend and the season in turn stand
 *  in h and g: a period costs a few multiplications a state, gaps or not. */
export function curvatureOfStates(y: Float64Array, form: SmoothingForm, { alpha, beta, gamma, phi: damping }: Weights): Float64Array {
  const m = form.season === "none" ? 0 : form.length, trended = form.trend === "additive" ? 1 : 0, phi = trended ? damping : 0;
  let ll = 0, lb = 0, bb = 0;
  const ofLevel = new Float64Array(m), ofTrend = new Float64Array(m), among = new Float64Array(m * m);
  for (let t = y.length - 1, k = m > 0 ? t % m : 0; t >= 0; t--) {
    const row = k * m, seen = y[t] === y[t];
    if (!seen) {
      bb = phi * phi * (ll + 2 * lb + bb); lb = phi * (ll + lb);
      for (let i = 0; i < m; i++) ofTrend[i] = phi * (ofLevel[i] + ofTrend[i]);
    } else {
      const ls = m > 0 ? ofLevel[k] : 0, bs = m > 0 ? ofTrend[k] : 0, ss = m > 0 ? among[row + k] : 0;
      const ul = alpha * ll + beta * lb + gamma * ls, ub = alpha * lb + beta * bb + gamma * bs, us = alpha * ls + beta * bs + gamma * ss;
      const share = (1 + alpha * ul + beta * ub + gamma * us) / 2, wl = ul - share, wb = phi * (ul + ub - share), ws = us - share;
      bb = phi * (phi * (ll + 2 * lb + bb) - 2 * wb); lb = phi * (ll + lb - wl) - wb; ll -= 2 * wl;
      for (let i = 0, across = k; i < m; i++, across += m) {
        const u = alpha * ofLevel[i] + beta * ofTrend[i] + gamma * among[row + i], level = ofLevel[i] - u;
        ofLevel[i] = level;
        ofTrend[i] = phi * (level + ofTrend[i]);
        among[across] = among[row + i] -= u;
      }
      if (m > 0) { ofLevel[k] = ls - ws - wl; ofTrend[k] = phi * (ls + bs - ws) - wb; among[row + k] = ss - 2 * ws; }
    }
    if (k-- === 0) k = m - 1;
  }
  const first = 1 + trended, free = first + m, p = new Float64Array(free * free);
  p[0] = ll;
  if (trended) { p[1] = p[free] = lb; p[free + 1] = bb; }
  for (let i = 0; i < m; i++) {
    p[first + i] = p[(first + i) * free] = ofLevel[i];
    if (trended) p[free + first + i] = p[(first + i) * free + 1] = ofTrend[i];
    for (let j = 0; j < m; j++) p[(first + i) * free + first + j] = among[i * m + j];
  }
  return p;
}

/** Solves matrix x = b in place of b, rows and columns scaled to a unit diagonal; the matrix is used up.
 *  @param m  how many of the last places are season figures: what shifts all of them is what the level takes, and so is set by their sum */
function solveInto(b: Float64Array, matrix: Float64Array, m: number): void {
  const free = b.length, first = free - m;
  let mean = 0;
  for (let i = first; i < free; i++) mean += matrix[i * free + i] / m;
  for (let i = first; i < free; i++) for (let j = first; j < free; j++) matrix[i * free + j] += mean / m;
  const scale = Float64Array.from({ length: free }, (_, i) => 1 / Math.sqrt(matrix[i * free + i] || 1));
  for (let i = 0; i < free; i++) {
    // A hair on the diagonal settles a state that the data do not tell apart from the others.
    for (let j = 0; j <= i; j++) matrix[i * free + j] = matrix[i * free + j] * scale[i] * scale[j] + (i === j ? 1e-12 : 0);
    b[i] *= scale[i];
  }
  if (choleskyInto(matrix, free) >= 0) { b.fill(NaN); return; }
  choleskySolveInto(matrix, free, b);
  for (let i = 0; i < free; i++) b[i] *= scale[i];
}
