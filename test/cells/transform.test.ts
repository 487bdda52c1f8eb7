import { describe, expect, it } from "vitest";
import { stepCalls } from "../../cells/parts/stepFunctions.ts";
import { transform } from "../../cells/transform.ts";
import { makeSeries, stepText } from "../../stdlib/index.ts";
import { contextOf, runCell } from "./context.ts";
import { draw } from "./parts/draw.ts";

const crossings = makeSeries({ name: "crossings", unit: "vehicles", every: "P1M", start: "2015-02", values: Float64Array.from({ length: 60 }, (_, t) => 100 + t) });
const { log, difference, aggregate, boxCox, perDay } = stepCalls;

describe("transform", () => {
  it("takes bare names and calls, in their order, after the window", async () => {
    const s = await runCell(transform, { series: crossings, window: { to: "2017" }, steps: [log, difference(1), difference(12)] }, contextOf({ name: "steady" }));
    expect([s.name, s.start, s.times[s.n - 1]]).toEqual(["steady", "2016-03", "2017-12"]);
    expect(s.steps.map(stepText)).toEqual(["log", "difference(1)", "difference(12)"]);
    expect(s.steps[0].before.name).toBe("crossings");
  });
  it("shows the series with the steps in words", async () => {
    const s = await runCell(transform, { series: crossings, steps: [log, difference] }, contextOf({ name: "steady" }));
    const [text, chart] = transform.show(s, { name: "steady", width: 700 });
    expect(text).toMatchObject({ part: "text" });
    if (text.part !== "text" || chart.part !== "chart") throw new Error("expected a text and a chart");
    expect(text.text).toBe("Steady is crossings after log and difference(1).");
    expect((await draw(chart)).warnings).toEqual([]);
  });
  it("says of no steps that the series is as it came", async () => {
    const s = await runCell(transform, { series: crossings, steps: [] }, contextOf({ name: "steady" }));
    expect(transform.show(s, { name: "steady", width: 700 })[0]).toMatchObject({ text: "Steady takes no step: it is the series as it came." });
  });
  it("says what aggregating dropped", async () => {
    const context = contextOf({ name: "yearly" });
    const s = await runCell(transform, { series: crossings, steps: [aggregate("year", "sum")] }, context);
    expect([s.start, s.n]).toEqual(["2016", 4]);
    expect(context.notes[0]).toContain("12 periods of crossings");
  });
  it.each<[Record<string, unknown>, string, string]>([
    [{ steps: [boxCox] }, "step 1, boxCox: lambda is not given; give a number such as 0.5, as in boxCox(0.5)", "steps"],
    [{ steps: ["log"] }, "item 1 of `steps` is no step", "steps"],
    [{ steps: [difference(100)] }, "step 1, difference(100): crossings has 60 values", "steps"],
    [{ steps: [(x: unknown) => x] }, "item 1 of `steps` is no step", "steps"],
    [{ window: { from: "2040" }, steps: [] }, "2040 lies after the last period", "window"],
    [{ steps: log }, "expected a list", "steps"],
  ])("refuses in words, case %#", async (options, message, option) => {
    await expect(runCell(transform, { series: crossings, ...options })).rejects.toMatchObject({ message: expect.stringContaining(message) as unknown, option });
  });
});

describe("step functions", () => {
  it("are steps without a series and series with one, and log works on numbers", () => {
    expect(difference(12)).toEqual({ step: "difference", lag: 12 });
    expect(difference()).toEqual({ step: "difference", lag: 1 });
    expect(log(Math.E)).toBe(1);
    expect(log()).toEqual({ step: "log" });
    expect((difference(crossings, 2) as { n: number }).n).toBe(58);
    expect((perDay(crossings) as { unit: string }).unit).toBe("vehicles per day");
    expect(() => difference("12")).toThrow('difference: lag is "12"; give a whole number of periods');
    expect(() => aggregate(crossings)).toThrow("aggregate: to is not given");
  });
});
