import { describe, expect, it } from "vitest";
import { normalCdf } from "../../../stdlib/distributions/normal.ts";
import { fit } from "../../../stdlib/arma/fit.ts";
import type { FitOptions } from "../../../stdlib/arma/model.ts";
import { forecast, forecasting } from "../../../stdlib/forecast/forecast.ts";
import { withPauses } from "../../../stdlib/gradual.ts";
import { drawsOf, normalPaths, pathAt, sumsOver, undoPaths } from "../../../stdlib/forecast/paths.ts";
import { factorAlong } from "../../../stdlib/forecast/predictive.ts";
import { rule } from "../../../stdlib/forecast/rules.ts";
import { makeSeries, type Series } from "../../../stdlib/series/series.ts";
import { applySteps } from "../../../stdlib/series/steps.ts";
import { referenceSeries } from "./reference.ts";

const airline = (gaps: readonly number[] = []): Series => {
  const { times, values } = referenceSeries("airline");
  return makeSeries({ name: "passengers", every: "P1M", start: times[0], values: values.map((v, t) => (gaps.includes(t) ? NaN : v)) });
};
const model = (series = airline(), more: Partial<FitOptions> = {}) =>
  fit({ series: applySteps(series, [{ step: "log" }, { step: "difference", lag: 1 }, { step: "difference", lag: 12 }]), ma: 1, season: { length: 12, ma: 1 }, ...more });

describe("sample paths", () => {
  const mean = Float64Array.of(1, 2), factor = Float64Array.of(2, 0, 1, 0.5);
  it("come in pairs that mirror each other about the mean, so that sums have exactly the mean", () => {
    const paths = normalPaths(mean, factor, 10, 3), sums = sumsOver(paths, 0, 2);
    expect(sums.reduce((a, b) => a + b, 0) / 10).toBeCloseTo(3, 12);
    expect(pathAt(paths, 0)[1] - 2).toBeCloseTo(2 - pathAt(paths, 1)[1], 12);
  });
  it("have the covariance of the factor times its transpose", () => {
    const paths = normalPaths(mean, factor, 40_000, 5), a = drawsOf(paths, 0), b = drawsOf(paths, 1);
    const cross = a.reduce((sum, x, i) => sum + (x - 1) * (b[i] - 2), 0) / 40_000;
    // The product of 2 e1 and e1 + e2 / 2 has mean 2 and variance 9.
    expect(Math.abs(cross - 2)).toBeLessThan((4 * 3) / Math.sqrt(20_000));
  });
  it("are stratified: each period has one pair in each of as many equal strata", () => {
    const paths = normalPaths(Float64Array.of(0), Float64Array.of(1), 200, 9), pairs = Array.from(drawsOf(paths, 0)).filter((_, i) => i % 2 === 0);
    expect(new Set(pairs.map((z) => Math.floor(normalCdf(z) * 100))).size).toBe(100);
  });
  it("of another seed differ, and those of the same do not", () => {
    expect(normalPaths(mean, factor, 20, 9)).toEqual(normalPaths(mean, factor, 20, 9));
    expect(normalPaths(mean, factor, 20, 10)).not.toEqual(normalPaths(mean, factor, 20, 9));
  });
  it("drawn along a sum have the same covariance, and the sum in their first number alone", () => {
    const c = Float64Array.of(4, 2, 1, 2, 3, 1, 1, 1, 2), weights = [1, 2, 0.5], f = factorAlong(c, 3, weights);
    for (let i = 0; i < 3; i++) for (let j = 0; j < 3; j++) expect([0, 1, 2, 3].reduce((sum, k) => sum + f[i * 4 + k] * f[j * 4 + k], 0)).toBeCloseTo(c[i * 3 + j], 12);
    for (let k = 1; k < 4; k++) expect([0, 1, 2].reduce((sum, i) => sum + weights[i] * f[i * 4 + k], 0)).toBeCloseTo(0, 7);
  });
  it("are undone step by step: a difference adds the value so many periods before", () => {
    const paths = undoPaths([{ undo: "exp" }, { undo: "difference", lag: 1, tail: Float64Array.of(10) }], { count: 1, horizon: 2, values: Float64Array.of(0, Math.log(2)) });
    expect([...paths.values]).toEqual([11, 13]);
  });
});

describe("simulated and calibrated bands", () => {
  it.each(["simulated", "calibrated"] as const)("%s: the pauses change nothing, and each says how far the work is", async (bands) => {
    const seen: number[] = [], options = { horizon: 6, levels: [0.8], bands, totals: [{ from: "1961-01", to: "1961-06" }] };
    const found = await withPauses(forecasting(model(), options), async ({ done, total }) => { seen.push(done / total); });
    expect(found).toEqual(forecast(model(), options));
    expect(seen.length).toBeGreaterThan(25);
    expect(seen).toEqual([...seen].sort((a, b) => a - b));
  });
  it("stop where a pause says so", async () => {
    let slices = 0;
    const stopped = withPauses(forecasting(model(), { horizon: 6, bands: "simulated" }), async () => { if (++slices === 3) throw new Error("overtaken"); });
    await expect(stopped).rejects.toThrow("overtaken");
    expect(slices).toBe(3);
  });
  it("a sample with gaps is simulated with the same gaps, also among its last values", () => {
    const { bands, median } = forecast(model(airline([30, 80, 135, 136])), { horizon: 12, levels: [0.8], bands: "simulated" });
    const whole = forecast(model(), { horizon: 12, levels: [0.8], bands: "simulated" });
    median.forEach((m, h) => expect(Math.abs(m / whole.median[h] - 1)).toBeLessThan(0.05));
    expect(bands[0].high[0] - bands[0].low[0]).toBeGreaterThan(0.5 * (whole.bands[0].high[0] - whole.bands[0].low[0]));
  });
  it("members of a combination use the same shocks: a rule combined with itself is itself", () => {
    const naive = rule.naive(airline()), options = { horizon: 4, levels: [0.8], bands: "simulated" } as const;
    expect(forecast(rule.combine([naive, naive]), options).bands[0].high).toEqual(forecast(naive, options).bands[0].high);
  });
});

describe("limits that come from draws hardly differ from seed to seed", () => {
  // By hand from 4,000 independent draws: a 5% limit would have standard error sqrt(0.05 * 0.95 / 4000) / 0.103 = 3.3% of the standard deviation.
  it("of a year's total under a log: within 1% of its standard error", () => {
    const lows = Array.from({ length: 12 }, (_, seed) => forecast(model(), { horizon: 12, levels: [0.9], totals: "year", seed }).totals[0]);
    const mean = lows.reduce((sum, t) => sum + t.bands[0].low, 0) / 12;
    lows.forEach((total) => expect(Math.abs(total.bands[0].low - mean) / total.se).toBeLessThan(0.02));
    expect(Math.sqrt(lows.reduce((sum, t) => sum + (t.bands[0].low - mean) ** 2, 0) / 11) / lows[0].se).toBeLessThan(0.01);
  });
});

describe("a gap among the last values", () => {
  it("is no hindrance to a fit, which works on the levels; a rule on the differences says where the gap is", () => {
    const found = forecast(model(airline([138])), { horizon: 12 });
    expect(found.origin).toBe("1960-12");
    expect(Number.isFinite(found.median[6])).toBe(true);
    expect(() => forecast(rule.naive(applySteps(airline([138]), [{ step: "difference", lag: 12 }])), { horizon: 3 })).toThrow("passengers has no value at 1960-07, among its last 12. Fill it first");
  });
});
