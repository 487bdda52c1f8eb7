import * as fc from "fast-check";
import { describe, expect, it } from "vitest";
import { stl } from "../../../stdlib/decompose/stl.ts";
import { combine, lagged } from "../../../stdlib/series/align.ts";
import { cut, slice } from "../../../stdlib/series/cut.ts";
import { polynomialTrend } from "../../../stdlib/series/detrend.ts";
import { inferEvery } from "../../../stdlib/series/inferEvery.ts";
import { parsePeriod } from "../../../stdlib/series/period.ts";
import { isSeries, makeSeries, valuesOf } from "../../../stdlib/series/series.ts";
import { applyStep, applySteps, original, stepText, type Step } from "../../../stdlib/series/steps.ts";
import { at, between, first, last, mean, sd, variance } from "../../../stdlib/series/summary.ts";

const monthly = (values: ArrayLike<number>, start = "2019-01") => makeSeries({ name: "crossings", unit: "vehicles", every: "P1M", start, values });

describe("steps", () => {
  it("log, difference and difference at the season remember what they were given", () => {
    const raw = monthly(Array.from({ length: 26 }, (_, t) => 100 * 1.01 ** t * (t % 12 === 0 ? 2 : 1)));
    const steady = applySteps(raw, [{ step: "log" }, { step: "difference", lag: 1 }, { step: "difference", lag: 12 }]);
    expect(steady.n).toBe(13);
    expect(steady.start).toBe("2020-02");
    expect(Math.max(...steady.values.map(Math.abs))).toBeLessThan(1e-13);
    expect(steady.steps.map(stepText)).toEqual(["log", "difference(1)", "difference(12)"]);
    expect(steady.steps[1].before.values[0]).toBe(Math.log(200));
    expect(original(steady)).toBe(raw);
  });
  it("boxCox is (x^lambda - 1) / lambda, and nearly the log for tiny lambda", () => {
    expect(applyStep(monthly([4]), { step: "boxCox", lambda: 0.5 }).values[0]).toBeCloseTo(2, 14);
    expect(applyStep(monthly([4]), { step: "boxCox", lambda: 0 }).values[0]).toBe(Math.log(4));
    expect(applyStep(monthly([4]), { step: "boxCox", lambda: 1e-12 }).values[0]).toBeCloseTo(Math.log(4), 11);
    expect(applyStep(monthly([0]), { step: "boxCox", lambda: 0.5 }).values[0]).toBe(-2);
  });
  it("perDay divides by the days of each month, leap years too", () => {
    const s = applyStep(monthly([310, 290], "2020-01"), { step: "perDay" });
    expect([...s.values]).toEqual([10, 10]);
    expect(s.unit).toBe("vehicles per day");
  });
  it("missing values stay missing through every step", () => {
    const s = applySteps(monthly([1, NaN, 3, 4]), [{ step: "log" }, { step: "difference", lag: 1 }]);
    expect([...s.values].map(Number.isNaN)).toEqual([true, true, false]);
  });
  it("detrend takes a line away exactly, gaps or not", () => {
    const s = applyStep(monthly([1, 3, NaN, 7, 9]), { step: "detrend", degree: 1 });
    expect(Math.max(...[0, 1, 3, 4].map((t) => Math.abs(s.values[t])))).toBeLessThan(1e-13);
    expect(s.steps[0].removed?.[2]).toBeCloseTo(5, 13);
  });
  it("a polynomial trend of degree 5 extends a polynomial of degree 5", () => {
    const f = (t: number): number => 3 - t + 0.2 * t ** 2 - 1e-4 * t ** 5;
    const trend = polynomialTrend(Float64Array.from({ length: 40 }, (_, t) => f(t)), 5);
    expect(trend(45) / f(45)).toBeCloseTo(1, 9);
  });
  it("seasonallyAdjust takes STL's seasonal part away, gaps or not, and remembers its length", () => {
    const figure = [5, -5, 0, 3, -3, 0, 1, -1, 2, -2, 4, -4];
    const values = Array.from({ length: 96 }, (_, t) => 10 + 0.1 * t + figure[t % 12]);
    const raw = monthly(values), s = applyStep(raw, { step: "seasonallyAdjust" });
    expect(stepText(s.steps[0])).toBe("seasonallyAdjust(12)");
    expect([...(s.steps[0].removed ?? [])]).toEqual([...stl(raw, { length: 12, seasonalWindow: 13 }).seasonal]);
    s.values.forEach((v, t) => { expect(v + (s.steps[0].removed?.[t] ?? NaN)).toBeCloseTo(values[t], 12); });
    // What is left of the season is small beside the season itself (sd 3).
    expect(sd(s.values.map((v, t) => v - 10 - 0.1 * t))).toBeLessThan(0.15);
    const holed = applyStep(monthly(values.map((v, t) => (t === 50 ? NaN : v))), { step: "seasonallyAdjust" });
    expect([holed.values[50], holed.steps[0].removed?.[50]].map((v) => Number.isNaN(v))).toEqual([true, false]);
  });
  it("fill works on a line, from before, and by an autoregression", () => {
    expect([...applyStep(monthly([NaN, 1, NaN, NaN, 4, NaN]), { step: "fill", how: "linear" }).values]).toEqual([1, 1, 2, 3, 4, 4]);
    expect([...applyStep(monthly([NaN, 1, NaN, 4, NaN]), { step: "fill", how: "previous" }).values]).toEqual([NaN, 1, 1, 4, 4]);
    const wave = Array.from({ length: 120 }, (_, t) => Math.sin((2 * Math.PI * t) / 12));
    const holed = wave.map((v, t) => (t === 40 || t === 41 || t === 77 ? NaN : v));
    const result = applyStep(monthly(holed), { step: "fill", how: "model" }).values;
    for (const t of [40, 41, 77]) expect(result[t]).toBeCloseTo(wave[t], 2);
    expect(result[39]).toBe(wave[39]);
  });
  it("aggregate drops periods that are not whole, and keeps a gap a gap", () => {
    const s = applyStep(monthly([1, 2, 3, 4, 5, 6, NaN, 8, 9, 10], "2018-12"), { step: "aggregate", to: "quarter", how: "sum" });
    expect(s.times).toEqual(["2019-Q1", "2019-Q2", "2019-Q3"]);
    expect([...s.values]).toEqual([9, NaN, 27]);
    expect(s.every).toBe("P3M");
    const days = makeSeries({ name: "d", every: "P1D", start: "2019-12-30", values: Array.from({ length: 15 }, (_, i) => i) });
    expect(applyStep(days, { step: "aggregate", to: "week", how: "mean" }).times).toEqual(["2020-W01", "2020-W02"]);
    const weeks = makeSeries({ name: "w", every: "P1W", start: "2019-W01", values: new Float64Array(105).fill(1) });
    expect([...applyStep(weeks, { step: "aggregate", to: "year", how: "sum" }).values]).toEqual([52, 53]);
    const hours = makeSeries({ name: "h", every: "PT1H", start: "2019-01-01T00:00Z", values: new Float64Array(49).fill(2) });
    expect([...applyStep(hours, { step: "aggregate", to: "day", how: "sum" }).values]).toEqual([48, 48]);
  });
  it.each<[Step, string]>([
    [{ step: "log" }, "log: crossings is 0 at 2019-02; logs take positive numbers only"],
    [{ step: "boxCox", lambda: 0 }, "positive numbers only"],
    [{ step: "difference", lag: 3 }, "difference(3): crossings has 3 values; a difference at lag 3 needs at least 4"],
    [{ step: "difference", lag: 0.5 }, "give a whole number of periods"],
    [{ step: "scale", factor: 0 }, "give a number other than 0"],
    [{ step: "detrend", degree: 3 }, "needs at least 4"],
    [{ step: "seasonallyAdjust" }, "two whole seasons (24) are needed"],
    [{ step: "aggregate", to: "week", how: "sum" }, "choose a longer period"],
  ])("refuses %j in words", (step, message) => {
    expect(() => applyStep(monthly([1, 0, 2]), step)).toThrow(message);
  });
});

describe("cut", () => {
  it("equals cutting first and stepping after, for every step", () => {
    const raw = monthly(Array.from({ length: 72 }, (_, t) => 50 + t + 10 * Math.cos((2 * Math.PI * t) / 12) + (t * 7919) % 13));
    const lists: Step[][] = [
      [{ step: "log" }, { step: "difference", lag: 1 }, { step: "difference", lag: 12 }],
      [{ step: "detrend", degree: 1 }], [{ step: "seasonallyAdjust", length: 12 }, { step: "difference", lag: 1 }],
      [{ step: "aggregate", to: "quarter", how: "sum" }, { step: "log" }],
    ];
    for (const steps of lists) {
      const late = cut(applySteps(raw, steps), { to: "2023-12" });
      const early = applySteps(cut(raw, { to: "2023-12" }), steps);
      expect(late.times).toEqual(early.times);
      expect([...late.values]).toEqual([...early.values]);
      expect(original(late).n).toBe(60);
      expect(late.steps.map((s) => s.before.n)).toEqual(early.steps.map((s) => s.before.n));
    }
  });
  it("keeps the values before the window that a difference started from", () => {
    const s = cut(applyStep(monthly([1, 2, 4, 7, 11]), { step: "difference", lag: 1 }), { from: "2019-03" });
    expect([...s.values]).toEqual([2, 3, 4]);
    expect([...s.steps[0].before.values]).toEqual([2, 4, 7, 11]);
  });
  it("keeps what came later beside the data, not in them, through two cuts and any steps", () => {
    const raw = monthly([1, 2, 4, 7, 11, 16]);
    const once = cut(raw, { to: "2019-05" });
    const twice = cut(applyStep(once, { step: "difference", lag: 1 }), { to: "2019-03" });
    expect([...(original(twice).later?.values ?? [])]).toEqual([7, 11, 16]);
    expect(original(twice).later?.start).toBe("2019-04");
    expect("later" in twice).toBe(false);
    expect(cut(raw, { from: "2019-02" }).later).toBeUndefined();
  });
  it("changing later data changes nothing earlier", () => {
    fc.assert(fc.property(fc.array(fc.double({ min: 1, max: 100, noNaN: true }), { minLength: 40, maxLength: 60 }), (values) => {
      const steps: Step[] = [{ step: "detrend", degree: 2 }, { step: "difference", lag: 1 }];
      const other = values.map((v, t) => (t < 30 ? v : v * 3));
      expect([...slice(applySteps(monthly(values), steps), 0, 29).values]).toEqual([...slice(applySteps(monthly(other), steps), 0, 29).values]);
    }), { seed: 5, numRuns: 30 });
  });
});

describe("small questions", () => {
  it("mean and spread leave missing values out and keep digits on a high level", () => {
    const s = monthly([1e9 + 1, NaN, 1e9 + 2, 1e9 + 3]);
    expect(mean(s)).toBe(1e9 + 2);
    expect(variance(s)).toBe(1);
    expect(sd([1, 2, 3, 4])).toBeCloseTo(Math.sqrt(5 / 3), 15);
    expect(mean([])).toBeNaN();
    expect(variance([1])).toBeNaN();
  });
  it("at, between, first, last", () => {
    const s = monthly([1, 2, 3]);
    expect(at(s, "2019-02")).toBe(2);
    expect(() => at(s, "2019")).toThrow("2019 covers 3 periods");
    expect(between(s, "2019-02").n).toBe(2);
    expect([first(s), last(s), first([])]).toEqual([1, 3, NaN]);
  });
  it("lagged looks k periods earlier", () => {
    expect([...lagged(monthly([1, 2, 3]), 1).values]).toEqual([NaN, 1, 2]);
    expect([...lagged(monthly([1, 2, 3]), -1).values]).toEqual([2, 3, NaN]);
  });
  it("combine works where both have data", () => {
    const s = combine(monthly([10, 20, 30]), monthly([2, 3, 4], "2019-02"), (x, y) => x / y);
    expect([s.start, s.n, ...s.values]).toEqual(["2019-02", 2, 10, 10]);
    expect(() => combine(monthly([1]), monthly([1], "2025-01"), (x) => x)).toThrow("share no period");
    expect([...combine(monthly([2, 4]), 2, (x, y) => x / y).values]).toEqual([1, 2]);
  });
  it("isSeries and valuesOf know a series from a list", () => {
    expect(isSeries(monthly([1]))).toBe(true);
    expect(isSeries([1])).toBe(false);
    expect([...valuesOf([1, null])]).toEqual([1, NaN]);
    expect(() => valuesOf(["a"] as unknown as number[])).toThrow('item 1 is the text "a"');
  });
});

describe("inferEvery", () => {
  const every = (...times: string[]) => inferEvery(times.map((t) => parsePeriod(t)!));
  it("finds the spacing, gaps or not", () => {
    expect(every("2019-01", "2019-02", "2019-04")).toBe("P1M");
    expect(every("2019-01-31", "2019-02-28", "2019-03-31")).toBe("P1M");
    expect(every("2019-01-15", "2019-04-15", "2019-07-15")).toBe("P3M");
    expect(every("2019-01-01", "2019-01-02", "2019-01-05")).toBe("P1D");
    expect(every("2019-01-07", "2019-01-14", "2019-01-28")).toBe("P1W");
    expect(every("2019-03-05T00:00", "2019-03-05T00:15", "2019-03-05T00:30")).toBe("PT15M");
    expect(every("-6000", "-5999")).toBe("P1Y");
    expect(every("2019-W01", "2019-W02")).toBe("P1W");
  });
  it("is null where the times fit no grid", () => {
    expect(every("2019-03-05T00:00:01.500", "2019-03-05T00:00:02.300", "2019-03-05T00:00:04.100")).toBeNull();
    expect(every("2019-01")).toBeNull();
  });
});
