// The likelihood of a smoothing model and its slope: what a search asks for again and again.

import type { SmoothingForm, SmoothingState } from "./innovations.ts";

/** A perfect fit (a constant series) has no largest likelihood: it is taken as one with errors too small to matter. */
const leastSum = 1e-280;

/** Minus twice the log-likelihood that `innovationsFilter` gives for one series, sigma2 concentrated out, in work arrays that are kept. */
export class Likelihood {
  readonly #y: Float64Array;
  readonly #form: SmoothingForm;
  // By period, before its value moved them: level, trend and the season's figure in turn, and the trend once damped.
  readonly #level: Float64Array; readonly #trend: Float64Array; readonly #season: Float64Array; readonly #damped: Float64Array;
  readonly #seasonal: Float64Array;
  #start: SmoothingState | null = null;
  #sum = 0;
  #count = 0;

  constructor(y: Float64Array, form: SmoothingForm) {
    const n = y.length;
    this.#y = y; this.#form = form;
    this.#level = new Float64Array(n); this.#trend = new Float64Array(n); this.#season = new Float64Array(n); this.#damped = new Float64Array(n);
    this.#seasonal = new Float64Array(form.season === "none" ? 0 : form.length);
  }

  /** Sum of squared errors at the last point asked for, relative ones where errors multiply; and of how many. */
  get sum(): number { return Math.max(this.#sum, leastSum); }
  get count(): number { return this.#count; }

  /** Infinity where the filter's likelihood would be 0. Cost O(n). */
  value(start: SmoothingState): number {
    const y = this.#y, n = y.length, { alpha, beta, gamma, phi } = start, { error, trend: kind, season } = this.#form, m = this.#seasonal.length;
    const byError = error === "multiplicative", byTrend = kind === "multiplicative", bySeason = season === "multiplicative", trended = kind !== "none";
    const levels = this.#level, trends = this.#trend, seasons = this.#season, dampeds = this.#damped, seasonal = this.#seasonal;
    this.#start = start;
    seasonal.set(start.seasonal);
    let level = start.level, trend = start.trend, at = 0, sum = 0, logs = 0, product = 1, count = 0;
    for (let t = 0; t < n; t++) {
      const damped = !trended ? 0 : byTrend ? (phi === 1 ? trend : trend ** phi) : phi * trend;
      const q = byTrend ? level * damped : level + damped, s = m > 0 ? seasonal[at] : 0;
      const f = m === 0 ? q : bySeason ? q * s : q + s;
      levels[t] = level; trends[t] = trend; seasons[t] = s; dampeds[t] = damped;
      let absolute = 0;
      if (y[t] === y[t]) { // not missing
        absolute = y[t] - f;
        count++;
        if (byError) {
          if (!(f > 0)) return Infinity;
          sum += (absolute / f) ** 2;
          // Logs of products: one logarithm for many forecasts, before the product leaves the range of doubles.
          product *= f;
          if (product > 1e250 || product < 1e-250) { logs += Math.log(product); product = 1; }
        } else sum += absolute * absolute;
      }
      const ofLevel = bySeason ? absolute / s : absolute, before = level;
      level = q + alpha * ofLevel;
      if (trended) trend = byTrend ? damped + (beta * ofLevel) / before : damped + beta * ofLevel;
      if (byTrend && !(trend > 0 && level > 0)) return Infinity;
      if (m > 0) { seasonal[at] = s + gamma * (bySeason ? absolute / q : absolute); if (++at === m) at = 0; }
    }
    this.#sum = sum; this.#count = count;
    const value = count * (Math.log((2 * Math.PI * this.sum) / count) + 1) + 2 * (logs + Math.log(product));
    return Number.isFinite(value) ? value : Infinity;
  }

  /** Derivatives of the value by every weight and starting state, at the last point asked for (where it was finite):
   *  the filter run backwards, at about twice the cost of a value however many states there are.
   *  Source: reverse accumulation, Griewank & Walther (2008), chapter 3. */
  slope(): SmoothingState {
    if (this.#start === null) throw new RangeError("Likelihood.slope: ask for a value first");
    const y = this.#y, { alpha, beta, gamma, phi } = this.#start, { error, trend: kind, season } = this.#form, m = this.#seasonal.length;
    const byError = error === "multiplicative", byTrend = kind === "multiplicative", bySeason = season === "multiplicative", trended = kind !== "none";
    const levels = this.#level, trends = this.#trend, seasons = this.#season, dampeds = this.#damped;
    // Derivatives by the states after period t, which become those by the states before it; and of the value by half the sum.
    const bySeasonal = new Float64Array(m), bySum = (2 * this.#count) / this.sum;
    let byLevel = 0, byTrending = 0, byAlpha = 0, byBeta = 0, byGamma = 0, byPhi = 0;
    for (let t = y.length - 1, at = m > 0 ? t % m : 0; t >= 0; t--) {
      const level = levels[t], s = seasons[t], damped = dampeds[t], seen = y[t] === y[t];
      const q = byTrend ? level * damped : level + damped, f = m === 0 ? q : bySeason ? q * s : q + s;
      const absolute = seen ? y[t] - f : 0, ofLevel = bySeason ? absolute / s : absolute;
      let onQ = byLevel, onLevel = 0, onDamped = 0, onOfLevel = alpha * byLevel, onAbsolute = 0, onSeason = 0;
      byAlpha += byLevel * ofLevel;
      if (trended) {
        const share = byTrend ? byTrending / level : byTrending;
        onDamped = byTrending;
        onOfLevel += beta * share;
        byBeta += share * ofLevel;
        if (byTrend) onLevel -= (beta * ofLevel * share) / level;
      }
      if (m > 0) {
        const after = bySeasonal[at], share = bySeason ? after / q : after;
        onSeason = after;
        onAbsolute = gamma * share;
        byGamma += share * absolute;
        if (bySeason) { onQ -= (gamma * share * absolute) / q; onSeason -= (onOfLevel * ofLevel) / s; }
      }
      onAbsolute += bySeason ? onOfLevel / s : onOfLevel;
      if (seen) {
        let onForecast = 0;
        if (byError) { const r = absolute / f; onAbsolute += (bySum * r) / f; onForecast = (2 - bySum * r * r) / f; }
        else onAbsolute += bySum * absolute;
        onForecast -= onAbsolute;
        onQ += bySeason ? onForecast * s : onForecast;
        onSeason += bySeason ? onForecast * q : onForecast;
      }
      byLevel = byTrend ? onLevel + onQ * damped : onQ;
      if (trended) {
        const trend = trends[t];
        onDamped += byTrend ? onQ * level : onQ;
        byTrending = byTrend ? (onDamped * phi * damped) / trend : onDamped * phi;
        byPhi += onDamped * (byTrend ? damped * Math.log(trend) : trend);
      }
      if (m > 0) { bySeasonal[at] = onSeason; if (at-- === 0) at = m - 1; }
    }
    return { alpha: byAlpha, beta: byBeta, gamma: byGamma, phi: byPhi, level: byLevel, trend: byTrending, seasonal: bySeasonal };
  }
}
