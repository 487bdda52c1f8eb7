// The same parameters put to other data: for rolling origins that refit only now and then.

import type { Series } from "../series/series.ts";
import { fit as estimateFit } from "./fit.ts";
import type { Fit, Held } from "./model.ts";

/** Nothing is estimated: coefficients, mean, regression and variance are the fit's; residuals and likelihood are of `series`.
 *  @param series  on the fit's scale, with its steps */
export function filterWith(fit: Fit, series: Series): Fit {
  const all = (c: Float64Array): Held[] => Array.from(c);
  const held = estimateFit({
    ...fit.options, series, window: undefined, method: "exact", mean: fit.options.mean ?? (fit.mean !== 0 || undefined),
    hold: { phi: all(fit.phi), theta: all(fit.theta), seasonalPhi: all(fit.seasonalPhi), seasonalTheta: all(fit.seasonalTheta), mean: fit.mean, beta: fit.beta, sigma2: fit.sigma2 },
  }, { standardErrors: false });
  return { ...held, options: { ...fit.options, series, window: undefined }, label: fit.label, k: fit.k, method: fit.method, converged: fit.converged };
}
