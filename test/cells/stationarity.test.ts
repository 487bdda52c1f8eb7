import { readFileSync } from "node:fs";
import { describe, expect, test } from "vitest";
import { checkOptions } from "../../cells/check.ts";
import { stationarity } from "../../cells/stationarity.ts";
import type { ChartPart, Part, TablePart, TextPart } from "../../cells/parts/part.ts";
import { makeSeries } from "../../stdlib/index.ts";
import { drawnCharts } from "./drawn.ts";
import { madeContext } from "./madeContext.ts";
import { madeSeries, stepped } from "./made.ts";

const show = { name: "roots", width: 640 };
const texts = (parts: readonly Part[]): string => parts.filter((p): p is TextPart => p.part === "text").map(p => p.text).join(" ");
const run = async (options: Record<string, unknown>) => stationarity.run(checkOptions(stationarity, options) as never, madeContext());
const numbered = (values: readonly number[]) => makeSeries({ name: "short", values: Float64Array.from(values) });
const column = (file: string) => readFileSync(new URL(`../reference/series/${file}.csv`, import.meta.url), "utf8").trim().split("\n").slice(1).map(line => Number(line.split(",").at(-1)));

interface Case { id: string; series: string; transform: unknown[]; what: string; inputs: Record<string, unknown>; expected: Record<string, never> }
const cases = JSON.parse(readFileSync(new URL("../reference/expected/unitroot.json", import.meta.url), "utf8")) as Case[];

describe("stationarity", () => {
  test("gives the augmented Dickey-Fuller statistics of the Nile at the reference's own lags", async () => {
    const nile = numbered(column("nile"));
    const wanted = cases.filter(one => one.series === "nile" && one.transform.length === 0);
    const adfs = wanted.filter(one => one.what === "adf" && typeof one.inputs.lags === "number");
    expect(adfs.length).toBeGreaterThan(0);
    for (const one of adfs) {
      const trend = ({ n: "none", c: "constant", ct: "linear", ctt: "quadratic" } as Record<string, string>)[String(one.inputs.trend ?? one.inputs.regression)];
      const { adf } = await run({ series: nile, lags: one.inputs.lags, ...(trend === undefined ? {} : { trend }) });
      expect(adf.statistic).toBeCloseTo(one.expected.statistic, 8);
    }
  });
  test("names each null hypothesis, the lags and how they were chosen", async () => {
    const parts = stationarity.show(await run({ series: numbered(column("nile")) }), show);
    const table = parts.find((p): p is TablePart => p.part === "table")!;
    expect(table.rows.map(row => row[0])).toEqual(["Dickey-Fuller (ADF)", "Phillips-Perron", "DF-GLS", "KPSS"]);
    expect(table.rows[0][1]).toBe("a unit root: shocks never die out");
    expect(table.rows[3][1]).toBe("stationary around a constant");
    expect(table.rows[0][4]).toMatch(/^−2\.58, −2\.89, −3\.50$/);
    expect(table.rows[0][5]).toMatch(/^\d+, by least AIC among 0 to \d+$/);
    expect(parts[0].part).toBe("text");
  });
  test("prints a bound where the table of KPSS ends", async () => {
    const walk = numbered(column("sim_rw"));
    const parts = stationarity.show(await run({ series: walk }), show);
    const table = parts.find((p): p is TablePart => p.part === "table")!;
    expect(table.rows[3][3]).toBe("< 0.01");
    expect(texts(parts)).toMatch(/KPSS rejects stationarity/);
  });
  test("draws the statistics on one line against their critical values, and the differences side by side", async () => {
    const series = stepped(madeSeries(), [{ step: "log" }]);
    const result = await run({ series });
    const parts = stationarity.show(result, show);
    const charts = parts.filter((p): p is ChartPart => p.part === "chart");
    expect(charts.map(p => p.title)).toEqual(["Each statistic against its critical values at 10%, 5% and 1%", "Differences side by side"]);
    expect(charts[0].alt).toBe("At the 5% level Phillips-Perron and KPSS reject their null hypotheses; right of 1 a statistic is beyond its 5% critical value.");
    const svgs = await drawnCharts(parts);
    expect(svgs[1]).toContain("differences at lags 1 and 12");
    expect(result.seasonal).not.toBeNull();
    expect(texts(parts)).toContain(result.together);
  });
  test("asks of a positive series on its own scale whether its spread follows its level", async () => {
    const raw = await run({ series: madeSeries() });
    const parts = stationarity.show(raw, show);
    expect(parts.filter((p): p is ChartPart => p.part === "chart").map(p => p.title)).toContain("Spread against level, block by block");
    expect(texts(parts)).toMatch(/Over 6 blocks the spread grows in proportion to the level.* \(slope 1\.01 .*lambda .*95% interval −/);
    await expect(drawnCharts(parts)).resolves.toHaveLength(3);
    expect(raw.lambda?.guerrero.lambda).toBeGreaterThanOrEqual(-1);
    expect((await run({ series: stepped(madeSeries(), [{ step: "log" }]) })).lambda).toBeNull();
  });
  test("reads every test at the level asked for, in its sentence, in the table and in the picture", async () => {
    // The log of lynx trappings: ADF p = 0.0056 and DF-GLS p = 0.046 (MacKinnon 1994), so 1% parts them.
    const lynx = stepped(numbered(column("lynx")), [{ step: "log" }]);
    const strict = await run({ series: lynx, level: 0.99, lags: 10 });
    expect(strict.adf.p).toBeLessThan(0.01);
    expect(strict.dfGls.p).toBeGreaterThan(0.01);
    expect(strict.adf.sentence).toContain("rejects a unit root at the 1% level");
    expect(strict.dfGls.sentence).toContain("does not reject a unit root at the 1% level");
    expect(strict.together).toMatch(/^The tests disagree at the 1% level/);
    const parts = stationarity.show(strict, show), [chart] = parts.filter((p): p is ChartPart => p.part === "chart");
    expect(chart.alt).toContain("right of 1 a statistic is beyond its 1% critical value");
    expect(JSON.stringify(parts.find((p): p is TablePart => p.part === "table")!.rows.map(row => row[6]))).toBe('["rejected","rejected","not rejected","not rejected"]');
    // The printed table of KPSS ends at 1% and 10%: nothing is read beyond its ends.
    expect((await run({ series: lynx, level: 0.85 })).together).toContain("cannot be read together at the 15% level: the printed table of KPSS ends before it (p > 0.10)");
  });
  test("lets newer work in between its tests, says how far it is, and stops when overtaken", async () => {
    let breaths = 0;
    const context = madeContext({ breathe: async () => { breaths += 1; if (breaths === 5) throw new Error("overtaken"); } });
    await expect(stationarity.run(checkOptions(stationarity, { series: madeSeries() }) as never, context)).rejects.toThrow("overtaken");
    expect(context.steps).toEqual([[1, 12], [2, 12], [3, 12], [4, 12], [5, 12]]);
  });
  test("takes BIC for the lags of DF-GLS unless told otherwise, as its authors do", async () => {
    const { adf, dfGls } = await run({ series: numbered(column("nile")) });
    expect([adf.lagRule, dfGls.lagRule]).toEqual(["by least AIC among 0 to 12", "by least BIC among 0 to 12"]);
    expect((await run({ series: numbered(column("nile")), lags: "aic" })).dfGls.lagRule).toBe("by least AIC among 0 to 12");
  });
  test("takes the bandwidth as a rule, too", async () => {
    const { kpss } = await run({ series: numbered(column("nile")), bandwidth: "long" });
    expect([kpss.lags, kpss.lagRule]).toEqual([12, "by the long rule, 12 (n/100)^¼ rounded down"]);
  });
  test("says once that gaps keep it from an answer, and draws no empty picture", async () => {
    const parts = stationarity.show(await run({ series: numbered(column("nile").map((v, t) => (t % 30 === 20 ? NaN : v))) }), show);
    expect(texts(parts)).toContain("fill them first, or take a window without them");
    expect(parts.some(p => p.part === "chart" && p.title.startsWith("Each statistic"))).toBe(false);
    expect(parts.some(p => p.part === "table" && p.title === "Test by test")).toBe(false);
  });
  test("shows no number where a test could not be run", async () => {
    const parts = stationarity.show(await run({ series: numbered([1, 3, 2, 5, 4, 6, 3]) }), show);
    expect(JSON.stringify(parts.filter(p => p.part === "text"))).not.toMatch(/NaN|undefined/);
    await drawnCharts(parts);
  });
});

describe("stationarity refuses, in words for its author,", () => {
  test("a constant series", async () => {
    await expect(run({ series: numbered(Array.from({ length: 30 }, () => 2)) })).rejects.toThrow("short is constant");
  });
  test("a series that is too short", async () => {
    await expect(run({ series: numbered([1, 2, 3]) })).rejects.toThrow("short has 3 observations; a unit-root test needs at least 6");
  });
  test("more lags than the data can carry", async () => {
    await expect(run({ series: madeSeries(), lags: 50 })).rejects.toThrow(/lags is 50: with 72 values the regression would have more lags than data/);
  });
  test("a trend that is none of the four", async () => {
    await expect(run({ series: madeSeries(), trend: "cubic" })).rejects.toThrow(/trend.*"quadratic"/);
  });
});
