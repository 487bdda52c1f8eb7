// Exponential smoothing in its classical form: level, trend and season updated one after the other.

export interface SmoothingWeights {
  /** Weight of the newest level, in (0, 1]. */
  readonly alpha: number;
  /** Weight of the newest change of level; left out = no trend. */
  readonly beta?: number;
  /** Weight of the newest seasonal figure; left out = no season. */
  readonly gamma?: number;
  /** Factor by which the trend dies away each period; left out = 1. */
  readonly damped?: number;
  /** The states that stand before the first value; `seasonal0` begins with the season of the first value. */
  readonly level0: number;
  readonly trend0?: number;
  readonly seasonal0?: readonly number[];
  readonly season?: "additive" | "multiplicative";
}

export interface Smoothed {
  readonly fitted: Float64Array;
  readonly sse: number;
  /** Root of SSE / n. */
  readonly sigma: number;
  readonly level: number;
  readonly trend: number;
  /** Figures of the coming season, the next period's first. */
  readonly seasonal: Float64Array;
  readonly point: Float64Array;
  /** Standard errors of the forecasts; NaN with a multiplicative season, which has none in closed form. */
  readonly se: Float64Array;
}

/** Exponential smoothing with given weights and starting states (simple, Holt, damped, Holt-Winters):
 *  l = alpha (y - s) + (1 - alpha)(l + b), b = beta (l - l_before) + (1 - beta) damped b, s = gamma (y - l) + (1 - gamma) s,
 *  quotients in place of differences for a multiplicative season. Every observation is filtered; a missing one moves no state.
 *  Source: Winters (1960), with the season updated by the new level.
 *  @example exponentialSmoothing([1, 2], { alpha: 0.5, level0: 1 }, 1).point // [1.5] */
export function exponentialSmoothing(y: ArrayLike<number>, weights: SmoothingWeights, horizon: number): Smoothed {
  const { alpha, beta = 0, gamma = 0, damped = 1, level0, trend0 = 0, seasonal0 = [], season = "additive" } = weights;
  const n = y.length, m = seasonal0.length, product = season === "multiplicative" && m > 0;
  let level = level0, trend = trend0, sse = 0, count = 0;
  const seasonal = Float64Array.from(seasonal0), fitted = new Float64Array(n);
  for (let t = 0; t < n; t++) {
    const ahead = level + damped * trend, figure = m > 0 ? seasonal[t % m] : 0;
    fitted[t] = product ? ahead * figure : ahead + figure;
    const seen = !Number.isNaN(y[t]), value = seen ? y[t] : fitted[t];
    if (seen) { sse += (value - fitted[t]) ** 2; count++; }
    const next = alpha * (product ? value / figure : value - figure) + (1 - alpha) * ahead;
    trend = beta * (next - level) + (1 - beta) * damped * trend;
    level = next;
    if (m > 0) seasonal[t % m] = gamma * (product ? value / level : value - level) + (1 - gamma) * figure;
  }
  const sigma = Math.sqrt(sse / count), coming = Float64Array.from({ length: m }, (_, j) => seasonal[(n + j) % m]);
  const point = new Float64Array(horizon), se = new Float64Array(horizon);
  let reach = 0, reachBefore = 0, variance = 0;
  for (let h = 1; h <= horizon; h++) {
    reach += damped ** h;
    const trended = level + reach * trend;
    point[h - 1] = m === 0 ? trended : product ? trended * coming[(h - 1) % m] : trended + coming[(h - 1) % m];
    // c_j of step j = h - 1: what an error j steps back still does to the forecast.
    if (h === 1) variance = 1;
    else {
      reachBefore += damped ** (h - 1);
      variance += (alpha + alpha * beta * reachBefore + (m > 0 && (h - 1) % m === 0 ? gamma * (1 - alpha) : 0)) ** 2;
    }
    se[h - 1] = product ? NaN : sigma * Math.sqrt(variance);
  }
  return { fitted, sse, sigma, level, trend, seasonal: coming, point, se };
}
