// What a diagnostic test is given: a series, bare numbers, or a fit, whose residuals are then tested with fewer degrees of freedom.

import type { Fit, Held, Lags } from "../arma/model.ts";
import type { Series } from "../series/series.ts";
import { isSeries, valuesOf } from "../series/series.ts";

export type Subject = Series | Fit | ArrayLike<number>;

export interface Tested {
  readonly values: Float64Array;
  /** The residuals or the series where times are known, else null. */
  readonly series: Series | null;
  /** Free ARMA coefficients: what the degrees of freedom of a portmanteau test are reduced by. */
  readonly modelDf: number;
  /** "the residuals of ferry" or "the series". */
  readonly words: string;
}

/** Reads the values to test from what was given. */
export function testedOf(x: Subject): Tested {
  if (isFit(x)) return { values: x.residuals.values, series: x.residuals, modelDf: freeArmaCoefficients(x), words: "the residuals" };
  return { values: valuesOf(x), series: isSeries(x) ? x : null, modelDf: 0, words: "the series" };
}

/** Whether a value is an estimated model. */
export function isFit(x: unknown): x is Fit {
  return typeof x === "object" && x !== null && "residuals" in x && "phi" in x && "sigma2" in x && isSeries((x as Fit).residuals);
}

/** Coefficients of the ARMA part that were estimated, seasonal ones included; held ones, the mean and regressors do not count. */
export function freeArmaCoefficients(fit: Fit): number {
  const { ar = 0, ma = 0, season, hold = {} } = fit.options;
  return free(ar, hold.phi) + free(ma, hold.theta) + free(season?.ar ?? 0, hold.seasonalPhi) + free(season?.ma ?? 0, hold.seasonalTheta);
}

function free(lags: Lags, held: readonly Held[] = []): number {
  const list = typeof lags === "number" ? Array.from({ length: lags }, (_, i) => i + 1) : lags;
  return list.filter((lag) => typeof held[lag - 1] !== "number").length;
}

/** The values without gaps, and how many there were. */
export function observedOf(values: Float64Array): Float64Array {
  return values.filter((v) => !Number.isNaN(v));
}
