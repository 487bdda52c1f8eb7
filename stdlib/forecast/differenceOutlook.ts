// What one future of the regressors makes against another: the same shocks befall both.

import type { Fit } from "../arma/model.ts";
import { predict } from "../arma/predict.ts";
import { regressionCovariance } from "../arma/regressionCovariance.ts";
import type { Series } from "../series/series.ts";
import { futureColumns } from "./fitPredictive.ts";
import { outlookOf, sampleOutlook, type Outlook } from "./outlook.ts";
import { normalPaths, undoPaths, type Paths } from "./paths.ts";
import { diagonalRoots, factorOf } from "./predictive.ts";
import { keptSteps } from "./reach.ts";
import { isLinear, undoOf, type UndoStep } from "./undo.ts";

type Future = Readonly<Record<string, Series>>;

/** Later less earlier scenario as a distribution in data units. The shocks are the same for both, so that they cancel where the
 *  steps are linear, and act in proportion to the level after a log; what is uncertain is the coefficients of the regressors.
 *  Closed form where the steps are linear, seeded draws otherwise.
 *  @throws RangeError where the data do not tell the coefficients apart */
export function differenceOutlook(fit: Fit, horizon: number, later: Future, earlier: Future, seed: number, draws: number): Outlook {
  const { steps, times } = undoOf(fit.series, keptSteps(fit), horizon);
  const a = futureColumns(fit, times, later), b = futureColumns(fit, times, earlier), names = Object.keys(a);
  const apart = names.map((name) => a[name].map((x, h) => x - b[name][h])), moving = names.map((_, j) => j).filter((j) => apart[j].some((x) => x !== 0));
  const coefficients = regressionCovariance(fit, moving.map((j) => names[j]));
  if (coefficients === null) throw new RangeError(`forecast: the data do not tell the coefficients of ${moving.map((j) => names[j]).join(", ")} apart, so no difference between scenarios can be given; leave a regressor out`);
  const mean = new Float64Array(horizon), covariance = new Float64Array(horizon * horizon), m = moving.length;
  moving.forEach((j) => { for (let h = 0; h < horizon; h++) mean[h] += (fit.beta[names[j]] ?? 0) * apart[j][h]; });
  for (let h = 0; h < horizon; h++) for (let k = 0; k < horizon; k++) {
    let sum = 0;
    for (let i = 0; i < m; i++) for (let j = 0; j < m; j++) sum += apart[moving[i]][h] * coefficients[i * m + j] * apart[moving[j]][k];
    covariance[h * horizon + k] = sum;
  }
  const effect = { mean, covariance: () => covariance, se: diagonalRoots(covariance, horizon) };
  if (steps.every(isLinear)) return outlookOf(effect, steps.map(withoutLevel), seed);
  const base = predict(fit, horizon, b), factor = factorOf(base.covariance(), horizon), ofEffect = factorOf(covariance, horizon);
  const paths = (count: number, from: number): Paths => {
    const low = normalPaths(base.mean, factor, count, from), shift = normalPaths(mean, ofEffect, count, from + 1_000_003);
    for (let at = 0; at < shift.values.length; at++) shift.values[at] += low.values[at];
    return lessen(undoPaths(steps, shift), undoPaths(steps, low));
  };
  return sampleOutlook(paths, draws, seed, effect.se);
}

/** Draw by draw. */
export const lessen = (later: Paths, earlier: Paths): Paths => ({ ...later, values: later.values.map((x, at) => x - earlier.values[at]) });

/** A linear step without what it adds: what it does to a difference. */
function withoutLevel(step: UndoStep): UndoStep {
  if (step.undo === "affine") return { ...step, add: step.add.map(() => 0) };
  return step.undo === "difference" ? { ...step, tail: step.tail.map(() => 0) } : step;
}
