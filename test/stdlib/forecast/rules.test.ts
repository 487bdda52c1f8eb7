import { describe, expect, it } from "vitest";
import { forecast } from "../../../stdlib/forecast/forecast.ts";
import { rule } from "../../../stdlib/forecast/rules.ts";
import { makeSeries } from "../../../stdlib/series/series.ts";
import { applySteps } from "../../../stdlib/series/steps.ts";
import { allowed, cases, referenceSeries, transformed } from "./reference.ts";

const numbered = (values: ArrayLike<number>) => makeSeries({ name: "x", values });
const monthly = (id: string) => { const { times, values } = referenceSeries(id); return makeSeries({ name: id, every: "P1M", start: times[0], values }); };

describe("rules by reference (R 4.2.2 by formula, numpy; see test/reference)", () => {
  type Inputs = { method: "mean" | "naive" | "drift" | "seasonalNaive"; horizon: number; period: number };
  it.each(cases<Inputs, { point: number[]; se: number[] }>("smoothing", "benchmark"))("$id", (c) => {
    const series = numbered(transformed(c)), { method, horizon, period } = c.inputs;
    const model = method === "mean" ? rule.average(series) : method === "naive" ? rule.naive(series) : method === "drift" ? rule.drift(series) : rule.seasonalNaive(series, period);
    const found = forecast(model, { horizon });
    for (const [field, values] of [["point", found.mean], ["se", found.se]] as const) {
      const limit = allowed(c.tolerance, field, c.expected[field]);
      c.expected[field].forEach((x, h) => expect(Math.abs(values[h] - x), `${field}[${h}]`).toBeLessThanOrEqual(limit));
    }
  });

  type Ets = { horizon: number; error: string; trend?: string; seasonal?: string; phi?: number; alpha: number; beta?: number; gamma?: number; level0: number; trend0?: number; seasonal0?: number[]; period?: number };
  it.each(cases<Ets, { point: number[]; se?: number[]; sigma2: number; logLik: number }>("smoothing", "ets"))("rule.smoothing with everything held: $id", (c) => {
    const i = c.inputs, kind = (text?: string) => (text === "mul" ? "multiplicative" : text === "add" ? "additive" : "none") as "none";
    const model = rule.smoothing(numbered(transformed(c)), { error: i.error === "mul" ? "multiplicative" : "additive", trend: kind(i.trend), season: kind(i.seasonal), length: i.period,
      damped: i.phi !== undefined, phi: i.phi, alpha: i.alpha, beta: i.beta, gamma: i.gamma, level0: i.level0, trend0: i.trend0, seasonal0: i.seasonal0 });
    const found = forecast(model, { horizon: i.horizon });
    c.expected.point.forEach((x, h) => expect(Math.abs(found.mean[h] - x)).toBeLessThanOrEqual(allowed(c.tolerance, "point", c.expected.point)));
    c.expected.se?.forEach((x, h) => expect(Math.abs(found.se[h] - x)).toBeLessThanOrEqual(allowed(c.tolerance, "se", c.expected.se ?? 0)));
    expect(model.parameters?.sigma2).toBeCloseTo(c.expected.sigma2, 6 - Math.ceil(Math.log10(c.expected.sigma2)));
    expect(model.parameters?.logLikelihood).toBeCloseTo(c.expected.logLik, 6);
  });
});

describe("smoothing with estimated weights", () => {
  it("is at a maximum: no nearby weights give a larger likelihood", () => {
    const series = numbered(referenceSeries("lakehuron").values), best = rule.smoothing(series, { trend: "additive", damped: true });
    const { alpha, beta, phi } = best.smoothing!.start;
    for (const [a, b, p] of [[0.02, 0, 0], [-0.02, 0, 0], [0, 0.02, 0], [0, -0.02, 0], [0, 0, -0.02]]) {
      // Within the region that is searched: alpha to 0.9999, beta from 0.0001 alpha, phi from 0.8 to 0.98.
      const held = { alpha: Math.min(0.9999, alpha + a), beta: Math.max(1e-4 * alpha, beta + b), phi: Math.min(0.98, Math.max(0.8, phi + p)) };
      const other = rule.smoothing(series, { trend: "additive", damped: true, ...held });
      expect(other.parameters!.logLikelihood).toBeLessThanOrEqual(best.parameters!.logLikelihood + 1e-6);
    }
  });
  it("finds the weight of R's HoltWinters when the level starts where R starts it (Nile: alpha 0.2465579, SSE 2038872)", () => {
    // R 4.2.2: HoltWinters(Nile, gamma = FALSE, beta = FALSE) starts at the first value and skips it.
    const { values } = referenceSeries("nile");
    const model = rule.smoothing(numbered(values.slice(1)), { level0: values[0] });
    expect(model.parameters!.alpha).toBeCloseTo(0.2465579, 4);
    expect(model.parameters!.sigma2 * 99).toBeCloseTo(2038872, -1);
  });
  it("knows the scale: a thousand times the data gives the same weights and a thousand times the forecasts", () => {
    const { values } = referenceSeries("usaccdeaths"), a = rule.smoothing(numbered(values), { season: "additive", length: 12 }), b = rule.smoothing(numbered(values.map((v) => 1000 * v)), { season: "additive", length: 12 });
    expect(b.parameters!.alpha).toBeCloseTo(a.parameters!.alpha, 6);
    forecast(b, { horizon: 12 }).mean.forEach((m, h) => expect(m / 1000).toBeCloseTo(forecast(a, { horizon: 12 }).mean[h], 2));
  });
  it("refuses a multiplicative season of values at or below 0, in words", () => {
    expect(() => rule.smoothing(numbered([1, 2, 0, 4, 5, 6, 7, 8, 9, 10, 11, 12]), { season: "multiplicative", length: 2 })).toThrow("value 3 is 0");
  });
  it("multiplicative bands come from paths: they widen, and the same seed gives the same limits", () => {
    const model = rule.smoothing(monthly("airline"), { trend: "additive", season: "multiplicative" });
    const a = forecast(model, { horizon: 24, levels: [0.8], seed: 3 }), b = forecast(model, { horizon: 24, levels: [0.8], seed: 3 });
    expect(a.bands[0].high).toEqual(b.bands[0].high);
    expect(a.bands[0].high[23] - a.bands[0].low[23]).toBeGreaterThan(a.bands[0].high[11] - a.bands[0].low[11]);
  });
});

describe("rules by edge", () => {
  it("a gap at the end widens the naive rule's bands, and one in a season takes the season before", () => {
    const gap = forecast(rule.naive(numbered([1, 2, 4, NaN])), { horizon: 1 });
    expect(gap.mean[0]).toBe(4);
    expect(gap.se[0]).toBeCloseTo(Math.sqrt(2 * (1 + 4) / 2), 12);
    expect(forecast(rule.seasonalNaive(numbered([1, 2, 3, NaN]), 2), { horizon: 2 }).mean).toEqual(Float64Array.of(3, 2));
  });
  it("two values, one value, none", () => {
    expect(forecast(rule.naive(numbered([1, 2])), { horizon: 1 }).se[0]).toBe(1);
    expect(() => rule.naive(numbered([1]))).toThrow("at least 2");
    expect(() => rule.drift(numbered([1, 2]))).toThrow("at least 3");
    expect(() => rule.combine([])).toThrow("at least one");
  });
  it("a constant series has bands of no width", () => {
    expect(forecast(rule.drift(numbered([5, 5, 5, 5])), { horizon: 3, levels: [0.9] }).bands[0].low).toEqual(Float64Array.of(5, 5, 5));
  });
  it("smoothing takes a constant, and whole numbers of 1e15 on a line", () => {
    expect(forecast(rule.smoothing(numbered(new Float64Array(30).fill(7)), { trend: "additive" }), { horizon: 2 }).mean).toEqual(Float64Array.of(7, 7));
    const line = forecast(rule.smoothing(numbered(Float64Array.from({ length: 40 }, (_, t) => 1e15 + t)), { trend: "additive" }), { horizon: 2 });
    expect(line.mean[1] - 1e15).toBeCloseTo(41, 0);
  });
  it("a combination lies half-way between two members, limits and all", () => {
    const s = monthly("airline"), logged = applySteps(s, [{ step: "log" }]);
    const a = rule.drift(logged), b = rule.seasonalNaive(s), c = rule.combine([a, b]);
    const [fa, fb, fc] = [a, b, c].map((m) => forecast(m, { horizon: 6, levels: [0.9] }));
    fc.bands[0].low.forEach((x, h) => expect(x).toBeCloseTo((fa.bands[0].low[h] + fb.bands[0].low[h]) / 2, 9));
    fc.mean.forEach((x, h) => expect(x).toBeCloseTo((fa.mean[h] + fb.mean[h]) / 2, 9));
  });
});
