// Made results for tests of what the kinds show: small, plain, and with every field a view may read.

import { applySteps, makeSeries, timesFrom, type Fit, type Forecast, type Series, type Step } from "../../stdlib/index.ts";

/** A monthly series with a season and a trend, and no randomness beyond a fixed recurrence. */
export function madeSeries(n = 72, name = "crossings"): Series {
  let state = 7;
  const values = Float64Array.from({ length: n }, (_, i) => {
    state = (state * 1103515245 + 12345) % 2147483648;
    return Math.exp(7 + 0.004 * i + 0.2 * Math.sin(2 * Math.PI * i / 12) + 0.06 * (state / 2147483648 - 0.5));
  });
  return makeSeries({ name, unit: "vehicles", every: "P1M", start: "2018-01", values });
}

export function stepped(series: Series, steps: readonly Step[]): Series { return applySteps(series, steps); }

/** A seasonal model's result with plausible figures. */
export function madeFit(changes: Partial<Fit> = {}): Fit {
  const series = stepped(madeSeries(), [{ step: "log" }, { step: "difference", lag: 1 }, { step: "difference", lag: 12 }]);
  const none = new Float64Array(0);
  const se = { phi: none, theta: Float64Array.of(0.09), seasonalPhi: none, seasonalTheta: Float64Array.of(0.073), mean: NaN, beta: {} };
  return {
    label: "candidate", phi: none, theta: Float64Array.of(-0.402), seasonalPhi: none, seasonalTheta: Float64Array.of(-0.557), seasonLength: 12,
    mean: 0, constant: 0, beta: {}, se, seRobust: se, sigma2: 0.001348, logLikelihood: 244.7, aic: -483.4, aicc: -483.2, bic: -474.8, k: 3, n: series.n,
    residuals: { ...series, name: "residuals", steps: [], values: series.values.map(x => x * 25) }, roots: { ar: [], ma: [{ re: 1 / 0.402, im: 0, modulus: 1 / 0.402 }] },
    converged: true, notes: [], method: "exact", series, options: { series, ma: 1, season: { ma: 1 } }, ...changes,
  };
}

export function madeForecast(changes: Partial<Forecast> = {}): Forecast {
  const history = madeSeries();
  const horizon = 12;
  const median = Float64Array.from({ length: horizon }, (_, i) => 1400 + 10 * i);
  const around = (share: number): Float64Array => median.map(m => m * share);
  return {
    label: "candidate", name: "crossings", unit: "vehicles", every: "P1M", origin: "2023-12", horizon, times: timesFrom("2024-01", "P1M", horizon),
    mean: around(1.01), median, se: new Float64Array(horizon).fill(0.05),
    bands: [{ level: 0.5, low: around(0.97), high: around(1.03) }, { level: 0.9, low: around(0.92), high: around(1.09) }],
    totals: [{ from: "2024-01", to: "2024-12", mean: 17628, median: 17460, se: 300, observed: 0, bands: [{ level: 0.5, low: 17000, high: 18000 }, { level: 0.9, low: 16500, high: 18600 }] }],
    sd: around(0.05), growth: [], passing: [], scenarios: {}, paths: [], shape: "Far ahead the forecast follows a line with the last season on it.",
    history, heldOut: null, notes: [{ code: "shape", tone: "note", text: "Far ahead the forecast follows a line with the last season on it." }], ...changes,
  };
}
