// The place of each number that the search for a smoothing model moves: free weights first, then the starting states of a model that multiplies.

import type { SmoothingForm, SmoothingState, States0, Weights } from "./innovations.ts";

/** Values to hold instead of estimating them; weights of the innovations form. */
export interface SmoothingHold {
  readonly alpha?: number; readonly beta?: number; readonly gamma?: number; readonly phi?: number;
  readonly level0?: number; readonly trend0?: number; readonly seasonal0?: readonly number[];
}

type Name = keyof Weights;

/** Ranges: of alpha, of beta as a share of alpha, of gamma as a share of 1 - alpha, of phi. */
const lowest = { alpha: 1e-4, beta: 1e-4, gamma: 1e-4, phi: 0.8 }, width = { alpha: 0.9998, beta: 0.9998, gamma: 0.9998, phi: 0.18 };
/** What one unit of search is worth: a share of the level, of a season figure, of the growth (or of the mean absolute value, for what adds). */
const ofLevel = 0.4, ofSeason = 0.4, ofTrend = 0.04;

/** A weight is lowest + width sin(x)^2: smooth, never outside, and an end of its range is reached at a finite x, where the slope by x is 0. */
export class SearchSpace {
  readonly #form: SmoothingForm;
  readonly #m: number;
  readonly #hold: SmoothingHold;
  readonly #unit: number;
  readonly #free: Name[] = [];
  readonly #damped: boolean;

  /** @param unit  what the values were divided by; held states are given before that */
  constructor(form: SmoothingForm, damped: boolean, hold: SmoothingHold, unit: number) {
    this.#form = form; this.#m = form.season === "none" ? 0 : form.length; this.#hold = hold; this.#unit = unit; this.#damped = damped && form.trend !== "none";
    if (hold.alpha === undefined) this.#free.push("alpha");
    if (form.trend !== "none" && hold.beta === undefined) this.#free.push("beta");
    if (this.#m > 0 && hold.gamma === undefined) this.#free.push("gamma");
    if (this.#damped && hold.phi === undefined) this.#free.push("phi");
  }

  get freeWeights(): number { return this.#free.length; }
  get statesHeld(): boolean { return this.#hold.level0 !== undefined; }

  weights(x: Float64Array): Weights {
    const share = (name: Name): number | null => { const i = this.#free.indexOf(name); return i < 0 ? null : lowest[name] + width[name] * Math.sin(x[i]) ** 2; };
    const { alpha = 0, beta = 0, gamma = 0, phi = 1 } = this.#hold, ofBeta = share("beta"), ofGamma = share("gamma"), a = share("alpha") ?? alpha;
    return {
      alpha: a, beta: ofBeta !== null ? a * ofBeta : this.#form.trend === "none" ? 0 : beta,
      gamma: ofGamma !== null ? (1 - a) * ofGamma : this.#m === 0 ? 0 : gamma, phi: share("phi") ?? (this.#damped ? phi : 1),
    };
  }

  /** Where weights stand, each place once: those that differ only in what is held are one.
   *  Not at an end of a range: the slope there is 0, whichever way is down. */
  placed(weights: readonly Weights[]): Float64Array[] {
    const places = weights.map(({ alpha, beta, gamma, phi }) => {
      const at = { alpha, beta: beta / alpha, gamma: gamma / (1 - alpha), phi };
      return Float64Array.from(this.#free, (name) => Math.asin(Math.sqrt(Math.min(0.9975, Math.max(0.0025, (at[name] - lowest[name]) / width[name])))));
    });
    return [...new Map(places.map((x) => [x.join(), x])).values()];
  }

  /** How many starting states are searched; beyond season 24 its figures stay those of the opening stretch. */
  get searchedStates(): number {
    return this.statesHeld ? 0 : 1 + (this.#form.trend === "none" ? 0 : 1) + (this.#m > 0 && this.#m <= 24 ? this.#m - 1 : 0);
  }

  /** Starting states, searched as departures from the opening ones. */
  states(x: Float64Array, opening: States0): States0 {
    if (this.statesHeld) return this.#heldStates();
    const at = this.freeWeights, trended = this.#form.trend !== "none", product = this.#form.season === "multiplicative", m = this.#m;
    const level = opening.level * Math.exp(x[at] * ofLevel);
    const trend = !trended ? 0 : this.#form.trend === "multiplicative" ? opening.trend * Math.exp(x[at + 1] * ofTrend) : opening.trend + ofTrend * x[at + 1];
    const seasonal = Float64Array.from(opening.seasonal), first = at + (trended ? 2 : 1);
    if (x.length > first) {
      for (let j = 0; j < m - 1; j++) seasonal[j] = product ? seasonal[j] * Math.exp(x[first + j] * ofSeason) : seasonal[j] + ofSeason * x[first + j];
      const sum = seasonal.reduce((a, b) => a + b, 0);
      for (let j = 0; j < m; j++) seasonal[j] = product ? (seasonal[j] * m) / sum : seasonal[j] - sum / m;
    }
    return { level, trend, seasonal };
  }

  /** Derivatives by x, from those by weights and starting states.
   *  @param at  the weights and states of x */
  slopeInto(g: Float64Array, x: Float64Array, at: SmoothingState, by: SmoothingState): void {
    const free = this.#free, { alpha } = at, share = { beta: at.beta / alpha, gamma: at.gamma / (1 - alpha) };
    const searched = { alpha: by.alpha, beta: by.beta * alpha, gamma: by.gamma * (1 - alpha), phi: by.phi };
    if (free.includes("beta")) searched.alpha += by.beta * share.beta;
    if (free.includes("gamma")) searched.alpha -= by.gamma * share.gamma;
    free.forEach((name, i) => { g[i] = searched[name] * width[name] * Math.sin(2 * x[i]); });
    if (g.length === free.length) return;
    const trended = this.#form.trend !== "none", product = this.#form.season === "multiplicative", first = free.length + (trended ? 2 : 1), m = this.#m;
    g[free.length] = by.level * at.level * ofLevel;
    if (trended) g[free.length + 1] = by.trend * ofTrend * (this.#form.trend === "multiplicative" ? at.trend : 1);
    if (g.length === first) return;
    let all = 0;
    for (let j = 0; j < m; j++) all += by.seasonal[j] * (product ? at.seasonal[j] : 1);
    for (let j = 0; j < m - 1; j++) g[first + j] = ofSeason * (product ? at.seasonal[j] * (by.seasonal[j] - all / m) : by.seasonal[j] - all / m);
  }

  #heldStates(): States0 {
    const { level0 = 0, trend0, seasonal0 = [] } = this.#hold, { trend, season } = this.#form, unit = this.#unit;
    return { level: level0 / unit, trend: trend === "multiplicative" ? (trend0 ?? 1) : (trend0 ?? 0) / unit, seasonal: Float64Array.from(seasonal0, (s) => (season === "multiplicative" ? s : s / unit)) };
  }
}
