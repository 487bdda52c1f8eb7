// From what was asked to numbers: the levels, their differences, the regressors, which coefficients are free.

import { interventionColumns } from "../forecast/interventions.ts";
import { cut } from "../series/cut.ts";
import { defaultSeasonLength } from "../series/every.ts";
import { positionIn } from "../series/calendar.ts";
import { isSeries, type Series } from "../series/series.ts";
import { heldValue, readHeld, readLags } from "./lags.ts";
import type { FitOptions, Regressor } from "./model.ts";
import { makeShape, type Shape } from "./shape.ts";

/** A fit's question in numbers. Level arrays run over `levels`; the first `lost` of them are used up by the differences. */
export interface Prepared {
  readonly options: FitOptions;
  /** The fitted series, after any window. */
  readonly series: Series;
  /** The series before its trailing `difference` steps. */
  readonly levels: Series;
  /** Lags of the trailing differences, in the order taken. */
  readonly differences: readonly number[];
  /** Coefficients of 1 - sum delta_i B^i, the product of the differences; index i - 1. */
  readonly delta: Float64Array;
  readonly lost: number;
  readonly shape: Shape;
  /** phi, Phi, theta, Theta; NaN where free. */
  readonly held: Float64Array;
  readonly seasonLength: number;
  readonly hasMean: boolean;
  readonly heldMean: number;
  /** Regressor columns in levels, mean not among them. */
  readonly names: readonly string[];
  readonly columns: readonly Float64Array[];
  readonly heldBeta: Float64Array;
  /** NaN when estimated. */
  readonly heldSigma2: number;
}

/** @throws RangeError in words an analyst understands */
export function prepare(options: FitOptions): Prepared {
  if (!isSeries(options.series)) throw new RangeError("fit: series is not a series; give the name of a load or transform cell");
  const series = cut(options.series, options.window);
  const { levels, differences } = undifferenced(series);
  const delta = differencePolynomial(differences);
  const ar = readLags(options.ar, "ar"), ma = readLags(options.ma, "ma");
  const seasonalAr = readLags(options.season?.ar, "season.ar"), seasonalMa = readLags(options.season?.ma, "season.ma");
  const seasonal = seasonalAr.length + seasonalMa.length > 0;
  const seasonLength = seasonal ? readSeasonLength(options.season?.length, series) : 0;
  const hold = options.hold ?? {};
  const held = new Float64Array(ar.length + seasonalAr.length + ma.length + seasonalMa.length);
  let at = 0;
  for (const part of [readHeld(hold.phi, ar, "phi"), readHeld(hold.seasonalPhi, seasonalAr, "seasonalPhi"), readHeld(hold.theta, ma, "theta"), readHeld(hold.seasonalTheta, seasonalMa, "seasonalTheta")]) { held.set(part, at); at += part.length; }
  const heldMean = heldValue(hold.mean, "mean");
  const { names, columns } = readRegressors(options.regressors ?? {}, levels);
  const heldBeta = Float64Array.from(names, name => heldValue(hold.beta?.[name], `beta.${name}`));
  for (const name of Object.keys(hold.beta ?? {})) {
    if (!names.includes(name)) throw new RangeError(`fit: hold.beta names ${name}, and there is no such regressor${names.length > 0 ? `; the regressors are ${names.join(", ")}` : ""}`);
  }
  const heldSigma2 = heldValue(hold.sigma2, "sigma2");
  if (heldSigma2 <= 0) throw new RangeError(`fit: hold.sigma2 is ${heldSigma2}; a variance is above 0`);
  return {
    options, series, levels, differences, delta, lost: delta.length, held, seasonLength, names, columns, heldBeta, heldSigma2, heldMean,
    shape: makeShape(ar, seasonalAr, ma, seasonalMa, Math.max(1, seasonLength)),
    hasMean: options.mean ?? (!Number.isNaN(heldMean) || !series.steps.some(s => s.step === "difference")),
  };
}

/** The series before the differences that end its steps, and their lags. */
export function undifferenced(series: Series): { levels: Series; differences: number[] } {
  const differences: number[] = [];
  let levels = series;
  for (let i = series.steps.length - 1; i >= 0; i--) {
    const step = series.steps[i];
    if (step.step !== "difference") break;
    differences.unshift(step.lag);
    levels = step.before;
  }
  return { levels, differences };
}

/** @example differencePolynomial([1, 12]) // 1 - (1 - B)(1 - B^12): lags 1, 12, 13 with 1, 1, -1 */
export function differencePolynomial(lags: readonly number[]): Float64Array {
  let c = Float64Array.of(1);
  for (const lag of lags) {
    const next = new Float64Array(c.length + lag);
    for (let i = 0; i < c.length; i++) { next[i] += c[i]; next[i + lag] -= c[i]; }
    c = next;
  }
  return c.slice(1).map(v => -v || 0);
}

function readSeasonLength(length: number | undefined, series: Series): number {
  const found = length ?? defaultSeasonLength(series.every);
  if (found === null) throw new RangeError(`fit: season has no length, and none follows from the spacing of ${series.name || "the series"}; write season: {length: 12, …}`);
  if (!Number.isInteger(found) || found < 2) throw new RangeError(`fit: season.length is ${String(found)}; a season has 2 or more whole periods`);
  return found;
}

function readRegressors(regressors: Readonly<Record<string, Regressor>>, levels: Series): { names: string[]; columns: Float64Array[] } {
  const names: string[] = [], columns: Float64Array[] = [];
  for (const [name, regressor] of Object.entries(regressors)) {
    if (isSeries(regressor)) {
      names.push(name);
      columns.push(aligned(regressor, levels, name));
    } else if (typeof regressor === "object" && regressor !== null && "intervention" in regressor) {
      const made = interventionColumns(regressor, name, levels.start, levels.every, levels.n);
      names.push(...made.names);
      columns.push(...made.columns);
    } else if (name === "intervention") throw new RangeError(`fit: regressors holds one intervention without a name; give it one, as in {effect: ${String(regressor)}(…)}`);
    else throw new RangeError(`fit: the regressor ${name} is neither a series nor an intervention such as pulse("2020-04")`);
  }
  return { names, columns };
}

/** A regressor's values at the times of the levels.
 *  @throws RangeError naming the first time at which the regressor is missing and the series is not */
function aligned(regressor: Series, levels: Series, name: string): Float64Array {
  if (regressor.every !== levels.every) {
    throw new RangeError(`fit: the regressor ${name} is spaced ${regressor.every ?? "by number"} and the series ${levels.every ?? "by number"}; bring it to the same spacing with aggregate`);
  }
  const offset = positionIn(regressor, levels.start);
  return Float64Array.from({ length: levels.n }, (_, t) => {
    const v = t + offset >= 0 && t + offset < regressor.n ? regressor.values[t + offset] : NaN;
    if (Number.isNaN(v) && !Number.isNaN(levels.values[t])) {
      throw new RangeError(`fit: the regressor ${name} has no value at ${levels.times[t]}, where ${levels.name || "the series"} has one; fill it, or cut the window to where both are known`);
    }
    return v;
  });
}

/** Differences of a regressor; what they take away altogether (a season's harmonics, say) is 0, not the dust of rounding. */
export function differencedRegressor(delta: Float64Array, x: Float64Array): Float64Array {
  const out = differencedBy(delta, x);
  let size = 0, left = 0;
  for (const v of x) size = Math.max(size, Math.abs(v) || 0);
  for (const v of out) left = Math.max(left, Math.abs(v) || 0);
  return left <= 1e-13 * size * (1 + delta.length) ? out.fill(0) : out;
}

/** Differences of a level array; length n - lost. */
export function differencedBy(delta: Float64Array, x: Float64Array): Float64Array {
  const lost = delta.length;
  const out = x.slice(lost);
  for (let i = 1; i <= lost; i++) {
    const c = delta[i - 1], from = lost - i;
    if (c !== 0) for (let t = 0; t < out.length; t++) out[t] -= c * x[t + from];
  }
  return out;
}
