// What a model is asked to be, and what an estimated one is: the data types of this room.

import type { Series } from "../series/series.ts";
import type { Intervention } from "../forecast/interventions.ts";

/** All lags up to a number, or just the lags of a list. */
export type Lags = number | readonly number[];

/** A coefficient held at a value, or left to be estimated. */
export type Held = number | "free";

/** Coefficients held at values: dense by lag (index 0 is lag 1; seasonal ones counted in lengths), shorter = free beyond. */
export interface Hold {
  readonly phi?: readonly Held[];
  readonly theta?: readonly Held[];
  readonly seasonalPhi?: readonly Held[];
  readonly seasonalTheta?: readonly Held[];
  readonly mean?: Held;
  readonly beta?: Readonly<Record<string, Held>>;
  readonly sigma2?: Held;
}

export interface Season {
  /** Periods a season; default from the spacing of the series (12 for months, 4 for quarters, 7 for days, 52 for weeks, 24 for hours). */
  readonly length?: number;
  readonly ar?: Lags;
  readonly ma?: Lags;
}

export type Method = "exact" | "restricted" | "conditional" | "yuleWalker" | "burg" | "leastSquares";

/** A regressor in levels: a series (aligned by time), or an intervention or calendar effect that extends by itself. */
export type Regressor = Series | Intervention;

export interface FitOptions {
  readonly series: Series;
  readonly ar?: Lags;
  readonly ma?: Lags;
  readonly season?: Season;
  /** Process mean of the differenced series (a drift); default true unless the steps include `difference`. */
  readonly mean?: boolean;
  readonly regressors?: Readonly<Record<string, Regressor>>;
  readonly hold?: Hold;
  readonly method?: Method;
  /** Cuts the series it is given, both ends included; later data count as held out. */
  readonly window?: { readonly from?: string; readonly to?: string };
  readonly label?: string;
}

/** A complex root of a lag polynomial in B. */
export interface Root { readonly re: number; readonly im: number; readonly modulus: number }

/** Standard errors, in the shape of the coefficients; NaN where held or not available (the reason is in `notes`). */
export interface StandardErrors {
  readonly phi: Float64Array; readonly theta: Float64Array;
  readonly seasonalPhi: Float64Array; readonly seasonalTheta: Float64Array;
  readonly mean: number;
  readonly beta: Readonly<Record<string, number>>;
}

/** An estimated model. phi(B) Phi(B^s) (w - mean) = theta(B) Theta(B^s) e, plus signs in theta. Coefficient arrays start at lag 1. */
export interface Fit {
  readonly label: string;
  readonly phi: Float64Array;
  readonly theta: Float64Array;
  /** Dense, index 0 is one season length. */
  readonly seasonalPhi: Float64Array;
  readonly seasonalTheta: Float64Array;
  /** 0 when there is no seasonal part. */
  readonly seasonLength: number;
  /** Process mean of the differenced series (0 when not in the model). */
  readonly mean: number;
  /** mean * (1 - sum phi) * (1 - sum Phi): the equation's intercept. */
  readonly constant: number;
  readonly beta: Readonly<Record<string, number>>;
  readonly se: StandardErrors;
  readonly seRobust: StandardErrors;
  /** Maximum likelihood estimate, or the value it was held at. */
  readonly sigma2: number;
  /** Exact Gaussian, of the differenced series. */
  readonly logLikelihood: number;
  readonly aic: number; readonly aicc: number; readonly bic: number;
  /** Free parameters, sigma2 counted. */
  readonly k: number;
  /** Observations used, after differencing. */
  readonly n: number;
  /** One-step errors over the square root of their relative variance; NaN where nothing was observed. */
  readonly residuals: Series;
  readonly roots: { readonly ar: readonly Root[]; readonly ma: readonly Root[] };
  readonly converged: boolean;
  /** Flags and remarks in words: what was found, and what to do. */
  readonly notes: readonly Note[];
  readonly method: Method;
  /** The series that was fitted, after any window, with its steps. */
  readonly series: Series;
  /** What was asked: enough to fit the same model to other data. */
  readonly options: FitOptions;
}

export interface Note { readonly code: string; readonly tone: "caution" | "note"; readonly text: string }
