// What fits of smaller models to the same series tell the search for a larger one's maximum.

import { coefficientsOf } from "./coefficients.ts";
import { readLags } from "./lags.ts";
import type { Fit } from "./model.ts";
import type { Shape } from "./shape.ts";

/** Fits by exact maximum likelihood of one series with one mean and the same regressors, nothing held. */
export interface Smaller {
  add(fit: Fit): void;
  /** The best fit that a model of this shape contains, as the model's coefficients phi, Phi, theta, Theta; null for none. */
  within(shape: Shape): Float64Array | null;
  /** The fit with just these lags; null for none. */
  of(shape: Shape): Float64Array | null;
}

/** None at first. Cost of a question: one pass over what was added. */
export function smallerFits(): Smaller {
  const known: { readonly fit: Fit; readonly lags: readonly (readonly number[])[] }[] = [];
  const best = (shape: Shape, suits: (own: readonly number[], wanted: Int32Array, step: number) => boolean): Float64Array | null => {
    const wanted = [shape.ar.plain, shape.ar.seasonal, shape.ma.plain, shape.ma.seasonal];
    let found: Fit | null = null;
    for (const { fit, lags } of known) {
      if ((found === null || fit.logLikelihood > found.logLikelihood) && lags.every((own, i) => suits(own, wanted[i], i % 2 === 1 ? shape.season : 1))) found = fit;
    }
    return found === null ? null : coefficientsOf(found, shape);
  };
  return {
    add(fit) {
      const { ar, ma, season } = fit.options;
      known.push({ fit, lags: [readLags(ar, "ar"), readLags(season?.ar, "season.ar"), readLags(ma, "ma"), readLags(season?.ma, "season.ma")] });
    },
    within: shape => best(shape, (own, wanted, step) => own.length <= wanted.length && own.every(lag => wanted.includes(lag * step))),
    of: shape => best(shape, (own, wanted, step) => own.length === wanted.length && own.every((lag, i) => lag * step === wanted[i])),
  };
}
