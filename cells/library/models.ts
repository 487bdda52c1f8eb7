// Functions of models: theory, simulation, rules of comparison, interventions.

import {
  easterEffect, exponentialSmoothing, halfLife, harmonics, impulseResponse, interpolate, isFit, levelShift, longRun, modelRoots, piWeights, psi, pulse, ramp, rule, simulate, temporaryChange, theoreticalAcf, theoreticalPacf,
  theoreticalSpectrum, tradingDays,
  valuesOf, type Fit, type Forecaster, type SmoothingWeights,
} from "../../stdlib/index.ts";
import type { LibraryFunction } from "../kind.ts";
import { define, fit, forecasterOf, number, numbers, optional, param, series, settings, time, whole, type Param } from "./define.ts";

const theory = "models", rules = "rules", regressors = "regressors";

/** A fit, or the coefficients of a model as {phi, theta, seasonalPhi, seasonalTheta, seasonLength, sigma2, mean, differences}. */
type Coefficients = Exclude<Parameters<typeof impulseResponse>[0], Fit>;

export const modelFunctions: readonly LibraryFunction[] = [
  define(theory, "psi", [model("model"), whole("n")], "Weights of present and past shocks, psi[0] = 1, up to lag n.", (m, n) => psi(m, n)),
  define(theory, "piWeights", [model("model"), whole("n", 1)], "Weights of past values in the autoregressive form; [0] is lag 1.", (m, n) => piWeights(m, n)),
  define(theory, "impulseResponse", [model("model"), whole("n")], "Effect of a shock of 1 on the levels, differences undone, from lag 0.", (m, n) => impulseResponse(m, n)),
  define(theory, "longRun", [model("model")], "Mean and variance that the modelled series settles at, as {mean, variance}.", (m) => longRun(m)),
  define(theory, "halfLife", [model("model")], "Periods until half of a shock's effect is gone.", (m) => halfLife(m)),
  define(theory, "roots", [model("model")], "Roots in B of both sides multiplied out, as {ar, ma} of {re, im, modulus}, by increasing modulus.", (m) => modelRoots(m)),
  define(theory, "theoreticalAcf", [model("model"), whole("lags")], "Autocorrelations that a model implies, from lag 0.", (m, lags) => theoreticalAcf(m, lags)),
  define(theory, "theoreticalPacf", [model("model"), whole("lags")], "Partial autocorrelations that a model implies, from lag 0.", (m, lags) => theoreticalPacf(m, lags)),
  define(theory, "theoreticalSpectrum", [model("model"), numbers("frequencies")], "Spectral density that a model implies, at frequencies in radians a period, from 0 to pi.", (m, frequencies) => theoreticalSpectrum(m, valuesOf(frequencies))),
  define(theory, "interpolate", [fit()], "Missing values of the fitted series under the model, with their standard errors.", (m) => interpolate(m)),
  define(theory, "simulate", [model("model"), whole("n", 1, 10_000_000), optional(whole("seed"))], "A simulated series of n values of a model, in its stationary state; the same seed (1 unless given) gives the same values.", (m, n, seed = 1) => simulate(m, n, seed)),
  define(rules, "rule.naive", [series()], "The last value, for ever.", (s) => rule.naive(s)),
  define(rules, "rule.seasonalNaive", [series(), optional(whole("length", 2))], "The last season, again and again.", (s, length) => rule.seasonalNaive(s, length)),
  define(rules, "rule.drift", [series()], "The last value and the mean step between first and last.", (s) => rule.drift(s)),
  define(rules, "rule.average", [series()], "The mean of all values.", (s) => rule.average(s)),
  define(rules, "rule.smoothing", [series(), optional(settings("options", ["trend", "season", "damped", "length", "error", "alpha", "beta", "gamma", "phi", "level0", "trend0", "seasonal0"]))], "Exponential smoothing: trend and season \"none\", \"additive\" or \"multiplicative\"; weights are estimated unless given.", (s, options = {}) => rule.smoothing(s, options as Parameters<typeof rule.smoothing>[1])),
  define(rules, "exponentialSmoothing", [series(), settings("weights", ["alpha", "beta", "gamma", "damped", "level0", "trend0", "seasonal0", "season"]), whole("horizon", 1)], "The smoothing recursions at given weights and starting states: fitted values, last states, forecasts with standard errors.", (s, weights, horizon) => {
    if (typeof weights.alpha !== "number" || typeof weights.level0 !== "number") throw new RangeError("exponentialSmoothing: give at least alpha and level0, as in {alpha: 0.3, level0: 100}");
    return exponentialSmoothing(s.values, weights as unknown as SmoothingWeights, horizon);
  }),
  define(rules, "rule.combine", [forecasters("models")], "The mean of several models' forecasts.", (models) => rule.combine(models)),
  define(regressors, "pulse", [time("at")], "1 in one period, 0 elsewhere.", (at) => pulse(at)),
  define(regressors, "levelShift", [time("at")], "0 before a period, 1 from it on.", (at) => levelShift(at)),
  define(regressors, "temporaryChange", [time("at"), optional(number("decay"))], "1 in one period, dying away by a factor (0.7 unless given) each period after it.", (at, decay) => temporaryChange(at, decay)),
  define(regressors, "ramp", [time("from"), time("to")], "0 up to a period, a straight line to 1 at another, 1 after it.", (from, to) => ramp(from, to)),
  define(regressors, "harmonics", [number("length"), whole("count", 1)], "Pairs of sine and cosine whose periods are the length, half of it, a third and so on.", (length, count) => harmonics(length, count)),
  define(regressors, "tradingDays", [], "How many of each weekday a period has, less its Sundays.", () => tradingDays()),
  define(regressors, "easterEffect", [whole("days", 1, 60)], "Share, in each period, of the days before Easter Sunday.", (days) => easterEffect(days)),
];

const lists = ["phi", "theta", "seasonalPhi", "seasonalTheta"] as const, singles = ["seasonLength", "sigma2", "mean"] as const;

/** A misspelt key or a bare number would silently be another model: each is refused with what to write. */
function model(name: string): Param<Fit | Coefficients> {
  return {
    ...param(name, "a fit, or coefficients such as {phi: [0.5], theta: [0.3]}", (v): v is Fit | Coefficients => isFit(v) || (typeof v === "object" && v !== null && lists.some((key) => key in v) && faultIn(v as Record<string, unknown>) === null)),
    slip: (v) => typeof v === "object" && v !== null && !isFit(v) && lists.some((key) => key in v) ? faultIn(v as Record<string, unknown>) : null,
  };
}

/** What is wrong with given coefficients, in words; null where nothing is. */
function faultIn(given: Readonly<Record<string, unknown>>): string | null {
  const finite = (v: unknown): boolean => typeof v === "number" && Number.isFinite(v);
  for (const [key, value] of Object.entries(given)) {
    if ((lists as readonly string[]).includes(key)) {
      if (typeof value === "number") return `write ${key} as a list from lag 1 on, as in ${key}: [${value}]`;
      if (value !== undefined && value !== null && !(Array.isArray(value) || value instanceof Float64Array)) return `write ${key} as a list from lag 1 on, as in ${key}: [0.5]`;
      if (Array.from((value ?? []) as ArrayLike<unknown>).some((v) => !finite(v))) return `give finite numbers in ${key}, 0 for a lag that is left out`;
    } else if ((singles as readonly string[]).includes(key)) {
      if (!finite(value) || (key === "sigma2" && (value as number) <= 0)) return `give ${key === "sigma2" ? "a variance above 0" : "a number"} for ${key}, which is ${String(value)}`;
    } else if (key !== "differences") return `leave out ${key}, which is no part of a model${key === "length" ? " (the season's length is seasonLength)" : ""}: that is made of ${[...lists, ...singles, "differences"].join(", ")}`;
  }
  return null;
}

function forecasters(name: string): Param<readonly Forecaster[]> {
  return {
    name, expected: "a list of fits and rules",
    read: (value) => {
      const list = Array.isArray(value) ? value : typeof value === "object" && value !== null && forecasterOf(value) === null ? Object.values(value) : null;
      const models = list?.map((one: unknown) => forecasterOf(one)) ?? [null];
      return models.length === 0 || models.includes(null) ? null : { value: models.map((one) => one?.value as Forecaster) };
    },
  };
}
