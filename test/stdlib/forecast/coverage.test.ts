import { describe, expect, it } from "vitest";
import { fit } from "../../../stdlib/arma/fit.ts";
import type { FitOptions } from "../../../stdlib/arma/model.ts";
import { simulate } from "../../../stdlib/arma/simulate.ts";
import { binomialRange } from "../../../stdlib/evaluation/binomialRange.ts";
import { forecast } from "../../../stdlib/forecast/forecast.ts";
import { slice } from "../../../stdlib/series/cut.ts";
import { makeSeries, type Series } from "../../../stdlib/series/series.ts";
import { applySteps } from "../../../stdlib/series/steps.ts";

const tries = 400, horizons = [1, 4, 12], levels = [0.8, 0.95];

/** A seasonal walk: shocks through the moving averages, summed at lags 1 and 12. */
function seasonalWalk(seed: number, n: number): Series {
  const w = simulate({ theta: [-0.4], seasonalTheta: [-0.6], seasonLength: 12 }, n, seed).values, y = new Float64Array(n);
  for (let t = 0; t < n; t++) y[t] = t < 13 ? 0 : w[t] + y[t - 1] + y[t - 12] - y[t - 13];
  return applySteps(makeSeries({ name: "x", values: y }), [{ step: "difference", lag: 1 }, { step: "difference", lag: 12 }]);
}

const models: readonly (readonly [string, number, (seed: number, n: number) => Series, Omit<FitOptions, "series">])[] = [
  ["AR(1)", 50, (seed, n) => simulate({ phi: [0.7], mean: 10 }, n, seed), { ar: 1, hold: { phi: [0.7], mean: 10, sigma2: 1 } }],
  ["ARMA(1,1)", 100, (seed, n) => simulate({ phi: [0.8], theta: [-0.4], mean: 5 }, n, seed), { ar: 1, ma: 1, hold: { phi: [0.8], theta: [-0.4], mean: 5, sigma2: 1 } }],
  ["(0,1,1)(0,1,1)12", 120, seasonalWalk, { ma: 1, season: { length: 12, ma: 1 }, hold: { theta: [-0.4], seasonalTheta: [-0.6], sigma2: 1 } }],
];

describe("bands of known models cover what they say (400 seeded series each)", () => {
  it.each(models)("%s", (_name, n, make, ask) => {
    const hits = horizons.map(() => levels.map(() => 0));
    for (let seed = 1; seed <= tries; seed++) {
      const all = make(seed, n + 12), lost = all.steps.length > 0 ? 13 : 0, data = all.steps[0]?.before.values ?? all.values;
      const { bands } = forecast(fit({ ...ask, series: slice(all, 0, n - lost) }), { horizon: 12, levels });
      horizons.forEach((h, i) => levels.forEach((_, j) => { const y = data[n + h - 1]; if (y >= bands[j].low[h - 1] && y <= bands[j].high[h - 1]) hits[i][j]++; }));
    }
    // Six ranges a model: each at 99.5%, so that all hold together about 97 times in 100; every draw is seeded.
    levels.forEach((level, j) => horizons.forEach((h, i) => {
      const { low, high } = binomialRange(tries, level, 0.995);
      expect(hits[i][j] / tries, `${level} at ${h}`).toBeGreaterThanOrEqual(low);
      expect(hits[i][j] / tries, `${level} at ${h}`).toBeLessThanOrEqual(high);
    }));
  });
});
