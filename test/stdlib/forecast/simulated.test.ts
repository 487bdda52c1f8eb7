import { describe, expect, it } from "vitest";
import { fit } from "../../../stdlib/arma/fit.ts";
import type { FitOptions } from "../../../stdlib/arma/model.ts";
import { forecast, forecasting } from "../../../stdlib/forecast/forecast.ts";
import { withPauses } from "../../../stdlib/forecast/gradual.ts";
import { drawsOf, normalPaths, pathAt, sumsOver, undoPaths } from "../../../stdlib/forecast/paths.ts";
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
  it("begin alike however many are asked for", () => {
    expect(pathAt(normalPaths(mean, factor, 50, 9), 7)).toEqual(pathAt(normalPaths(mean, factor, 1000, 9), 7));
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

describe("a gap among the last values", () => {
  it("is no hindrance to a fit, which works on the levels; a rule on the differences says where the gap is", () => {
    const found = forecast(model(airline([138])), { horizon: 12 });
    expect(found.origin).toBe("1960-12");
    expect(Number.isFinite(found.median[6])).toBe(true);
    expect(() => forecast(rule.naive(applySteps(airline([138]), [{ step: "difference", lag: 12 }])), { horizon: 3 })).toThrow("passengers has no value at 1960-07, among its last 12. Fill it first");
  });
});
