import { describe, expect, it } from "vitest";
import { fit } from "../../../stdlib/arma/fit.ts";
import type { FitOptions, Held, Regressor } from "../../../stdlib/arma/model.ts";
import { forecast } from "../../../stdlib/forecast/forecast.ts";
import { levelShift } from "../../../stdlib/forecast/interventions.ts";
import { rule } from "../../../stdlib/forecast/rules.ts";
import { makeSeries, type Series } from "../../../stdlib/series/series.ts";
import { applySteps, type Step } from "../../../stdlib/series/steps.ts";
import { allowed, cases, referenceSeries, transformed, type Case } from "./reference.ts";

interface Model { arLags: number[]; d: number; maLags: number[]; constant: boolean; seasonal?: { period: number; arLags: number[]; D: number; maLags: number[] }; regressors?: ({ kind: string; centre: number } | { series: string; transform: string[] })[] }
interface Inputs { model: Model; horizon: number; backTransform?: "log"; params?: { ar?: number[]; ma?: number[]; sar?: number[]; sma?: number[]; constant?: number; beta?: number[]; sigma2: number } }
type Out = Readonly<Record<string, number[]>>;

const dense = (lags: readonly number[], values: readonly number[] | undefined): Held[] => {
  const out: Held[] = Array.from({ length: Math.max(0, ...lags) }, () => 0);
  lags.forEach((lag, i) => { out[lag - 1] = values?.[i] ?? "free"; });
  return out;
};

/** The case's question in our own words. A log is a step of ours where the case takes its forecasts back through it. */
function question(c: Case<Inputs, Out>): FitOptions {
  const { model, params } = c.inputs, s = model.seasonal, period = s?.period ?? 1, back = c.inputs.backTransform === "log";
  const values = transformed({ series: c.series, transform: back ? c.transform.filter((t) => t !== "log") : c.transform });
  const steps: Step[] = [...(back ? [{ step: "log" } as const] : []), ...Array.from({ length: model.d }, () => ({ step: "difference", lag: 1 }) as const), ...Array.from({ length: s?.D ?? 0 }, () => ({ step: "difference", lag: period }) as const)];
  const series = applySteps(makeSeries({ name: c.series ?? "x", values }), steps);
  const regressors: Record<string, Regressor> = {};
  model.regressors?.forEach((r, i) => { regressors[`x${i}`] = regressor(r, values.length, c.inputs.horizon); });
  return {
    series, ar: model.arLags, ma: model.maLags, mean: model.constant, regressors,
    ...(s ? { season: { length: period, ar: s.arLags, ma: s.maLags } } : {}),
    ...(params ? { hold: {
      phi: dense(model.arLags, params.ar), theta: dense(model.maLags, params.ma), seasonalPhi: dense(s?.arLags ?? [], params.sar), seasonalTheta: dense(s?.maLags ?? [], params.sma),
      sigma2: params.sigma2, ...(params.constant === undefined || !model.constant ? {} : { mean: params.constant }), beta: Object.fromEntries((params.beta ?? []).map((b, i) => [`x${i}`, b])),
    } } : {}),
  };
}

function regressor(r: NonNullable<Model["regressors"]>[number], n: number, horizon: number): Series {
  if ("kind" in r) return makeSeries({ name: "time", values: Array.from({ length: n + horizon }, (_, t) => t + 1 - r.centre) });
  return makeSeries({ name: r.series, values: transformed({ series: r.series, transform: r.transform }).slice(0, n + horizon) });
}

describe("forecasts by reference (conditional Gaussian, R 4.2.2, statsmodels 0.13.5; see test/reference)", () => {
  it.each(cases<Inputs, Out>("forecast", "forecast"))("$id", (c) => {
    const model = fit(question(c)), found = forecast(model, { horizon: c.inputs.horizon, levels: [0.8, 0.95] }), back = c.inputs.backTransform === "log";
    const near = (field: string, values: ArrayLike<number>): void => {
      const limit = allowed(c.tolerance, field, c.expected[field]);
      c.expected[field].forEach((x, h) => expect(Math.abs(values[h] - x), `${field}[${h}]: ${values[h]}, expected ${x}`).toBeLessThanOrEqual(limit));
    };
    near("se", found.se);
    if (!back) {
      near("point", found.mean); near("lower95", found.bands[1].low); near("upper80", found.bands[0].high);
    } else {
      near("median", found.median); near("meanLognormal", found.mean); near("lower95Back", found.bands[1].low); near("upper95Back", found.bands[1].high);
    }
  });
});

const airlineSeries = (): Series => { const { times, values } = referenceSeries("airline"); return makeSeries({ name: "passengers", unit: "thousands", every: "P1M", start: times[0], values }); };
const airlineFit = (steps: Step[] = [{ step: "log" }, { step: "difference", lag: 1 }, { step: "difference", lag: 12 }], more: Partial<FitOptions> = {}) =>
  fit({ series: applySteps(airlineSeries(), steps), ma: 1, season: { length: 12, ma: 1 }, ...more });

describe("totals, growth and probabilities", () => {
  it("a total of logs agrees with simulation from the joint distribution, within sampling error", () => {
    const found = forecast(airlineFit(), { horizon: 12, totals: "year", levels: [0.8], paths: 20_000, seed: 11 });
    const [total] = found.totals, sums = found.paths.map((p) => p.reduce((a, b) => a + b, 0)), n = sums.length;
    const mean = sums.reduce((a, b) => a + b, 0) / n, sd = Math.sqrt(sums.reduce((s, x) => s + (x - mean) ** 2, 0) / (n - 1));
    expect(total.from).toBe("1961");
    expect(Math.abs(mean - total.mean)).toBeLessThan(4 * total.se / Math.sqrt(n));
    expect(Math.abs(sd / total.se - 1)).toBeLessThan(4 / Math.sqrt(2 * n));
    // Far above the square root of the sum of variances, which would take the months for independent.
    expect(total.se).toBeGreaterThan(1.5 * Math.sqrt(found.sd.reduce((s, x) => s + x * x, 0)));
  });
  it("a part-year adds what was observed, exactly", () => {
    const model = airlineFit(undefined, { window: { to: "1960-09" } }), found = forecast(model, { horizon: 3, totals: [{ from: "1960-01", to: "1960-12" }], levels: [0.9] });
    const seen = airlineSeries().values.slice(132, 141).reduce((a, b) => a + b, 0);
    expect(found.totals[0].observed).toBe(9);
    expect(found.totals[0].mean - seen).toBeCloseTo(found.mean.reduce((a, b) => a + b, 0), 8);
    expect(found.heldOut?.times).toEqual(["1960-10", "1960-11", "1960-12"]);
  });
  it("without a log a total's limits are the normal's, and its variance that of the summed shocks", () => {
    // A random walk: the errors of steps 1 to 3 add up to 3 e1 + 2 e2 + e3.
    const walk = fit({ series: applySteps(makeSeries({ name: "x", values: [1, 2, 4, 3, 5, 6, 4, 7] }), [{ step: "difference", lag: 1 }]), hold: { sigma2: 4 } });
    const [total] = forecast(walk, { horizon: 3, totals: [{ from: "9", to: "11" }], levels: [0.95] }).totals;
    expect(total.mean).toBeCloseTo(21, 10);
    expect(total.se).toBeCloseTo(2 * Math.sqrt(14), 10);
    expect(total.bands[0].high).toBeCloseTo(21 + 1.959963984540054 * 2 * Math.sqrt(14), 8);
  });
  it("refuses a total beyond the horizon, and leaves a year out that is not whole, in words", () => {
    const model = airlineFit();
    expect(() => forecast(model, { horizon: 6, totals: "1961" })).toThrow("needs a horizon of 12 periods; it is 6");
    const found = forecast(model, { horizon: 6, totals: "year" });
    expect(found.totals).toEqual([]);
    expect(found.notes.find((n) => n.code === "part-year")?.text).toBe("No total for 1961 (the horizon ends with 1961-06). Give a span, as in {from: …, to: …}, to total a part of a year.");
  });
  it("says of a gap where it is, and of a slip what to write", () => {
    const s = airlineSeries(), naive = rule.naive(makeSeries({ ...s, values: s.values.map((v, t) => (s.times[t] === "1960-03" ? NaN : v)) }));
    expect(() => forecast(naive, { horizon: 12, totals: [{ from: "1960-01", to: "1961-12" }] })).toThrow("needs passengers at 1960-03, which is missing. Fill the gap, or total a span without it");
    expect(forecast(naive, { horizon: 12, totals: [{ from: "1960-04", to: "1961-12" }] }).totals[0].observed).toBe(9);
    expect(() => forecast(naive, { horizon: 12, totals: 1961 as never })).toThrow('1961 is a number; quote the year, as in "1961"');
    expect(() => forecast(naive, { horizon: 12, totals: [{ start: "1961-01" }] as never })).toThrow('as in {from: "2025-01", to: "2025-06"}');
  });
  it("growth is on the year before, and a threshold's probability is that of the quantile", () => {
    const found = forecast(airlineFit(), { horizon: 14, levels: [0.8], threshold: [450, 1e9] });
    expect(found.growth[0].median).toBeCloseTo(found.median[0] / 417 - 1, 10);
    expect(found.growth[13].median).toBeCloseTo(found.median[13] / found.median[1] - 1, 10);
    const ratios = forecast(airlineFit(), { horizon: 14, paths: 20_000 }).paths.map((p) => p[13] / p[1] - 1).sort((a, b) => a - b);
    expect(Math.abs(ratios[18_000] - found.growth[13].bands[0].high)).toBeLessThan(0.004);
    const at = forecast(airlineFit(), { horizon: 14, levels: [0.8], threshold: found.bands[0].high[4] });
    expect(at.passing[0].above[4]).toBeCloseTo(0.1, 9);
    expect(found.passing[1].ever).toBe(0);
    expect(found.passing[0].ever).toBeGreaterThanOrEqual(Math.max(...found.passing[0].above) - 0.02);
  });
});

describe("the way back", () => {
  it("a scale, days and a log undo exactly: the same forecasts as in other units", () => {
    const plain = forecast(airlineFit(), { horizon: 12 }), scaled = forecast(airlineFit([{ step: "scale", factor: 0.001 }, { step: "log" }, { step: "difference", lag: 1 }, { step: "difference", lag: 12 }]), { horizon: 12 });
    scaled.mean.forEach((m, h) => expect(m / plain.mean[h]).toBeCloseTo(1, 8));
    const days = forecast(rule.seasonalNaive(applySteps(airlineSeries(), [{ step: "perDay" }]), 12), { horizon: 12 });
    // February 1960 had 29 days, February 1961 has 28.
    expect(days.mean[1]).toBeCloseTo((391 / 29) * 28, 9);
  });
  it("a trend is extended, a season repeated, and what cannot be undone is said", () => {
    const line = makeSeries({ name: "x", every: "P1M", start: "2020-01", values: Array.from({ length: 36 }, (_, t) => 10 + 2 * t) });
    expect(forecast(rule.average(applySteps(line, [{ step: "detrend", degree: 1 }])), { horizon: 2 }).mean[1]).toBeCloseTo(10 + 2 * 37, 8);
    const season = makeSeries({ name: "x", every: "P3M", start: "2020-Q1", values: Array.from({ length: 24 }, (_, t) => 10 + [1, -2, 3, -2][t % 4]) });
    expect([...forecast(rule.average(applySteps(season, [{ step: "seasonallyAdjust" }])), { horizon: 5 }).mean].map((m) => Math.round(m * 1e6) / 1e6)).toEqual([11, 8, 13, 8, 11]);
    const years = forecast(rule.naive(applySteps(line, [{ step: "aggregate", to: "P1Y", how: "sum" }])), { horizon: 1 });
    expect(years.times).toEqual(["2023"]);
    expect(years.notes.some((n) => n.text.includes("forecasts are of the aggregated series"))).toBe(true);
  });
  it("the shape in the units of the data is told with what was taken out", () => {
    const line = makeSeries({ name: "x", every: "P3M", start: "2018-Q1", values: Array.from({ length: 24 }, (_, t) => 10 + 2 * t + [1, -2, 3, -2][t % 4] + Math.cos(t * t)) });
    expect(forecast(rule.average(applySteps(line, [{ step: "detrend", degree: 1 }, { step: "seasonallyAdjust" }])), { horizon: 2 }).shape).toMatch(/stands on the trend that was taken out, extended and the season that was taken out, repeated\.$/);
  });
  it("of logs that were averaged before the model no growth is given: a ratio of logs says nothing", () => {
    const rising = makeSeries({ name: "x", every: "P1M", start: "2018-01", values: Array.from({ length: 48 }, (_, t) => Math.exp(5 + t / 50)) });
    const found = forecast(rule.drift(applySteps(rising, [{ step: "log" }, { step: "aggregate", to: "P1Y", how: "mean" }])), { horizon: 2 });
    expect(found.growth).toEqual([]);
    expect(found.notes.find((n) => n.code === "not-undone")?.tone).toBe("caution");
    expect(forecast(rule.drift(applySteps(rising, [{ step: "aggregate", to: "P1Y", how: "mean" }, { step: "log" }])), { horizon: 2 }).growth).toHaveLength(2);
  });
  it("a detrended fit is no better informed than it should be: its mean comes back to the line", () => {
    const { values } = referenceSeries("lakehuron"), series = makeSeries({ name: "level", values });
    const found = forecast(fit({ series: applySteps(series, [{ step: "detrend", degree: 1 }]), ar: 2 }), { horizon: 60 });
    const x = (t: number) => t - (values.length - 1) / 2, slope = values.reduce((s, v, t) => s + x(t) * v, 0) / values.reduce((s, _, t) => s + x(t) ** 2, 0);
    expect(found.mean[59] - found.mean[58]).toBeCloseTo(slope, 4);
  });
});

describe("regressors", () => {
  const months = (n: number, from = "2020-01") => makeSeries({ name: "price", every: "P1M", start: from, values: Array.from({ length: n }, (_, t) => Math.sin(t) + 3) });
  const y = makeSeries({ name: "sales", every: "P1M", start: "2020-01", values: Array.from({ length: 40 }, (_, t) => 5 + 2 * (Math.sin(t) + 3) + Math.cos(1.7 * t)) });
  it("a series must be given its future, by name and date", () => {
    const model = fit({ series: y, ar: 1, regressors: { price: months(40) } });
    expect(() => forecast(model, { horizon: 3 })).toThrow("Regressor price ends 2023-04; the horizon needs 2023-07");
    expect(() => forecast(model, { horizon: 3, regressors: { cost: months(43) } })).toThrow("cost is no regressor");
    expect(() => forecast(model, { horizon: 3, regressors: months(43) as never })).toThrow("regressors is a series by itself; give it under the name that (1,0,0) uses, as in {price: price}");
    expect(forecast(model, { horizon: 3, regressors: { price: months(43) } }).mean).toEqual(forecast(fit({ series: y, ar: 1, regressors: { price: months(43) } }), { horizon: 3 }).mean);
  });
  it("an intervention extends by itself", () => {
    const model = fit({ series: y, ar: 1, regressors: { shift: levelShift("2021-01") } });
    expect(forecast(model, { horizon: 2 }).mean).toHaveLength(2);
  });
});

describe("how bands are made", () => {
  it("each kind says what it assumes, and the same seed gives the same limits", () => {
    const model = airlineFit();
    for (const bands of ["plugIn", "simulated", "calibrated"] as const) {
      const a = forecast(model, { horizon: 4, levels: [0.8], bands, seed: 2 }), b = forecast(model, { horizon: 4, levels: [0.8], bands, seed: 2 });
      expect(a.bands[0].high).toEqual(b.bands[0].high);
      expect(a.notes.some((n) => n.code.startsWith("bands-") && n.text.startsWith("Bands:"))).toBe(true);
    }
  });
  it("simulated bands of a short autoregression are wider than the plug-in ones, by about what the estimated mean costs", () => {
    const { values } = referenceSeries("sim_ar1_short"), model = fit({ series: makeSeries({ name: "x", values }), ar: 1 });
    const width = (bands: "plugIn" | "simulated") => { const [b] = forecast(model, { horizon: 8, levels: [0.9], bands }).bands; return b.high[7] - b.low[7]; };
    expect(width("simulated") / width("plugIn")).toBeGreaterThan(1.02);
    expect(width("simulated") / width("plugIn")).toBeLessThan(1.8);
  });
  it("calibrated bands undo a variance that was held twice too small", () => {
    const { values } = referenceSeries("sim_white"), series = makeSeries({ name: "x", values: values.slice(0, 300) }), sd = Math.sqrt(fit({ series }).sigma2);
    const held = fit({ series, hold: { sigma2: (sd / 2) ** 2 } }), found = forecast(held, { horizon: 1, levels: [0.8], bands: "calibrated" });
    expect((found.bands[0].high[0] - found.bands[0].low[0]) / (2 * 1.2816 * sd)).toBeGreaterThan(0.75);
    expect(found.notes.some((n) => n.text.includes("too narrow by a factor of"))).toBe(true);
    expect(() => forecast(fit({ series: makeSeries({ name: "x", values: values.slice(0, 25) }) }), { horizon: 3, bands: "calibrated" })).toThrow("at least 10 held-out origins");
  });
});

describe("the long-run shape", () => {
  it.each([
    [airlineFit, /repeats the season along a steady rate of growth/],
    [() => fit({ series: applySteps(airlineSeries(), [{ step: "difference", lag: 1 }]), ma: 1 }), /is flat, which is no fault/],
    [() => fit({ series: applySteps(airlineSeries(), [{ step: "difference", lag: 1 }]), ma: 1, mean: true }), /a straight line, with the drift/],
    [() => fit({ series: airlineSeries(), ar: 1 }), /returns to the mean/],
    [() => fit({ series: airlineSeries(), ar: 1, hold: { phi: [0.999] } }), /would return to the mean of the series, but so slowly .* goes on from the last values/],
    [() => fit({ series: airlineSeries(), season: { length: 12, ar: 1 }, hold: { seasonalPhi: [0.9999] } }), /but so slowly .* repeats the last seasons/],
  ])("case %#", (make, words) => { expect(forecast((make as () => ReturnType<typeof fit>)(), { horizon: 2 }).shape).toMatch(words); });
  it("promises no return where half of the way takes longer than the data", () => {
    const series = airlineSeries(), slow = fit({ series, ar: 1, hold: { phi: [0.999] } }), ahead = forecast(slow, { horizon: series.n }).mean;
    expect((ahead[series.n - 1] - slow.mean) / (series.values[series.n - 1] - slow.mean)).toBeGreaterThan(0.5);
  });
  it("is what the forecasts do: flat, line, mean", () => {
    const flat = forecast(fit({ series: applySteps(airlineSeries(), [{ step: "difference", lag: 1 }]), ma: 1 }), { horizon: 30 });
    expect(flat.mean[29]).toBeCloseTo(flat.mean[2], 8);
    const mean = fit({ series: makeSeries({ name: "x", values: referenceSeries("sim_ar1_short").values }), ar: 1 });
    expect(forecast(mean, { horizon: 400 }).mean[399]).toBeCloseTo(mean.mean, 6);
  });
});

describe("held-out data", () => {
  it("come from a longer version of the data where the sample was cut before the steps", () => {
    const s = airlineSeries(), early = makeSeries({ name: s.name, every: s.every, start: s.start, values: s.values.slice(0, 132) });
    const model = fit({ series: applySteps(early, [{ step: "log" }, { step: "difference", lag: 1 }, { step: "difference", lag: 12 }]), ma: 1, season: { ma: 1 } });
    expect(forecast(model, { horizon: 12 }).heldOut).toBe(null);
    expect([...forecast(model, { horizon: 12, data: s }).heldOut!.values]).toEqual(Array.from(s.values.subarray(132)));
  });
});
