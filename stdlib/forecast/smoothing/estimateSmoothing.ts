// Exponential smoothing with its weights and starting states estimated by maximum likelihood.

import { innovationsFilter, minusTwiceLogLikelihood, type Filtered, type SmoothingForm, type SmoothingState } from "./innovations.ts";
import { minimise } from "./minimise.ts";
import { bestStates, openingStates, type States0 } from "./startingStates.ts";

/** Values to hold instead of estimating them; weights of the innovations form. */
export interface SmoothingHold {
  readonly alpha?: number; readonly beta?: number; readonly gamma?: number; readonly phi?: number;
  readonly level0?: number; readonly trend0?: number; readonly seasonal0?: readonly number[];
}

export interface EstimatedSmoothing {
  readonly form: SmoothingForm;
  /** Weights, and the states before the first value. */
  readonly start: SmoothingState;
  readonly filtered: Filtered;
  /** Free numbers estimated, sigma2 counted. */
  readonly k: number;
  readonly converged: boolean;
}

/** Season lengths up to which every starting figure is estimated with the weights; beyond it the season starts from the opening stretch. */
const longestFreeSeason = 60;

/** Maximum likelihood within the usual region: 0 < alpha < 1, 0 < beta < alpha, 0 < gamma < 1 - alpha, 0.8 <= phi <= 0.98.
 *  Starting states of an additive model are concentrated out; those of a multiplicative one are searched with the weights.
 *  @param damped  whether the trend dies away
 *  @param near    where to start from (the estimates of an earlier origin, say): weights, and starting states where the sample starts at the same time
 *  @throws RangeError in words where the series is too short, or not positive and something multiplies
 *  Source: Hyndman, Koehler, Ord & Snyder (2008), chapter 5. */
export function estimateSmoothing(y: Float64Array, form: SmoothingForm, damped: boolean, hold: SmoothingHold = {}, near?: SmoothingHold & Partial<States0>): EstimatedSmoothing {
  const m = form.season === "none" ? 0 : form.length, observed = y.reduce((count, v) => count + (Number.isNaN(v) ? 0 : 1), 0);
  checkData(y, form, m, observed, hold);
  const additive = form.error === "additive" && form.trend !== "multiplicative" && form.season !== "multiplicative";
  // Scale-free, and about 0 where only sums enter: the search sees numbers near 1 whatever the unit and level.
  const total = (f: (v: number) => number): number => y.reduce((sum, v) => sum + (Number.isNaN(v) ? 0 : f(v)), 0);
  const shift = additive && hold.level0 === undefined ? total((v) => v) / observed : 0, unit = total((v) => Math.abs(v - shift)) / observed || 1;
  const scaled = y.map((v) => (v - shift) / unit), space = new Space(form, m, damped, hold, unit);
  const opening = near?.level !== undefined && near.seasonal !== undefined ? nearStates(near as States0, form, shift, unit) : openingStates(scaled, form);
  const concentrated = additive && !space.statesHeld && m <= longestFreeSeason;
  const statesOf = (weights: Weights, x: Float64Array): States0 => concentrated ? bestStates(scaled, form, weights) : space.states(x, opening);
  const objective = (x: Float64Array): number => {
    const weights = space.weights(x), states = statesOf(weights, x);
    return minusTwiceLogLikelihood(scaled, form, { ...weights, ...states });
  };
  let best: { at: Float64Array; value: number; converged: boolean } | null = null;
  for (const first of space.starts(near)) {
    const start = concentrated ? first : Float64Array.from([...first, ...space.stateStart()]);
    let found = minimise(objective, start);
    // Where a weight has run to the end of its range the curvature learnt on the way misleads: forget it and go on.
    for (let again = 0; again < 3; again++) {
      const further = minimise(objective, found.at);
      const gained = found.value - further.value;
      found = further;
      if (!(gained > 1e-5)) break;
    }
    if (Number.isFinite(found.value) && (best === null || found.value < best.value)) best = found;
  }
  if (best === null) throw new RangeError("smoothing: no weights were found with which every one-step forecast stays positive; try an additive season, or a log before it");
  const weights = space.weights(best.at), states = statesOf(weights, best.at);
  const start: SmoothingState = { ...weights, level: states.level * unit + shift, trend: form.trend === "multiplicative" ? states.trend : states.trend * unit,
    seasonal: form.season === "multiplicative" ? states.seasonal : states.seasonal.map((s) => s * unit) };
  const freeStates = space.statesHeld ? 0 : 1 + (form.trend === "none" ? 0 : 1) + Math.max(0, m - 1);
  return { form, start, filtered: innovationsFilter(y, form, start), k: space.freeWeights + freeStates + 1, converged: best.converged };
}

function nearStates({ level, trend, seasonal }: States0, form: SmoothingForm, shift: number, unit: number): States0 {
  return { level: (level - shift) / unit, trend: form.trend === "multiplicative" ? trend : trend / unit, seasonal: form.season === "multiplicative" ? seasonal : seasonal.map((s) => s / unit) };
}

function checkData(y: Float64Array, form: SmoothingForm, m: number, observed: number, hold: SmoothingHold): void {
  const held = hold.level0 !== undefined, needed = held ? 1 : Math.max(4, m > 0 ? m + 5 : 0);
  if (observed < needed) throw new RangeError(`smoothing: ${observed} value${observed === 1 ? " is" : "s are"} observed; this form needs at least ${needed}`);
  if (m > 0 && hold.seasonal0 !== undefined && hold.seasonal0.length !== m) throw new RangeError(`smoothing: seasonal0 has ${hold.seasonal0.length} figures, expected ${m}`);
  const multiplies = form.error === "multiplicative" || form.trend === "multiplicative" || form.season === "multiplicative";
  const bad = multiplies ? y.findIndex((v) => v <= 0) : -1;
  if (bad >= 0) throw new RangeError(`smoothing: value ${bad + 1} is ${y[bad]}; a multiplicative trend, season or error needs positive values. Use the additive form`);
}

type Weights = Pick<SmoothingState, "alpha" | "beta" | "gamma" | "phi">;

/** The place of each searched number: free weights on a logistic scale first, then (for multiplicative models) the states. */
class Space {
  readonly #form: SmoothingForm;
  readonly #m: number;
  readonly #hold: SmoothingHold;
  readonly #unit: number;
  readonly #free: ("alpha" | "beta" | "gamma" | "phi")[] = [];
  readonly #damped: boolean;

  constructor(form: SmoothingForm, m: number, damped: boolean, hold: SmoothingHold, unit: number) {
    this.#form = form; this.#m = m; this.#hold = hold; this.#unit = unit; this.#damped = damped && form.trend !== "none";
    if (hold.alpha === undefined) this.#free.push("alpha");
    if (form.trend !== "none" && hold.beta === undefined) this.#free.push("beta");
    if (m > 0 && hold.gamma === undefined) this.#free.push("gamma");
    if (this.#damped && hold.phi === undefined) this.#free.push("phi");
  }

  get freeWeights(): number { return this.#free.length; }
  get statesHeld(): boolean { return this.#hold.level0 !== undefined; }

  weights(x: Float64Array): Weights {
    const raw = (name: "alpha" | "beta" | "gamma" | "phi"): number => 1 / (1 + Math.exp(-x[this.#free.indexOf(name)]));
    const has = (name: "alpha" | "beta" | "gamma" | "phi"): boolean => this.#free.includes(name);
    const alpha = has("alpha") ? 1e-4 + 0.9998 * raw("alpha") : (this.#hold.alpha ?? 0);
    const beta = has("beta") ? alpha * (1e-4 + 0.9998 * raw("beta")) : this.#form.trend === "none" ? 0 : (this.#hold.beta ?? 0);
    const gamma = has("gamma") ? (1 - alpha) * (1e-4 + 0.9998 * raw("gamma")) : this.#m === 0 ? 0 : (this.#hold.gamma ?? 0);
    const phi = has("phi") ? 0.8 + 0.18 * raw("phi") : this.#damped ? (this.#hold.phi ?? 1) : 1;
    return { alpha, beta, gamma, phi };
  }

  /** Two starts, since the surface often has a slow and a fast maximum; one where a near one is known. */
  starts(near?: SmoothingHold): Float64Array[] {
    const logit = (p: number): number => { const q = Math.min(0.9995, Math.max(0.0005, p)); return Math.log(q / (1 - q)); };
    if (near?.alpha !== undefined) {
      const { alpha, beta = 0.1 * alpha, gamma = 0.1 * (1 - alpha), phi = 0.95 } = near;
      const at = { alpha: logit(alpha), beta: logit(beta / alpha), gamma: logit(gamma / (1 - alpha)), phi: logit((phi - 0.8) / 0.18) };
      return [Float64Array.from(this.#free, (name) => at[name])];
    }
    return [{ alpha: logit(0.5), beta: logit(0.1), gamma: logit(0.1), phi: logit(0.9) }, { alpha: logit(0.1), beta: logit(0.2), gamma: logit(0.05), phi: logit(0.9) }]
      .map((at) => Float64Array.from(this.#free, (name) => at[name]));
  }

  /** Searched states as departures from the opening ones, in shares of a season's or level's size. */
  stateStart(): Float64Array {
    if (this.statesHeld) return new Float64Array(0);
    const seasonal = this.#m > 0 && this.#m <= 24 ? this.#m - 1 : 0;
    return new Float64Array(1 + (this.#form.trend === "none" ? 0 : 1) + seasonal);
  }

  states(x: Float64Array, opening: States0): States0 {
    if (this.statesHeld) return this.#heldStates();
    const at = this.#free.length, trended = this.#form.trend !== "none", product = this.#form.season === "multiplicative";
    const level = opening.level * Math.exp(x[at] * 0.1);
    const trend = !trended ? 0 : this.#form.trend === "multiplicative" ? opening.trend * Math.exp(x[at + 1] * 0.01) : opening.trend + 0.01 * x[at + 1];
    const seasonal = Float64Array.from(opening.seasonal), first = at + (trended ? 2 : 1);
    if (x.length > first) {
      for (let j = 0; j < this.#m - 1; j++) seasonal[j] = product ? seasonal[j] * Math.exp(x[first + j] * 0.1) : seasonal[j] + 0.1 * x[first + j];
      const sum = seasonal.reduce((a, b) => a + b, 0);
      for (let j = 0; j < this.#m; j++) seasonal[j] = product ? (seasonal[j] * this.#m) / sum : seasonal[j] - sum / this.#m;
    }
    return { level, trend, seasonal };
  }

  #heldStates(): States0 {
    const { level0 = 0, trend0, seasonal0 = [] } = this.#hold, { trend, season } = this.#form, unit = this.#unit;
    return { level: level0 / unit, trend: trend === "multiplicative" ? (trend0 ?? 1) : (trend0 ?? 0) / unit, seasonal: Float64Array.from(seasonal0, (s) => (season === "multiplicative" ? s : s / unit)) };
  }
}
