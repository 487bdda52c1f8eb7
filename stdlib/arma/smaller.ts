// What fits of smaller models to the same series tell the search for a larger one's maximum.

import { coefficientsOf } from "./coefficients.ts";
import { readLags } from "./lags.ts";
import type { Fit } from "./model.ts";
import type { Shape } from "./shape.ts";

export interface Smaller {
  /** The best fit that a model of this shape contains, as the model's coefficients phi, Phi, theta, Theta; null for none. */
  within(shape: Shape): Float64Array | null;
  /** The fit with just these lags; null for none. */
  of(shape: Shape): Float64Array | null;
}

/** @param fits  by maximum likelihood, of the same series with the same mean and regressors, nothing held */
export function smallerOf(fits: readonly Fit[]): Smaller {
  const best = (shape: Shape, suits: (fit: Fit) => boolean): Float64Array | null => {
    let found: Fit | null = null;
    for (const fit of fits) if (suits(fit) && (found === null || fit.logLikelihood > found.logLikelihood)) found = fit;
    return found === null ? null : coefficientsOf(found, shape);
  };
  return {
    within: shape => best(shape, fit => factorsOf(fit, shape).every(({ lags, c, step }) => c.every((v, i) => v === 0 || lags.includes((i + 1) * step)))),
    of: shape => best(shape, fit => factorsOf(fit, shape).every(({ lags, asked, step }) => asked.length === lags.length && asked.every((lag, i) => lag * step === lags[i]))),
  };
}

function factorsOf({ phi, theta, seasonalPhi, seasonalTheta, options }: Fit, { ar, ma, season }: Shape) {
  return [
    { lags: ar.plain, c: phi, asked: readLags(options.ar, "ar"), step: 1 }, { lags: ar.seasonal, c: seasonalPhi, asked: readLags(options.season?.ar, "season.ar"), step: season },
    { lags: ma.plain, c: theta, asked: readLags(options.ma, "ma"), step: 1 }, { lags: ma.seasonal, c: seasonalTheta, asked: readLags(options.season?.ma, "season.ma"), step: season },
  ];
}
