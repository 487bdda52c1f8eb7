import { describe, expect, it } from "vitest";
import { bias, mae, mape, mase, mpe, rmse, rmsse, smape } from "../../../stdlib/evaluation/accuracy.ts";
import { binomialRange } from "../../../stdlib/evaluation/binomialRange.ts";
import { dieboldMariano } from "../../../stdlib/evaluation/dieboldMariano.ts";
import { modelConfidenceSet } from "../../../stdlib/evaluation/modelConfidenceSet.ts";
import { crps, intervalScore, lognormalCrps, normalCrps, pinball, sampleCrps } from "../../../stdlib/evaluation/scores.ts";
import { normals, seeded } from "../../../stdlib/forecast/random.ts";
import { normalQuantile } from "../../../stdlib/distributions/normal.ts";
import { allowed, cases } from "../forecast/reference.ts";

describe("accuracy by reference (R 4.2.2 by formula, numpy; see test/reference)", () => {
  type Inputs = { actual: number[]; forecast: number[]; training: number[]; period: number };
  it.each(cases<Inputs, Record<string, number>>("accuracy", "accuracy"))("$id", (c) => {
    const { actual, forecast, training, period } = c.inputs;
    const found: Record<string, number> = { me: bias(actual, forecast), mae: mae(actual, forecast), rmse: rmse(actual, forecast), mpe: mpe(actual, forecast), mape: mape(actual, forecast), smape: smape(actual, forecast), mase: mase(actual, forecast, training, period), rmsse: rmsse(actual, forecast, training, period) };
    for (const [field, x] of Object.entries(c.expected)) expect(Math.abs(found[field] - x), field).toBeLessThanOrEqual(allowed(c.tolerance, field, x));
  });

  type Scores = { actual: number[]; mean: number[]; sd: number[]; levels: number[]; quantiles: number[] };
  type ScoresOut = { crps: number[]; meanCrps: number; winkler: { level: number; meanScore: number }[]; pinball: { quantile: number; meanLoss: number }[] };
  it.each(cases<Scores, ScoresOut>("accuracy", "scores"))("$id", (c) => {
    const { actual, mean, sd } = c.inputs, near = (a: number, b: number) => expect(Math.abs(a - b)).toBeLessThanOrEqual(1e-9 * Math.abs(b));
    actual.forEach((y, i) => near(normalCrps(y, mean[i], sd[i]), c.expected.crps[i]));
    near(crps(actual, mean, sd), c.expected.meanCrps);
    for (const { level, meanScore } of c.expected.winkler) {
      const z = normalQuantile((1 + level) / 2);
      near(intervalScore(actual, mean.map((m, i) => m - z * sd[i]), mean.map((m, i) => m + z * sd[i]), level), meanScore);
    }
    for (const { quantile, meanLoss } of c.expected.pinball) near(pinball(actual, mean.map((m, i) => m + normalQuantile(quantile) * sd[i]), quantile), meanLoss);
  });

  type Dm = { e1: number[]; e2: number[]; h: number; power: 1 | 2 };
  type DmOut = { meanLossDifferential: number; longRunVariance: number; dm: number; hln: number; pValueTwoSided: number; pValueNormalDM: number };
  it.each(cases<Dm, DmOut>("accuracy", "dieboldMariano"))("$id", (c) => {
    const t = dieboldMariano(c.inputs.e1, c.inputs.e2, { horizon: c.inputs.h, loss: c.inputs.power === 1 ? "absolute" : "squared" });
    const pairs = [[t.meanDifference, c.expected.meanLossDifferential], [t.longRunVariance, c.expected.longRunVariance], [t.dm, c.expected.dm], [t.statistic, c.expected.hln], [t.p, c.expected.pValueTwoSided], [t.pNormal, c.expected.pValueNormalDM]];
    for (const [a, b] of pairs) expect(Math.abs(a - b)).toBeLessThanOrEqual(allowed(c.tolerance, "dm", b));
  });
});

describe("scores by law", () => {
  it("a lognormal's CRPS agrees with that of its 200,000 evenly spaced quantiles", () => {
    const draws = Float64Array.from({ length: 200_000 }, (_, i) => Math.exp(1 + 0.4 * normalQuantile((i + 0.5) / 200_000)));
    for (const y of [0.5, 2.7, 6]) expect(lognormalCrps(y, 1, 0.4)).toBeCloseTo(sampleCrps(y, draws), 4);
    expect(lognormalCrps(-1, 1, 0.4)).toBeCloseTo(1 + lognormalCrps(0, 1, 0.4), 10);
  });
  it("the sample form of CRPS is the absolute error for one draw, and the mean over pairs for two", () => {
    expect(sampleCrps(3, Float64Array.of(1))).toBe(2);
    expect(sampleCrps(0, Float64Array.of(1, 3))).toBeCloseTo(2 - 0.5, 12);
  });
  it("missing pairs are left out; lengths must agree; a percentage of zero is not defined", () => {
    expect(mae([1, NaN, 3], [2, 5, 1])).toBe(1.5);
    expect(() => mae([1, 2], [1])).toThrow("2 actual values and 1 forecasts");
    expect(mape([0, 1], [1, 1])).toBeNaN();
    expect(mase([1], [2], [5, 5, 5], 1)).toBeNaN();
  });
  it("two forecasters with the same errors tie, and one origin is too few, in words", () => {
    expect(dieboldMariano([1, -2, 3], [1, 2, -3]).note).toContain("a tie");
    expect(dieboldMariano([1], [2]).note).toContain("too few");
  });
});

describe("binomialRange", () => {
  it("by hand: ten tries at one half stay between 2 and 8", () => {
    // P(X <= 1) = 11/1024 = 0.0107, P(X <= 2) = 56/1024 = 0.0547.
    expect(binomialRange(10, 0.5)).toEqual({ low: 0.2, high: 0.8 });
  });
  it("by reference: R 4.2.2 qbinom(c(.025, .975), 300, .8) is 226 and 253", () => {
    expect(binomialRange(300, 0.8)).toEqual({ low: 226 / 300, high: 253 / 300 });
  });
});

describe("modelConfidenceSet", () => {
  const noise = (seed: number, n: number, level: number) => { const normal = normals(seeded(seed)); return Float64Array.from({ length: n }, () => (level + normal()) ** 2); };
  it("keeps models of equal accuracy and drops one that is clearly worse", () => {
    const set = modelConfidenceSet([noise(1, 200, 0), noise(2, 200, 0), noise(3, 200, 2)]);
    expect(set.models.map((m) => m.inside)).toEqual([true, true, false]);
  });
  it("holds the best model about as often as it says (90%; 200 seeded studies of three equal models)", () => {
    let held = 0;
    for (let r = 0; r < 200; r++) {
      const losses = [0, 1, 2].map((i) => noise(1000 + 10 * r + i, 60, 0));
      if (modelConfidenceSet(losses, { replications: 300, seed: r }).models[0].inside) held++;
    }
    // 200 tries at 0.9 or more; the binomial 0.1% point is 167.
    expect(held).toBeGreaterThanOrEqual(167);
  });
  it("says why where there are too few origins, and that identical models tie", () => {
    expect(modelConfidenceSet([[1, 2], [2, 1]]).note).toContain("too few");
    const same = noise(5, 30, 0);
    expect(modelConfidenceSet([same, same]).models.map((m) => m.inside)).toEqual([true, true]);
  });
});
