// What a forecast is, and what can make one: the data types of this room.

import type { Fit, Note } from "../arma/model.ts";
import type { Series } from "../series/series.ts";
import type { EstimatedSmoothing } from "./smoothing/estimateSmoothing.ts";
import type { SmoothingHold } from "./smoothing/searchSpace.ts";

/** A naive or smoothing rule of comparison, tied to a series, as plain data. Parameters that were estimated stand in `parameters`. */
export interface Rule {
  readonly rule: "naive" | "seasonalNaive" | "drift" | "average" | "smoothing" | "combine";
  readonly label: string;
  readonly series: Series;
  readonly length?: number;
  readonly trend?: "none" | "additive" | "multiplicative";
  readonly season?: "none" | "additive" | "multiplicative";
  readonly damped?: boolean;
  readonly members?: readonly Forecaster[];
  readonly parameters?: Readonly<Record<string, number>>;
  /** How errors enter a smoothing rule; multiplicative where trend or season multiplies, unless asked otherwise. */
  readonly error?: "additive" | "multiplicative";
  /** Weights and starting states that were held, not estimated. */
  readonly hold?: SmoothingHold;
  /** The estimated smoothing model: weights, states before the first value and after the last. */
  readonly smoothing?: EstimatedSmoothing;
}

export type Forecaster = Fit | Rule;

/** Limits at one confidence level, each of the horizon's length, data units. */
export interface Band { readonly level: number; readonly low: Float64Array; readonly high: Float64Array }

export interface Total {
  readonly from: string; readonly to: string;
  readonly mean: number; readonly median: number; readonly se: number;
  readonly bands: readonly { readonly level: number; readonly low: number; readonly high: number }[];
  /** Periods of the span that were observed, not forecast. */
  readonly observed: number;
  /** Against the same span a year before, where all of that was observed: a share, 0.05 is 5% more. */
  readonly growth?: Growth;
}

/** Growth on the year before, as a share: 0.05 is 5% more. */
export interface Growth {
  readonly time: string;
  readonly median: number;
  readonly bands: readonly { readonly level: number; readonly low: number; readonly high: number }[];
}

/** How likely the values lie above a threshold. */
export interface Passing {
  readonly threshold: number;
  /** Probability for each period by itself. */
  readonly above: Float64Array;
  /** Probability that at least one period of the horizon does. */
  readonly ever: number;
}

/** What is forecast, in data units unless said otherwise; arrays have the horizon's length. */
export interface Figures {
  readonly mean: Float64Array; readonly median: Float64Array;
  /** Standard error on the scale before differencing, on which errors are normal: of the logs after a log, of the data where no step is a log or Box-Cox. */
  readonly se: Float64Array;
  /** Standard deviation of each period's forecast. */
  readonly sd: Float64Array;
  readonly bands: readonly Band[];
  readonly totals: readonly Total[];
  /** By period, on the year before; empty where the spacing has no whole number of periods a year. */
  readonly growth: readonly Growth[];
  readonly passing: readonly Passing[];
}

/** One of several futures of the regressors. */
export interface Scenario extends Figures {
  readonly label: string;
  /** Against the first scenario; null for the first itself. */
  readonly difference: Difference | null;
}

/** One scenario less another, data units. */
export interface Difference {
  /** Label of the other. */
  readonly against: string;
  readonly mean: Float64Array; readonly median: Float64Array;
  readonly bands: readonly Band[];
  readonly totals: readonly Omit<Total, "observed" | "growth">[];
}

export interface Forecast extends Figures {
  readonly label: string;
  /** Name and unit of the series in data units. */
  readonly name: string; readonly unit: string; readonly every: string | null;
  /** Last observed period used: forecasts start one after. */
  readonly origin: string;
  readonly horizon: number;
  readonly times: readonly string[];
  /** Sample paths in data units, as many as were asked for. */
  readonly paths: readonly Float64Array[];
  /** By the labels asked for; the forecast's own figures are those of the first. Empty where none was asked for. */
  readonly scenarios: Readonly<Record<string, Scenario>>;
  /** What the forecast turns into far ahead, in a sentence. */
  readonly shape: string;
  /** The observed series in data units up to the origin, and what came after it where there are later data. */
  readonly history: Series;
  readonly heldOut: Series | null;
  /** What was assumed, and what cannot be undone, in words. */
  readonly notes: readonly Note[];
}

export interface ForecastOptions {
  readonly horizon: number;
  readonly levels?: readonly number[];
  readonly regressors?: Readonly<Record<string, Series>>;
  /** Several futures of the regressors, by label, each as `regressors`; what `regressors` gives holds in all of them. */
  readonly scenarios?: Readonly<Record<string, Readonly<Record<string, Series>>>>;
  /** Spans to total, each `{from, to}` in times, or "year" for each calendar year touched, or an ISO 8601 year text. */
  readonly totals?: string | readonly (string | { readonly from: string; readonly to: string })[];
  /** How the bands are made; each says what it assumes in `notes`. */
  readonly bands?: BandsHow;
  readonly seed?: number;
  /** One value or several, in data units, whose passing gets a probability. */
  readonly threshold?: number | readonly number[];
  /** How many sample paths to give (0). */
  readonly paths?: number;
  /** A longer version of the loaded series, in data units: what came after the origin is shown as held out. */
  readonly data?: Series;
}

export type BandsHow = "plugIn" | "simulated" | "calibrated";
