// Exponential smoothing with its weights and starting states estimated by maximum likelihood.

import { choleskyInto } from "../../linear/cholesky.ts";
import { quasiNewton, type Minimum, type Problem } from "../../optimize/quasiNewton.ts";
import { bestStates } from "./bestStates.ts";
import { innovationsFilter, type Filtered, type SmoothingForm, type SmoothingState, type States0, type Weights } from "./innovations.ts";
import { Likelihood } from "./likelihood.ts";
import { openingStates } from "./openingStates.ts";
import { SearchSpace, type SmoothingHold } from "./searchSpace.ts";

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

/** The surface often has several maxima, slow and fast ones: a search starts from each of these. */
const firstWeights: readonly Weights[] = [
  [0.5, 0.1, 0.1, 0.962], [0.1, 0.2, 0.05, 0.962], [0.5, 0.01, 0.01, 0.975], [0.02, 0.01, 0.01, 0.975], [0.95, 0.01, 0.02, 0.9], [0.2, 0.02, 0.5, 0.85],
  [0.02, 0.7, 0.01, 0.975], [0.1, 0.003, 0.003, 0.9795], [0.003, 0.1, 0.01, 0.97], [0.003, 0.003, 0.003, 0.85], [0.6, 0.003, 0.4, 0.97], [0.8, 0.0001, 0.0001, 0.97]]
  .map(([alpha, ofAlpha, ofRest, phi]) => ({ alpha, beta: ofAlpha * alpha, gamma: ofRest * (1 - alpha), phi }));
/** Of minus twice the log-likelihood; and rounds of one search: rugged surfaces (additive errors, a season that multiplies) take over a hundred. */
const tolerance = 1e-9, rounds = 400;

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
  const scaled = y.map((v) => (v - shift) / unit), space = new SearchSpace(form, damped, hold, unit), likelihood = new Likelihood(scaled, form);
  const concentrated = additive && !space.statesHeld && m <= longestFreeSeason;
  const opening = near?.level !== undefined && near.seasonal !== undefined ? nearStates(near as States0, form, shift, unit) : openingStates(scaled, form);
  const stateAt = (x: Float64Array): SmoothingState => {
    const weights = space.weights(x);
    return { ...weights, ...(concentrated ? bestStates(likelihood, scaled, form, weights) : space.states(x, opening)) };
  };
  const size = space.freeWeights + (concentrated ? 0 : space.searchedStates), search = new Search(size, space, likelihood, stateAt);
  const best = lowest(search, space.placed(near?.alpha === undefined ? firstWeights : [nearWeights(near)]));
  if (best === null) throw new RangeError("smoothing: no weights were found with which every one-step forecast stays positive; try an additive season, or a log before it");
  const found = stateAt(best.x);
  const start: SmoothingState = { ...found, level: found.level * unit + shift, trend: form.trend === "multiplicative" ? found.trend : found.trend * unit,
    seasonal: form.season === "multiplicative" ? found.seasonal : found.seasonal.map((s) => s * unit) };
  const freeStates = space.statesHeld ? 0 : 1 + (form.trend === "none" ? 0 : 1) + Math.max(0, m - 1);
  return { form, start, filtered: innovationsFilter(y, form, start), k: space.freeWeights + freeStates + 1, converged: best.converged };
}

/** The lowest place that the searches find; starts are weights, and states start from the opening ones. */
function lowest(search: Search, starts: readonly Float64Array[]): Minimum | null {
  let best: Minimum | null = null;
  for (const weights of starts) {
    const start = new Float64Array(search.size);
    start.set(weights);
    const found = quasiNewton(search, start, tolerance, rounds);
    if (Number.isFinite(found.value) && (best === null || found.value < best.value)) best = found;
  }
  return best;
}

function nearWeights({ alpha = 0.1, beta = 0.1 * alpha, gamma = 0.1 * (1 - alpha), phi = 0.95 }: SmoothingHold): Weights { return { alpha, beta, gamma, phi }; }

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

/** Minus twice the log-likelihood as a function of what is searched. Where starting states follow from the weights as the best ones,
 *  the value does not change with them to first order: its slope is that by the weights alone. */
class Search implements Problem {
  readonly size: number;
  readonly #space: SearchSpace;
  readonly #likelihood: Likelihood;
  readonly #stateAt: (x: Float64Array) => SmoothingState;
  readonly #x: Float64Array;
  #state: SmoothingState | null = null;

  constructor(size: number, space: SearchSpace, likelihood: Likelihood, stateAt: (x: Float64Array) => SmoothingState) {
    this.size = size; this.#space = space; this.#likelihood = likelihood; this.#stateAt = stateAt; this.#x = new Float64Array(size);
  }

  value(x: Float64Array): number {
    this.#x.set(x);
    this.#state = this.#stateAt(x);
    return this.#likelihood.value(this.#state);
  }

  gradientInto(g: Float64Array): void {
    if (this.#state !== null) this.#space.slopeInto(g, this.#x, this.#state, this.#likelihood.slope());
  }

  /** Differences of slopes; where they are not positive definite, their diagonal without its signs. */
  curvatureInto(h: Float64Array): void {
    const size = this.size, at = Float64Array.from(this.#x), here = new Float64Array(size), there = new Float64Array(size);
    this.gradientInto(here);
    for (let i = 0; i < size; i++) {
      const probe = Float64Array.from(at);
      let d = 1e-5;
      for (const side of [d, -d]) {
        d = side;
        probe[i] = at[i] + d;
        if (this.value(probe) < Infinity) break;
      }
      this.gradientInto(there);
      for (let j = 0; j < size; j++) h[i * size + j] = (there[j] - here[j]) / d;
    }
    for (let i = 0; i < size; i++) for (let j = 0; j < i; j++) h[i * size + j] = h[j * size + i] = (h[i * size + j] + h[j * size + i]) / 2;
    const factor = Float64Array.from(h);
    if (h.every(Number.isFinite) && choleskyInto(factor, size) < 0) return;
    const diagonal = Float64Array.from({ length: size }, (_, i) => Math.abs(h[i * size + i])), top = Math.max(...diagonal.filter(Number.isFinite), 1e-6);
    h.fill(0);
    for (let i = 0; i < size; i++) h[i * size + i] = Number.isFinite(diagonal[i]) ? Math.max(diagonal[i], 1e-6 * top) : top;
  }
}
