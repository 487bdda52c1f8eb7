import { describe, expect, test } from "vitest";
import { checkOptions } from "../../cells/check.ts";
import { diagnostics } from "../../cells/diagnostics.ts";
import type { ChartPart, Part, TablePart, TextPart } from "../../cells/parts/part.ts";
import { fit as estimate, ljungBox, makeSeries, rule, type Series } from "../../stdlib/index.ts";
import { drawnCharts } from "./drawn.ts";
import { madeContext } from "./madeContext.ts";
import { madeSeries, stepped } from "./made.ts";

const show = { name: "checks", width: 640 };
const texts = (parts: readonly Part[]): string => parts.filter((p): p is TextPart => p.part === "text").map(p => p.text).join(" ");
const charts = (parts: readonly Part[]): readonly ChartPart[] => parts.filter((p): p is ChartPart => p.part === "chart");
const run = async (options: Record<string, unknown>) => diagnostics.run(checkOptions(diagnostics, options) as never, madeContext());
const steps = [{ step: "log" }, { step: "difference", lag: 12 }] as const;
const seasonal = (series: Series) => estimate({ series: stepped(series, steps), ma: 1, season: { ma: 1 }, label: "candidate" });

/** A month at a third of its value: an event that the checks have to find and name. */
const withEvent = (): Series => {
  const series = madeSeries(96);
  return makeSeries({ name: series.name, unit: series.unit, every: series.every, start: series.start, values: series.values.map((v, t) => t === 60 ? v / 3 : v) });
};

describe("diagnostics", () => {
  test("quotes the Ljung-Box test at the asked lag, as the library function does", async () => {
    const model = seasonal(madeSeries());
    const result = await run({ model, lags: 12 });
    const own = ljungBox(model, 12);
    expect(result.ljungBox.statistic).toBeCloseTo(own.statistic, 12);
    expect(result.ljungBox.p).toBeCloseTo(own.p, 12);
    expect(result.ljungBox.df).toBe(10);
  });
  test("goes through the reader's questions before it draws", async () => {
    const parts = diagnostics.show(await run({ model: seasonal(madeSeries()) }), show);
    expect(parts.slice(0, 2).map(p => p.part)).toEqual(["text", "table"]);
    const table = parts[1] as TablePart;
    expect(table.rows.map(row => row[0])).toEqual(["Can the past still predict them?", "Does a rhythm remain?", "Does their spread change?", "Does their level move?", "Are they shaped like a normal distribution?"]);
    expect(String(table.rows[0][2])).toMatch(/^Ljung-Box Q [\d.]+ on \d+ df, p\u00a0[=<]\u00a0/);
  });
  test("draws p-values across lags, residuals in time, correlations, quantiles, rhythm and running sum", async () => {
    const parts = diagnostics.show(await run({ model: seasonal(madeSeries()) }), show);
    expect(charts(parts).map(p => p.title)).toEqual([
      "Residuals in time, the large ones named", "Is anything left to predict, taking lags together?", "Autocorrelations of the residuals, lag by lag",
      "Residuals against a normal distribution", "Share of the residuals' variation at slower frequencies", "Running sum of the residuals",
    ]);
    await expect(drawnCharts(parts)).resolves.toHaveLength(6);
  });
  test("reads every test at the level asked for, limits of the pictures included", async () => {
    const result = await run({ model: seasonal(madeSeries()), level: 0.9 });
    // Kolmogorov's distribution, 10% point as printed by Smirnov (1948): 1.22.
    expect(result.cusum.limit).toBeCloseTo(1.2238, 3);
    expect(result.cusum.sentence).toContain("90% limits");
    expect(result.cumulativePeriodogram.limit! / result.cumulativePeriodogram.critical95!).toBeCloseTo(1.2238 / 1.358, 3);
    expect(result.cumulativePeriodogram.sentence).toContain("90% limits");
    const doubtful = { ...result, ljungBox: { ...result.ljungBox, p: 0.07 } };
    expect((diagnostics.show(doubtful, show)[1] as TablePart).rows[0][1]).toMatch(/^yes, beyond chance/);
  });
  test("names the largest correlation among the lags that the test took together", async () => {
    const result = await run({ model: estimate({ series: stepped(madeSeries(), [{ step: "log" }, { step: "difference", lag: 1 }]), mean: false }), lags: 6 });
    // The season is left in: lag 12 is the largest of all, and not among the six.
    expect(result.acf.indexOf(Math.max(...result.acf.slice(1)))).toBe(12);
    expect(result.sentence).toMatch(/autocorrelated over 6 lags .*the largest is at lag [1-6]\)/);
  });
  test("says up to which lag no degrees of freedom are left", async () => {
    const parts = diagnostics.show(await run({ model: seasonal(madeSeries()) }), show);
    expect(charts(parts)[1].alt).toContain("Up to lag 2 no degrees of freedom are left.");
    expect(charts(parts)[1].data.points.lag).not.toContain(2);
  });
  test("names the date of an event, in the picture and with a regressor to try", async () => {
    const parts = diagnostics.show(await run({ model: seasonal(withEvent()) }), show);
    const inTime = charts(parts)[0];
    expect(inTime.alt).toContain("2023-01");
    expect((await drawnCharts([inTime]))[0]).toContain("2023-01");
    // Names stand clear of their marks by pixels, whatever the scale: below where the residual is below zero.
    const names = (inTime.spec.layer as { data: { name: string }; mark: { dy: number }; transform: [{ filter: { equal: boolean } }] }[]).filter(layer => layer.data.name === "named");
    expect(names.map(layer => [layer.transform[0].filter.equal, Math.sign(layer.mark.dy)])).toEqual([[true, -1], [false, 1]]);
    const events = parts.find((p): p is TablePart => p.part === "table" && p.title === "Single events that stand out")!;
    const found = events.rows.find(row => row[0] === "2023-01")!;
    expect(found[1]).toBe("one period off");
    expect(found[4]).toBe('pulse("2023-01")');
    expect(texts(parts)).toContain('for copying: regressors: {event1: pulse("2023-01")');
    // A third of the value is log(1/3) = -1.10 on the scale of the model.
    expect(found[2] as number).toBeCloseTo(-1.1, 1);
  });
  test("names the date of a new level among what to try", async () => {
    const series = madeSeries(96), shifted = makeSeries({ name: series.name, unit: series.unit, every: series.every, start: series.start, values: series.values.map((v, t) => t >= 60 ? v * 1.3 : v) });
    const result = await run({ model: estimate({ series: stepped(shifted, [{ step: "log" }, { step: "detrend", degree: 1 }]), ar: 1 }) });
    const table = diagnostics.show({ ...result, cusum: { ...result.cusum, p: 0.001 } }, show)[1] as TablePart;
    expect(table.rows[3][3]).toBe(`levelShift("${result.break.at}") as a regressor, or a shorter window`);
  });
  test("draws a model of a numbered series without dates", async () => {
    const series = makeSeries({ name: "x", values: madeSeries().values });
    const parts = diagnostics.show(await run({ model: estimate({ series, ar: 1 }) }), show);
    await expect(drawnCharts(parts)).resolves.toHaveLength(6);
    expect(texts(parts)).not.toMatch(/NaN|undefined/);
  });
});

describe("diagnostics of a long fit", () => {
  test("lets newer work in between its slices, and stops when overtaken", async () => {
    const model = seasonal(withEvent());
    let breaths = 0;
    const context = madeContext({ breathe: async () => { breaths += 1; if (breaths === 4) throw new Error("overtaken"); } });
    await expect(diagnostics.run(checkOptions(diagnostics, { model }) as never, context)).rejects.toThrow("overtaken");
    expect(breaths).toBe(4);
    expect(context.steps.length).toBeGreaterThan(1);
  });
});

describe("diagnostics refuses, in words for its author,", () => {
  test("a rule and a series", async () => {
    await expect(run({ model: rule.naive(madeSeries()) })).rejects.toThrow(/rule/);
    await expect(run({ model: madeSeries() })).rejects.toThrow(/fit/);
  });
  test("more lags than residuals", async () => {
    await expect(run({ model: seasonal(madeSeries()), lags: 500 })).rejects.toThrow("lags is 500; with 60 residuals it can be a whole number from 1 to 59");
  });
});
