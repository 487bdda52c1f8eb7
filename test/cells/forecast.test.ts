import { describe, expect, test } from "vitest";
import { forecast } from "../../cells/forecast.ts";
import { needForecaster } from "../../cells/parts/forecaster.ts";
import { checkOptions } from "../../cells/check.ts";
import type { ChartPart, TablePart, TextPart } from "../../cells/parts/part.ts";
import { cut, fit as estimate, rule } from "../../stdlib/index.ts";
import { madeContext } from "./madeContext.ts";
import { drawnCharts } from "./drawn.ts";
import { madeFit, madeForecast, madeSeries, stepped } from "./made.ts";

const show = { name: "outlook", width: 640 };
const texts = (parts: readonly { readonly part: string }[]): string => parts.filter((p): p is TextPart => p.part === "text").map(p => p.text).join(" ");

describe("forecast shows", () => {
  test("the first and the last period with units and the widest band in its sentence", () => {
    const parts = forecast.show(madeForecast(), show);
    expect((parts[0] as TextPart).text).toBe("From 2023-12, candidate forecasts crossings at 1,400 vehicles (90% band 1,288 to 1,526) in 2024-01, and 1,510 vehicles (90% band 1,389 to 1,646) in 2024-12. The median is quoted; the mean lies above it because the band is lopsided.");
  });
  test("totals and periods in tables, in the order of time", () => {
    const tables = forecast.show(madeForecast(), show).filter((p): p is TablePart => p.part === "table");
    expect(tables.map(t => t.title)).toEqual(["Totals over spans", "crossings by period"]);
    expect(tables[0].rows[0]).toEqual(["2024-01 to 2024-12", 17460, 17628, 17000, 18000, 16500, 18600]);
    expect(tables[1].rows).toHaveLength(12);
    expect(tables[1].rows[0].slice(0, 3)).toEqual(["2024-01", 1400, 1414]);
  });
  test("what came after, counted against the band", () => {
    const heldOut = { name: "crossings", unit: "vehicles", every: "P1M", start: "2024-01", n: 2, values: Float64Array.of(1410, 5000), times: ["2024-01", "2024-02"], steps: [] };
    expect(texts(forecast.show(madeForecast({ heldOut }), show))).toContain("Of 2 later periods that are known, 1 fell inside the 90% band");
  });
  test("a picture that draws, at full precision behind it", async () => {
    const parts = forecast.show(madeForecast(), show);
    const [svg] = await drawnCharts(parts);
    expect(svg).toContain("crossings (vehicles)");
    const chart = parts.find((p): p is ChartPart => p.part === "chart")!;
    expect(chart.full?.forecast.median).toHaveLength(12);
    expect(Object.keys(chart.full?.forecast ?? {})).toContain("low 90%");
  });
  test("the chance of passing a threshold, growth on the year before, and sample paths", async () => {
    const passing = [{ threshold: 1500, above: Float64Array.from({ length: 12 }, (_, i) => i / 20), ever: 0.7 }];
    const made = madeForecast({ passing, growth: [{ time: "2024-01", median: 0.05, bands: [] }], paths: [madeForecast().median, madeForecast().mean] });
    const parts = forecast.show(made, show);
    expect(texts(parts)).toContain("The probability that crossings passes 1,500 vehicles in at least one of the 12 periods is 70%; for a single period it is highest in 2024-12, 55%.");
    const tables = parts.filter((p): p is TablePart => p.part === "table");
    expect(tables.at(-1)!.rows.map(row => row.at(-1)).slice(0, 2)).toEqual([0.05, NaN]);
    await expect(drawnCharts(parts)).resolves.toHaveLength(1);
  });
  test("scenarios side by side in one picture and one table, and what each makes against the first", async () => {
    const { mean, median, se, sd, bands, totals } = madeForecast(), usual = { label: "usual", mean, median, se, sd, bands, totals, growth: [], passing: [], difference: null };
    const less = { against: "usual", mean: se, median: new Float64Array(12).fill(-20), bands: [{ level: 0.9, low: new Float64Array(12).fill(-30), high: new Float64Array(12).fill(-10) }], totals: [{ from: "2024", to: "2024", mean: -240, median: -240, se: 60, bands: [{ level: 0.9, low: -350, high: -130 }] }] };
    const parts = forecast.show(madeForecast({ scenarios: { usual, strike: { ...usual, label: "strike", difference: less } } }), show);
    expect((parts[0] as TextPart).text).toBe("From 2023-12, candidate forecasts crossings in 2024-12 at 1,510 vehicles in scenario usual and 1,510 vehicles in scenario strike (medians). Against usual, strike comes to −240 vehicles over 2024 (90% band −350 to −130).");
    const tables = parts.filter((p): p is TablePart => p.part === "table");
    expect(tables.map(t => t.title)).toEqual(["Totals by scenario", "crossings by period and scenario", "Difference from usual"]);
    expect(tables[1].columns.map(c => c.title)).toEqual(["period", "usual: median", "usual: 90% from", "usual: 90% to", "strike: median", "strike: 90% from", "strike: 90% to"]);
    expect(tables[2].rows.slice(0, 2)).toEqual([["2024-01 to 2024-12, total", -240, -350, -130], ["2024-01", -20, -30, -10]]);
    const [courses, difference] = await drawnCharts(parts);
    expect(courses).toContain("strike");
    expect(difference).toContain("less usual (vehicles)");
  });
  test("the chance of passing a threshold in each scenario", () => {
    const { mean, median, se, sd, bands } = madeForecast(), of = (ever: number) => [{ threshold: 1500, above: new Float64Array(12).fill(ever / 2), ever }];
    const usual = { label: "usual", mean, median, se, sd, bands, totals: [], growth: [], passing: of(0.7), difference: null }, less = { against: "usual", mean: se, median: se, bands, totals: [] };
    const parts = forecast.show(madeForecast({ totals: [], scenarios: { usual, strike: { ...usual, label: "strike", passing: of(0.2), difference: less } } }), show);
    expect(texts(parts)).toContain("The probability that crossings passes 1,500 vehicles in at least one of the 12 periods is 70% in scenario usual and 20% in scenario strike.");
    expect(parts.filter((p): p is TablePart => p.part === "table")[0].rows[0]).toEqual(["2024-01", 0.35, 0.1]);
  });
  test("without levels there are no bands, in the picture's title either", () => {
    expect((forecast.show(madeForecast({ bands: [], totals: [] }), show).find(p => p.part === "chart") as ChartPart).title).toBe("Forecast of crossings");
  });
  test("no two columns of a table have one title, so that its CSV can be read by name", () => {
    for (const table of forecast.show(madeForecast(), show).filter((p): p is TablePart => p.part === "table")) expect(new Set(table.columns.map(c => c.title)).size).toBe(table.columns.length);
  });
  test("of a single period the chance is not told of at least one", () => {
    const passing = [{ threshold: 1500, above: Float64Array.of(0.7), ever: 0.7 }];
    expect(texts(forecast.show(madeForecast({ horizon: 1, passing }), show))).toContain("The probability that crossings passes 1,500 vehicles in 2024-01 is 70%.");
  });
  test("the long-run shape, and that a forecast is no advice", () => {
    expect(texts(forecast.show(madeForecast(), show))).toMatch(/follows a line with the last season on it\..*no advice/);
  });
});

describe("forecast refuses", () => {
  const run = async (options: Record<string, unknown>) => forecast.run(checkOptions(forecast, options) as never, madeContext());
  test("a series in place of a model", () => {
    expect(() => needForecaster(madeSeries())).toThrow("model is a series; fit a model to it first, or use a rule");
  });
  test("a whole comparison, and takes one of its rows", () => {
    const fit = madeFit();
    expect(() => needForecaster({ models: [], best: { fit } })).toThrow("name one of its rows, such as .best");
    expect(needForecaster({ label: "a", fit })).toBe(fit);
  });
  test("a horizon that is no whole number of periods", async () => {
    await expect(run({ model: madeFit(), horizon: 0 })).rejects.toThrow(/horizon.*at least 1/);
    await expect(run({ model: madeFit(), horizon: 2.5 })).rejects.toThrow(/horizon.*whole number/);
  });
  test("a level in percent, and says what to write", async () => {
    await expect(run({ model: madeFit(), horizon: 2, levels: [90] })).rejects.toThrow(/0\.9/);
  });
});

const madeModel = () => estimate({ series: stepped(madeSeries(), [{ step: "log" }, { step: "difference", lag: 1 }, { step: "difference", lag: 12 }]), ma: 1, season: { ma: 1 } });

describe("forecast takes each level once", () => {
  test("and says which stands twice", async () => {
    await expect(forecast.run(checkOptions(forecast, { model: madeFit(), horizon: 2, levels: [0.5, 0.9, 0.5] }) as never, madeContext())).rejects.toThrow("levels has 0.5 twice");
  });
});

describe("forecast runs", () => {
  test("a fit of a logged and differenced series in the units of the data", async () => {
    const series = stepped(cut(madeSeries(), { to: "2022-12" }), [{ step: "log" }, { step: "difference", lag: 1 }, { step: "difference", lag: 12 }]);
    const model = estimate({ series, ma: 1, season: { ma: 1 } });
    const result = await forecast.run(checkOptions(forecast, { model, horizon: 12, totals: "year" }) as never, madeContext());
    expect(result.times[0]).toBe("2023-01");
    expect(result.median[0]).toBeGreaterThan(800);
    expect(result.median[0]).toBeLessThan(3000);
    const parts = forecast.show(result, show);
    await expect(drawnCharts(parts)).resolves.toHaveLength(1);
    expect(texts(parts)).toContain("From 2022-12");
  });
  test("simulated bands in slices: progress by count, and newer work overtakes it", async () => {
    const options = checkOptions(forecast, { model: rule.combine([madeModel(), rule.naive(madeSeries())]), horizon: 6, bands: "simulated" }) as never;
    const context = madeContext();
    await forecast.run(options, context);
    expect(context.steps.at(-1)).toEqual([99, 100]);
    const overtaken = madeContext({ breathe: () => Promise.reject(new Error("overtaken")) });
    await expect(forecast.run(options, overtaken)).rejects.toThrow("overtaken");
    expect(overtaken.steps).toHaveLength(1);
  });
  test("a rule", async () => {
    const result = await forecast.run(checkOptions(forecast, { model: rule.naive(madeSeries()), horizon: 3 }) as never, madeContext());
    expect(Array.from(result.median)).toEqual(Array.from({ length: 3 }, () => madeSeries().values[71]));
  });
});
