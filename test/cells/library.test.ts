import { describe, expect, it } from "vitest";
import { language } from "../../cells/index.ts";
import { library } from "../../cells/library.ts";
import { stepFrom } from "../../cells/parts/stepFunctions.ts";
import { makeSeries } from "../../stdlib/index.ts";

const call = (name: string, ...given: readonly unknown[]): unknown => {
  const found = library.find((one) => one.name === name);
  if (!found) throw new Error(`no function ${name}`);
  return found.call(...given);
};
const crossings = makeSeries({ name: "crossings", unit: "vehicles", every: "P1M", start: "2015-01", values: Float64Array.from({ length: 60 }, (_, t) => 100 + t + 10 * Math.sin((2 * Math.PI * t) / 12)) });

describe("the library", () => {
  it("has every function that the language promises", () => {
    const promised = [
      "acf", "pacf", "ccf", "ljungBox", "boxPierce", "adf", "kpss", "phillipsPerron", "jarqueBera", "archLM", "durbinWatson", "spectrum", "estimateLambda",
      "psi", "halfLife", "theoreticalAcf", "simulate", "rule.naive", "rule.seasonalNaive", "rule.drift", "rule.average", "rule.smoothing", "rule.combine",
      "mae", "rmse", "mape", "smape", "mase", "pinball", "crps", "dieboldMariano", "pulse", "levelShift", "ramp", "harmonics", "tradingDays", "easterEffect",
      "mean", "sd", "variance", "first", "last", "at", "between", "lagged", "combine", "range", "round", "sum", "min", "max", "abs", "sqrt", "exp", "log",
      "boxCox", "difference", "scale", "perDay", "detrend", "seasonallyAdjust", "fill", "aggregate",
    ];
    expect(promised.filter((name) => !library.some((one) => one.name === name))).toEqual([]);
  });
  it("has each name once, none that of a kind, each with a signature and a sentence", () => {
    const names = library.map((one) => one.name);
    expect(new Set(names).size).toBe(names.length);
    expect(names.filter((name) => language.kinds.some((kind) => kind.name === name))).toEqual([]);
    for (const one of library) {
      expect(one.signature.startsWith(`${one.name}(`), one.name).toBe(true);
      expect(one.sentence, one.name).toMatch(/\.$/);
    }
  });
  it("the kinds that are functions are those of the language", () => {
    expect(language.kinds.filter((kind) => kind.callable).map((kind) => kind.name)).toEqual(["transform", "decomposition", "stationarity", "correlogram", "fit", "diagnostics", "compare", "forecast"]);
  });
  it("every function refuses to be called with nothing, or says what it is", () => {
    for (const one of library) {
      let message = "";
      try { one.call(); } catch (error) { message = (error as Error).message; }
      if (message === "") expect(["tradingDays", "log", "perDay", "difference", "detrend", "seasonallyAdjust", "fill"], one.name).toContain(one.name);
      else expect(message, one.name).toMatch(/not given; give/);
    }
  });
});

describe("arguments", () => {
  it.each<[string, readonly unknown[], string]>([
    ["acf", [3, 2], "acf: series is the number 3; give a series or a list of numbers, as in acf(series, lags)"],
    ["acf", [crossings], "acf: lags is not given; give a whole number, 0 or more"],
    ["acf", [crossings, 2.5], "acf: lags is the number 2.5"],
    ["acf", [crossings, 500], "acf: lags is 500, expected a whole number from 0 to 59"],
    ["acf", [crossings, 5, 6], "3 arguments are given, and it takes 2: acf(series, lags)"],
    ["pacf", [crossings, 5, "yule"], 'pacf: how is the text "yule"; give "levinson" or "regression" or "burg"'],
    ["adf", [crossings, { trends: "none" }], 'options has no "trends"; it takes trend, lags, maxLags'],
    ["at", [crossings, 2015], 'at: time is the number 2015; quote the date, as in "2015"'],
    ["lagged", [{ a: crossings }, 1], "(here perhaps `.a`)"],
    ["combine", [crossings, crossings, 3], "give a function such as (x, y) => x / y"],
    ["sqrt", [-1], "a square root takes 0 or more"],
    ["sqrt", ["4"], "sqrt: x is the text"],
    ["range", [0, 1e9], "more than 1000000"],
    ["range", [0, 1, 0], "has no end"],
    ["rule.smoothing", [crossings, { seasonal: true }], 'options has no "seasonal"'],
    ["rule.combine", [[crossings]], "give a list of fits and rules"],
    ["pinball", [1, 2, 5], "give a number between 0 and 1"],
    ["harmonics", [12, 9], "expected a whole number from 1 to 6"],
    ["psi", [crossings, 3], "give a fit, or coefficients such as {phi: [0.5], theta: [0.3]}"],
    ["psi", [{ phi: 0.5 }, 3], "write phi as a list from lag 1 on, as in phi: [0.5]"],
    ["psi", [{ phi: [0.5], teta: [0.3] }, 3], "leave out teta, which is no part of a model: that is made of phi, theta, seasonalPhi"],
    ["halfLife", [{ phi: [NaN] }], "give finite numbers in phi, 0 for a lag that is left out"],
    ["simulate", [{ phi: [0.5], sigma2: -1 }, 10], "give a variance above 0 for sigma2, which is -1"],
    ["theoreticalAcf", [{ seasonalPhi: [0.5], length: 12 }, 3], "(the season's length is seasonLength)"],
    ["impulseResponse", [{ phi: [0.5], differences: [0] }, 3], "give the lags, whole numbers from 1 on"],
  ])("%s refuses in words, case %#", (name, given, message) => {
    expect(() => call(name, ...given)).toThrow(message);
  });
});

describe("what the functions give", () => {
  it("theory of given coefficients: memory, effect on the levels, roots, a long simulation with the long-run variance", () => {
    // Worked by hand: an AR(1) at 0.5; a random walk whose shocks lose 0.4 of their effect.
    expect(call("psi", { phi: [0.5] }, 3)).toEqual(Float64Array.of(1, 0.5, 0.25, 0.125));
    expect(Array.from(call("impulseResponse", { theta: [-0.4], differences: [1] }, 2) as Float64Array)).toEqual([1, 0.6, 0.6]);
    expect((call("roots", { phi: [0.5], theta: [-0.25] }) as { ar: unknown; ma: unknown })).toEqual({ ar: [{ re: 2, im: 0, modulus: 2 }], ma: [{ re: 4, im: 0, modulus: 4 }] });
    const { values } = call("simulate", { phi: [0.5], sigma2: 3, mean: 7 }, 20_000, 1) as { values: Float64Array };
    const mean = values.reduce((a, b) => a + b) / values.length, variance = values.reduce((a, b) => a + (b - mean) ** 2, 0) / values.length;
    // Four standard errors: of a mean, sqrt(sigma2) / (1 - phi) / sqrt(n); of a variance, var sqrt(2 (1 + phi^2) / (1 - phi^2) / n).
    expect(Math.abs(mean - 7)).toBeLessThan(4 * 2 * Math.sqrt(3 / 20_000));
    expect(Math.abs(variance / 4 - 1)).toBeLessThan(4 * Math.sqrt(2 * (1.25 / 0.75) / 20_000));
    expect(call("longRun", { phi: [0.5], sigma2: 3, mean: 7 })).toEqual({ mean: 7, variance: 4 });
  });
  it("plain ones", () => {
    expect(call("range", 0, 1, 0.25)).toEqual([0, 0.25, 0.5, 0.75, 1]);
    expect(call("range", 3, 1, -1)).toEqual([3, 2, 1]);
    expect(call("range", 1, 0)).toEqual([]);
    expect([call("round", 2.5), call("round", -2.5), call("round", 1.005, 2), call("round", 1234, -2), call("round", 1e-7, 3), call("round", NaN)]).toEqual([3, -3, 1.01, 1200, 0, NaN]);
    expect([call("sum", [1, 2, NaN]), call("sum", 1, 2, 3), call("min", 4, 2), call("max", crossings), call("max", [])]).toEqual([3, 6, 2, Math.max(...crossings.values), NaN]);
    expect([call("log", Math.E), call("exp", 0), call("abs", -2), call("sqrt", 9)]).toEqual([1, 1, 2, 3]);
  });
  it("steps are steps or series by what they are given", () => {
    const log = library.find((one) => one.name === "log")?.call;
    expect(stepFrom(log)).toEqual({ step: "log" });
    expect(call("difference", 12)).toEqual({ step: "difference", lag: 12 });
    expect((call("difference", crossings, 12) as typeof crossings).n).toBe(48);
  });
  it("series ones", () => {
    const ratio = call("combine", crossings, 2, (x: number, y: number) => x / y) as typeof crossings;
    expect(ratio.values[0]).toBe(50);
    expect(call("at", crossings, "2015-01")).toBe(100);
    expect((call("between", crossings, null, "2015") as typeof crossings).n).toBe(12);
    expect([call("mean", [1, 2, 6]), call("last", [1, 2]), call("sd", [1, 3])]).toEqual([3, 2, Math.SQRT2]);
    expect([call("last", crossings.times), call("first", crossings), call("first", [])]).toEqual(["2019-12", 100, NaN]);
  });
  it("theory, by hand: an AR(1) with 0.5", () => {
    const acf = call("theoreticalAcf", { phi: [0.5] }, 3) as Float64Array;
    [1, 0.5, 0.25, 0.125].forEach((v, k) => { expect(acf[k]).toBeCloseTo(v, 12); });
  });
  it("a decomposition is three series that add up to what was given", () => {
    for (const name of ["stl", "decompose"]) {
      const { trend, seasonal, remainder } = call(name, crossings) as Record<string, typeof crossings>;
      expect(trend.name).toBe("trend of crossings");
      crossings.values.forEach((v, t) => { if (!Number.isNaN(trend.values[t])) expect(trend.values[t] + seasonal.values[t] + remainder.values[t]).toBeCloseTo(v, 9); });
    }
  });
  it("tables of orders have a row for each pair of orders", () => {
    // A pure trend and season is foretold exactly, which no table of orders can speak of: some noise beside it.
    const noisy = makeSeries({ ...crossings, values: crossings.values.map((v, t) => v + ((t * 7919) % 101) / 10) });
    const { rows } = call("extendedAcf", noisy, 2, 3) as { rows: { ar: number; ma: number }[] };
    expect([rows.length, rows[5]]).toEqual([12, expect.objectContaining({ ar: 1, ma: 1 })]);
    expect((call("prewhitenedCcf", crossings, crossings, 4) as { lags: Int32Array }).lags.length).toBe(9);
  });
  it("estimateLambda is a number, or says why there is none", () => {
    expect(call("estimateLambda", crossings, "likelihood")).toBeTypeOf("number");
    expect(() => call("estimateLambda", [1, 2, -3, 4, 5, 6, 7, 8, 9, 10])).toThrow(/^estimateLambda: /);
  });
  it("errors, by hand", () => {
    expect(call("mae", [1, 2, 4], [1, 3, 2])).toBe(1);
    expect(call("mase", [3], [5], [1, 2, 3], 1)).toBe(2);
  });
  it("rules and regressors are plain data", () => {
    expect(call("rule.naive", crossings)).toMatchObject({ rule: "naive", label: "naive" });
    expect(call("rule.combine", { a: call("rule.naive", crossings), b: call("rule.drift", crossings) })).toMatchObject({ rule: "combine" });
    expect(call("pulse", "2020-03")).toEqual({ intervention: "pulse", at: "2020-03" });
    expect(call("tradingDays")).toEqual({ intervention: "tradingDays" });
  });
});
