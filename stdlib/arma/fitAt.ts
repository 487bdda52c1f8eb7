// The same model estimated again on another cut of the data.

import type { Series } from "../series/series.ts";
import { coefficientsOf } from "./coefficients.ts";
import { fit as estimateFit, type FitHow } from "./fit.ts";
import type { Fit } from "./model.ts";
import { prepare } from "./prepare.ts";

/** Starts from the fit's own estimates: neighbouring samples have neighbouring maxima, and a few passes do. Standard errors are
 *  left out, as in every rolling refit.
 *  @param series  on the fit's scale, with its steps
 *  @param how     `residuals: false` leaves them out too */
export function fitAt(fit: Fit, series: Series, how: Pick<FitHow, "residuals"> = {}): Fit {
  const options = { ...fit.options, series, window: undefined, label: fit.label };
  return estimateFit(options, { ...how, standardErrors: false, near: coefficientsOf(fit, prepare(options).shape) });
}
