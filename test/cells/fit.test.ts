import { describe, expect, test } from "vitest";
import { checkOptions } from "../../cells/check.ts";
import { fit } from "../../cells/fit.ts";
import { coefficientsOf } from "../../cells/parts/fitParts.ts";
import type { ChartPart, TablePart, TextPart } from "../../cells/parts/part.ts";
import { makeSeries, pulse } from "../../stdlib/index.ts";
import { madeContext } from "./madeContext.ts";
import { drawnCharts } from "./drawn.ts";
import { madeFit, madeSeries, stepped } from "./made.ts";

const show = { name: "candidate", width: 640 };
const texts = (parts: readonly { readonly part: string }[]): string => parts.filter((p): p is TextPart => p.part === "text").map(p => p.text).join(" ");
const run = (options: Record<string, unknown>) => fit.run(checkOptions(fit, options) as never, madeContext());
const numbered = (values: readonly number[]) => makeSeries({ name: "short", values: Float64Array.from(values) });

describe("fit shows", () => {
  test("what the model describes, on which scale, and how large its errors are", () => {
    const parts = fit.show(madeFit(), show);
    expect((parts[0] as TextPart).text).toBe("candidate describes the log of crossings, differenced at lags 1 and 12, estimated by exact maximum likelihood; a one-step error is typically 0.0367 on that scale. In the units of the data that is about 3.7% of the level.");
  });
  test("the equation before anything else that is drawn", () => {
    expect(fit.show(madeFit(), show).map(p => p.part).slice(0, 3)).toEqual(["text", "equation", "equation"]);
  });
  test("each coefficient with its interval against zero, and pictures that draw", async () => {
    const parts = fit.show(madeFit(), show);
    const svgs = await drawnCharts(parts);
    expect(svgs).toHaveLength(2);
    expect(svgs[0]).toMatch(/−0\.402 ± 0\.0\d+ \(−0\.58 to −0\.23\)/);
    const table = parts.find((p): p is TablePart => p.part === "table")!;
    expect(table.rows.map(row => [row[0], row.at(-1)])).toEqual([["MA lag 1", "below zero"], ["seasonal MA lag 12", "below zero"]]);
  });
  test("a coefficient that zero cannot be told from in words", () => {
    const theta = Float64Array.of(0.05);
    const parts = fit.show(madeFit({ theta }), show);
    expect(texts(parts)).toContain("MA lag 1 is not told apart from zero at 95%: a smaller model may do as well.");
  });
  test("no figure where a standard error is not available", async () => {
    const base = madeFit();
    const se = { ...base.se, theta: Float64Array.of(NaN) };
    const parts = fit.show(madeFit({ theta: Float64Array.of(-1), se, seRobust: se, notes: [{ code: "boundary", tone: "caution", text: "A moving-average root lies on the unit circle." }] }), show);
    expect(JSON.stringify(parts.filter(p => p.part === "text" || p.part === "equation"))).not.toMatch(/NaN|undefined/);
    expect((await drawnCharts(parts))[0]).toContain("−1.00 (no interval)");
    expect(texts(parts)).toContain("A moving-average root lies on the unit circle.");
  });
  test("held coefficients as held", async () => {
    const base = madeFit();
    const fitHeld = madeFit({ options: { ...base.options, hold: { theta: [-0.402] } }, se: { ...base.se, theta: Float64Array.of(NaN) } });
    expect(coefficientsOf(fitHeld)[0]).toMatchObject({ label: "MA lag 1", held: true });
    const chart = fit.show(fitHeld, show).find((p): p is ChartPart => p.part === "chart")!;
    expect(chart.alt).toContain("MA lag 1 held at −0.402");
    // The held row has no interval, and still comes first.
    const [svg] = await drawnCharts([chart]);
    const height = (label: string): number => Number(new RegExp(`translate\\([^,]*,([-\\d.]+)\\)"[^>]*>${label}`).exec(svg)?.[1]);
    expect(height("MA lag 1: ")).toBeLessThan(height("seasonal MA lag 12: "));
  });
  test("both the process mean and the equation's constant, by these names", async () => {
    const result = await run({ series: madeSeries(), ar: 1 });
    const parts = fit.show(result, show), table = parts.find((p): p is TablePart => p.part === "table")!;
    expect(table.rows.map(row => row[0])).toEqual(["AR lag 1", "mean", "constant of the equation"]);
    expect(table.rows[2][1]).toBeCloseTo(result.mean * (1 - result.phi[0]), 10);
    expect(texts(parts)).toMatch(/ the process mean, [\d.]+ the equation's constant/);
  });
  test("one root of each mirrored pair, by memory and cycle", () => {
    // (1 - B + 0.5 B^2): inverse roots 0.5 ± 0.5 i, at distance 0.7071, an eighth of a turn: half in 2 periods, a cycle of 8.
    const parts = fit.show(madeFit({ roots: { ar: [{ re: 1, im: 1, modulus: Math.SQRT2 }, { re: 1, im: -1, modulus: Math.SQRT2 }], ma: [] } }), show);
    const { roots } = parts.find((p): p is ChartPart => p.part === "chart" && /Inverse roots/.test(p.title))!.data;
    expect(roots).toMatchObject({ half: ["2.0 periods"], cycle: ["8.0 periods"] });
    expect(roots.distance[0]).toBeCloseTo(Math.SQRT1_2, 12);
  });
  test("which observations were used, and how many the differences took", () => {
    expect(texts(fit.show(madeFit(), show))).toContain("It rests on 59 observations, 2019-02 to 2023-12; the differences used up the first 13 periods.");
  });
});

describe("fit refuses, in words for its author,", () => {
  test("an order of 50 on a short series", () => {
    expect(() => run({ series: numbered([1, 3, 2, 5, 4, 6, 3, 2, 4, 5]), ar: 50 })).toThrow(/reaches back 50 periods with 50 coefficients, but short has only 10 observations; ask for fewer lags/);
  });
  test("a constant series", () => {
    expect(() => run({ series: numbered(Array.from({ length: 30 }, () => 5)), ar: 1 })).toThrow("short is constant: each of its 30 values is 5");
  });
  test("a series that is too short", () => {
    expect(() => run({ series: numbered([1, 2]), ar: 1 })).toThrow("short has 2 observations; estimation needs at least 3");
  });
  test("text for a series, and a list of lags that holds 0", () => {
    expect(() => run({ series: "crossings" })).toThrow(/series.*text/);
    expect(() => run({ series: madeSeries(), ar: [0, 1] })).toThrow(/ar/);
  });
  test("a season of half a period", () => {
    expect(() => run({ series: madeSeries(), season: { length: 0.5, ma: 1 } })).toThrow("the season's length is a whole number of periods");
  });
});

describe("fit runs", () => {
  test("a seasonal model of logs whose parts all draw", async () => {
    const series = stepped(madeSeries(), [{ step: "log" }, { step: "difference", lag: 1 }, { step: "difference", lag: 12 }]);
    const result = await run({ series, ma: 1, season: { ma: 1 }, label: "candidate" });
    expect(result.label).toBe("candidate");
    expect(result.k).toBe(3);
    const parts = fit.show(result, show);
    await expect(drawnCharts(parts)).resolves.not.toHaveLength(0);
    expect(texts(parts)).not.toMatch(/NaN|undefined/);
  });
  test("a window, and draws what was held out beside what was used", async () => {
    const result = await run({ series: madeSeries(), ar: 1, window: { from: "2018-06", to: "2022-12" } });
    const parts = fit.show(result, show);
    const used = parts.find((p): p is ChartPart => p.part === "chart" && p.title === "Observations used")!;
    expect(used.alt).toBe("Used are 2018-06 to 2022-12 of 2018-01 to 2023-12.");
    expect(texts(parts)).toContain("12 later periods are held out");
    await expect(drawnCharts(parts)).resolves.toHaveLength(3);
  });
  test("subset lags with a regressor and a mean", async () => {
    const result = await run({ series: madeSeries(), ar: [1, 12], regressors: { storm: pulse("2020-03") } });
    expect(coefficientsOf(result).map(c => c.label)).toEqual(["AR lag 1", "AR lag 12", "mean", "storm"]);
    const parts = fit.show(result, show);
    await expect(drawnCharts(parts)).resolves.toHaveLength(2);
  });
});
