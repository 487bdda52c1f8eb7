// Exponential smoothing as an innovations model: one error a period drives level, trend and season.

/** What enters, and how: "additive" or "multiplicative" errors and season; a trend may also multiply. */
export interface SmoothingForm {
  readonly error: "additive" | "multiplicative";
  readonly trend: "none" | "additive" | "multiplicative";
  readonly season: "none" | "additive" | "multiplicative";
  /** Periods a season; 1 without one. */
  readonly length: number;
}

/** Weights of the innovations form (beta = alpha times the classical one, gamma = (1 - alpha) times it), and the states before the first value. */
export interface SmoothingState {
  readonly alpha: number; readonly beta: number; readonly gamma: number;
  /** Damping; 1 = none. */
  readonly phi: number;
  readonly level: number; readonly trend: number;
  /** Length `length`, the first period's figure first; empty without a season. */
  readonly seasonal: Float64Array;
}

export type Weights = Pick<SmoothingState, "alpha" | "beta" | "gamma" | "phi">;
/** The states before the first value. */
export type States0 = Pick<SmoothingState, "level" | "trend" | "seasonal">;

export interface Filtered {
  /** One-step forecasts and errors (relative ones where errors multiply; 0 where the value is missing). */
  readonly fitted: Float64Array; readonly errors: Float64Array;
  /** Observed values. */
  readonly count: number;
  /** Mean squared error (of the relative errors where they multiply). */
  readonly sigma2: number;
  /** Gaussian, sigma2 concentrated out; -Infinity where a one-step forecast is not above 0 in a multiplicative model. */
  readonly logLikelihood: number;
  /** The same weights with the states after the last value; `seasonal` begins with the next period's figure. */
  readonly after: SmoothingState;
}

/** Runs the filter over a series; a missing value moves no state.
 *  Source: Hyndman, Koehler, Ord & Snyder (2008), tables 2.2 and 2.3. Cost O(n). */
export function innovationsFilter(y: ArrayLike<number>, form: SmoothingForm, start: SmoothingState): Filtered {
  const n = y.length, fitted = new Float64Array(n), errors = new Float64Array(n), states = new States(form, start);
  let sum = 0, logs = 0, count = 0, valid = true;
  for (let t = 0; t < n; t++) {
    const f = states.ahead();
    fitted[t] = f;
    if (Number.isNaN(y[t])) { states.move(0); continue; }
    const error = form.error === "multiplicative" ? (y[t] - f) / f : y[t] - f;
    errors[t] = error;
    sum += error * error; count++;
    if (form.error === "multiplicative") { logs += Math.log(Math.abs(f)); if (!(f > 0)) valid = false; }
    states.move(error);
    if (!states.sound()) valid = false;
  }
  const sigma2 = sum / count;
  const logLikelihood = valid && Number.isFinite(sigma2) ? (-count / 2) * (Math.log(2 * Math.PI * sigma2) + 1) - logs : -Infinity;
  return { fitted, errors, count, sigma2, logLikelihood, after: states.now() };
}

/** A path of the model from its states on, driven by given errors (0 = the point forecasts of an additive model,
 *  and the usual point forecasts of a multiplicative one). */
export function innovationsPath(form: SmoothingForm, from: SmoothingState, errors: ArrayLike<number>): Float64Array {
  const path = new Float64Array(errors.length);
  innovationsPaths(form, from)(errors, path);
  return path;
}

/** The same for one path after another, each written into an array that it is given. */
export function innovationsPaths(form: SmoothingForm, from: SmoothingState): (errors: ArrayLike<number>, path: Float64Array) => void {
  const states = new States(form, from), multiplies = form.error === "multiplicative";
  return (errors, path) => {
    states.restart();
    for (let h = 0; h < path.length; h++) {
      const f = states.ahead();
      states.move(errors[h]);
      path[h] = multiplies ? f * (1 + errors[h]) : f + errors[h];
    }
  };
}

/** The moving parts, kept in place: a class because every period moves all of them. */
class States {
  readonly #form: SmoothingForm;
  readonly #weights: SmoothingState;
  readonly #seasonal: Float64Array;
  #level: number;
  #trend: number;
  #at = 0;

  constructor(form: SmoothingForm, start: SmoothingState) {
    this.#form = form; this.#weights = start;
    this.#level = start.level; this.#trend = start.trend; this.#seasonal = Float64Array.from(start.seasonal);
  }

  restart(): void {
    this.#level = this.#weights.level; this.#trend = this.#weights.trend; this.#seasonal.set(this.#weights.seasonal); this.#at = 0;
  }

  #trended(): number {
    const { trend } = this.#form, { phi } = this.#weights;
    if (trend === "none") return this.#level;
    if (trend === "additive") return this.#level + phi * this.#trend;
    return this.#level * (phi === 1 ? this.#trend : this.#trend ** phi);
  }

  ahead(): number {
    const q = this.#trended();
    switch (this.#form.season) {
      case "none": return q;
      case "additive": return q + this.#seasonal[this.#at];
      case "multiplicative": return q * this.#seasonal[this.#at];
    }
  }

  move(error: number): void {
    const { error: kind, trend, season } = this.#form, { alpha, beta, gamma, phi } = this.#weights;
    const q = this.#trended(), s = this.#seasonal[this.#at] ?? 0, before = this.#level;
    // The error in the units of the one-step forecast.
    const absolute = kind === "multiplicative" ? (season === "multiplicative" ? q * s : season === "additive" ? q + s : q) * error : error;
    // Its share in level and season.
    const ofLevel = season === "multiplicative" ? absolute / s : absolute;
    this.#level = q + alpha * ofLevel;
    if (trend === "additive") this.#trend = phi * this.#trend + beta * ofLevel;
    if (trend === "multiplicative") this.#trend = (phi === 1 ? this.#trend : this.#trend ** phi) + (beta * ofLevel) / before;
    if (season !== "none") {
      this.#seasonal[this.#at] = s + gamma * (season === "multiplicative" ? absolute / q : absolute);
      this.#at = (this.#at + 1) % this.#seasonal.length;
    }
  }

  /** A level, growth or seasonal factor at or below 0 has no meaning where it multiplies. */
  sound(): boolean {
    const { trend, season, error } = this.#form;
    if (trend === "multiplicative" && !(this.#trend > 0 && this.#level > 0)) return false;
    if ((season === "multiplicative" || error === "multiplicative") && !Number.isFinite(this.#level)) return false;
    return true;
  }

  now(): SmoothingState {
    const m = this.#seasonal.length;
    return { ...this.#weights, level: this.#level, trend: this.#trend, seasonal: Float64Array.from({ length: m }, (_, j) => this.#seasonal[(this.#at + j) % m]) };
  }
}
