// Missing values of the sample: their conditional mean and standard error given everything observed, before and after.

import { choleskyInto, choleskySolveInto } from "../linear/cholesky.ts";
import { knownOf } from "./known.ts";
import { valueAt } from "./likelihood.ts";
import { makeWork } from "./work.ts";
import type { Fit } from "./model.ts";
import { bridge, pulse } from "./numbers.ts";
import { differencedBy } from "./prepare.ts";

export interface Interpolation {
  readonly times: readonly string[];
  /** Positions in the series before its differences. */
  readonly positions: readonly number[];
  /** On the scale before the differences. */
  readonly mean: Float64Array;
  readonly se: Float64Array;
}

/** Each missing value is the coefficient of a pulse (Ljung 1982): generalised least squares gives mean and covariance, at the
 *  fit's parameters.
 *  Cost: gaps * n + gaps^2 n. */
export function interpolate(fit: Fit): Interpolation {
  const known = knownOf(fit, true);
  const { prepared, rest, part, from, x } = known;
  const { levels, delta, shape } = prepared;
  const to = rest.length, inside = rest;
  const gaps: number[] = [];
  inside.forEach((v, t) => { if (Number.isNaN(v)) gaps.push(t); });
  const bridged = bridge(inside);
  const y = differencedBy(delta, bridged);
  const columns = gaps.map(t => pulse(t, to, delta));
  const mean = new Float64Array(gaps.length), se = new Float64Array(gaps.length);
  if (gaps.length > 0) {
    const data = { n: y.length, y, columns, gaps: gaps.length, sigma2: fit.sigma2 }, work = makeWork(shape, data);
    const value = valueAt(work, data, x);
    const l = Float64Array.from(work.q), m = gaps.length, unit = new Float64Array(m);
    if (!Number.isFinite(value) || choleskyInto(l, m) >= 0) throw new RangeError("interpolate: the missing values are not determined by the observed ones (a whole season or stretch is missing)");
    for (let j = 0; j < m; j++) {
      // The pulse's coefficient is what the bridge was too high by.
      mean[j] = bridged[gaps[j]] - work.beta[j] + part[gaps[j]];
      unit.fill(0);
      unit[j] = 1;
      choleskySolveInto(l, m, unit);
      se[j] = Math.sqrt(fit.sigma2 * unit[j]);
    }
  }
  return { times: gaps.map(t => levels.times[from + t]), positions: gaps.map(t => from + t), mean, se };
}
