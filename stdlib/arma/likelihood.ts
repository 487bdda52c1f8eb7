// Exact Gaussian likelihood of a multiplicative seasonal ARMA process, complete or with a few gaps.
//
// Legend: a0 = theta(B)^-1 phi(B) w from zero pre-sample values; u the pre-sample's part in the first g equations, covariance
// Omega (presample.ts); V its response in the innovations, G = V'V (response.ts). Then w has the density of a0 ~ N(0, I + V Omega V'):
//   sum of squares  S = e'e + u'Omega^-1 u at e = a0 - V u, u = K V'a0, K = (Omega^-1 + G)^-1 (gain.ts; Omega may be singular)
//   determinant     |I + L'G L|, Omega = L L'
// sigma2 is concentrated out, or held. Regression coefficients enter by generalised least squares inside (regress.ts). A missing
// value is a column with a pulse whose coefficient is integrated out (flat): exactly the density of what was observed, and with
// differences exactly that of the later levels given the first ones (diffuse start). With the mean's and the regressors' coefficients
// integrated out as well it is the restricted likelihood.
// Sources: Newbold (1974); Ljung & Box (1979); Harvey & Phillips (1979) for the concentration; Harville (1974) for the restricted one.

import { gainInto } from "./gain.ts";
import { presampleInto } from "./presample.ts";
import { regressInto } from "./regress.ts";
import { responseInto } from "./response.ts";
import { expandInto } from "./shape.ts";
import type { Data, Work } from "./work.ts";

/** Negative log-likelihood at coefficients x (phi, Phi, theta, Theta), beta and sigma2 at their maximisers.
 *  Infinity where the autoregressive side is not stationary. The moving-average side must not be explosive (roots inside the
 *  circle make the recursion grow: see filter.ts for those). Cost n * (lags) a column + g^3. */
export function valueAt(work: Work, data: Data, x: Float64Array): number {
  const { shape, n } = work;
  work.f = Infinity;
  work.rKnown = false;
  expandInto(work.a, shape.ar, x, 0);
  expandInto(work.b, shape.ma, x, shape.ar.plain.length + shape.ar.seasonal.length);
  if (!presampleInto(work.pre, shape.ar, work.a, shape.ma, work.b)) return Infinity;
  responseInto(work.response, shape.ma.lags, work.b);
  const logDet = gainInto(work);
  if (!Number.isFinite(logDet)) return Infinity;
  const columnDet = regressInto(work, data);
  if (!Number.isFinite(columnDet)) return Infinity;
  work.logDet = logDet + columnDet;
  const ne = work.nEffective = n - (data.integrated ?? data.gaps), free = data.sigma2 === null;
  work.sigma2 = free ? work.sum / ne : data.sigma2!;
  work.f = 0.5 * (ne * Math.log(2 * Math.PI * work.sigma2) + work.logDet + (free ? ne : work.sum / work.sigma2));
  if (Number.isNaN(work.f)) work.f = Infinity;
  return work.f;
}
