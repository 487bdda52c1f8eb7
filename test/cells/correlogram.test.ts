import { readFileSync } from "node:fs";
import { describe, expect, test } from "vitest";
import { checkOptions } from "../../cells/check.ts";
import { correlogram } from "../../cells/correlogram.ts";
import type { ChartPart, TablePart, TextPart } from "../../cells/parts/part.ts";
import { fit as estimate, lagged, makeSeries } from "../../stdlib/index.ts";
import { drawnCharts } from "./drawn.ts";
import { madeContext } from "./madeContext.ts";
import { madeSeries, stepped } from "./made.ts";

const show = { name: "signs", width: 640 };
const texts = (parts: readonly { readonly part: string }[]): string => parts.filter((p): p is TextPart => p.part === "text").map(p => p.text).join(" ");
const run = async (options: Record<string, unknown>) => correlogram.run(checkOptions(correlogram, options) as never, madeContext());
const numbered = (values: readonly number[]) => makeSeries({ name: "short", values: Float64Array.from(values) });

/** Annual flow of the Nile at Aswan (Cobb 1978), the second column of the file. */
const nile = numbered(readFileSync(new URL("../reference/series/nile.csv", import.meta.url), "utf8").trim().split("\n").slice(1).map(line => Number(line.split(",").at(-1))));

describe("correlogram", () => {
  test("gives the autocorrelations of a known series by lag from 0", async () => {
    // Reference case acf-nile-1: R stats::acf, numpy by formula.
    const cases = JSON.parse(readFileSync(new URL("../reference/expected/acf.json", import.meta.url), "utf8")) as { id: string; expected: { acf: number[] } }[];
    const expected = cases.find(one => one.id === "acf-nile-1")!.expected.acf;
    const result = await run({ series: nile, lags: 20 });
    expect(result.acf).toHaveLength(21);
    expected.forEach((value, lag) => { expect(result.acf[lag]).toBeCloseTo(value, 9); });
    expect(result.band.acf).toHaveLength(21);
    expect(result.suggests).toHaveProperty("ar");
  });
  test("says what stands out before it draws both correlations on one lag axis", async () => {
    const parts = correlogram.show(await run({ series: nile }), show);
    expect(parts[0].part).toBe("text");
    const chart = parts[1] as ChartPart;
    expect(chart.alt).toMatch(/^Lags 1 to \d+: the autocorrelations at lags 1 to 8 and 11 to 13 are outside the 95% band; the partial autocorrelation at lag 1 is outside the 95% band\.$/);
    const [svg] = await drawnCharts(parts);
    expect(svg).toContain("partial autocorrelation");
    expect(svg).toContain("lag (periods)");
  });
  test("says how many lags fall outside by chance, and calls the orders a suggestion", async () => {
    const said = texts(correlogram.show(await run({ series: nile, lags: 20 }), show));
    expect(said).toContain("About 1 of 20 lags falls outside 95% limits by chance alone.");
    expect(said).toMatch(/A fit could begin with ar: \d, ma: \d.*That is a suggestion from a rule of thumb/);
  });
  test("marks the seasonal lags of a monthly series", async () => {
    const parts = correlogram.show(await run({ series: stepped(madeSeries(), [{ step: "log" }, { step: "difference", lag: 1 }]) }), show);
    expect((parts[1] as ChartPart).title).toBe("Correlations of the log of crossings, differenced at lag 1 with its own past");
    expect((parts[1] as ChartPart).data.seasons.lag).toContain(12);
  });
  test("reads no orders where a difference comes first, and says which", async () => {
    // A trend: every autocorrelation is large, and an order read from them would be nonsense.
    const trend = numbered(Array.from({ length: 120 }, (_, t) => t + ((t * 7919) % 13) / 4));
    const result = await run({ series: trend });
    expect(result.differenceFirst).toBe("level");
    const said = texts(correlogram.show(result, show));
    expect(said).toContain("No orders are read yet: try the step difference(1) in a transform");
    expect(said).not.toContain("A fit could begin");
    expect(result.mixed).toBeNull();
  });
  test("names the null hypothesis beside the portmanteau tests", async () => {
    const table = correlogram.show(await run({ series: nile }), show).find((p): p is TablePart => p.part === "table")!;
    expect(table.note).toContain("no autocorrelation up to this lag");
    expect(table.rows[0].at(-1)).toBe("larger than chance would make them");
  });
  test("adds the tables for mixed orders where neither kind of correlation cuts off, and only there", async () => {
    const mixed = await run({ series: stepped(madeSeries(), [{ step: "log" }]) });
    expect(mixed.suggests.ar * mixed.suggests.ma).toBeGreaterThan(0);
    const parts = correlogram.show(mixed, show);
    expect(texts(parts)).toContain("For mixed orders: ");
    const svgs = await drawnCharts(parts);
    expect(svgs).toHaveLength(3);
    // Axis labels rise from 0, whichever tiles are shaded.
    const places = Array.from({ length: 9 }, (_, order) => svgs[1].lastIndexOf(`>${order}</text>`, svgs[1].indexOf("MA order</text>")));
    expect(places.every(place => place > 0)).toBe(true);
    expect(places).toEqual([...places].sort((a, b) => a - b));
    const pure = await run({ series: numbered(Array.from({ length: 60 }, (_, i) => Math.sin(i * i * 12.9898) * 43758.5453 % 1)) });
    expect(pure.suggests.ar * pure.suggests.ma).toBe(0);
    expect(pure.mixed).toBeNull();
  });
  test("lays a model's own correlations over the sample's", async () => {
    const model = estimate({ series: nile, ar: 1, label: "memory" });
    const parts = correlogram.show(await run({ series: nile, model, lags: 10 }), show);
    const chart = parts[1] as ChartPart;
    // An AR(1)'s autocorrelations are powers of its coefficient.
    const line = chart.data.panel1Theory.value as readonly number[];
    expect(line[2]).toBeCloseTo(model.phi[0] ** 3, 10);
    expect(texts(parts)).toContain("The line is what memory would give in a long series.");
  });
  describe("with a second series", () => {
    /** Box & Jenkins (1976), series M: their transfer function delays the leading indicator by three periods. */
    const read = (file: string) => readFileSync(new URL(`../reference/series/${file}.csv`, import.meta.url), "utf8").trim().split("\n").slice(1).map(line => Number(line.split(",").at(-1)));
    const months = (name: string, values: readonly number[], start = "2000-01") => makeSeries({ name, every: "P1M", start, values });
    const sales = stepped(months("sales", read("bjsales")), [{ step: "difference", lag: 1 }]), lead = stepped(months("lead", read("bjsales_lead")), [{ step: "difference", lag: 1 }]);
    test("says which leads and by how much, on lags to both sides", async () => {
      const result = await run({ series: sales, with: lead });
      expect(result.cross!.strongest!.lag).toBe(3);
      const parts = correlogram.show(result, show), chart = parts[1] as ChartPart;
      expect(chart.title).toBe("Cross-correlations of lead, differenced at lag 1 with sales, differenced at lag 1, after prewhitening");
      expect(chart.alt).toMatch(/the largest, 0\.\d\d, is where lead leads sales by 3 periods\. That a lead is seen does not show a cause\.$/);
      expect(texts(parts)).toContain("as lagged(…, 3) of the series from before the differences");
      const [svg] = await drawnCharts(parts);
      expect(svg).toContain("right of 0 lead comes first");
      const lags = chart.full!.correlations.lag as readonly number[];
      expect([lags[0], lags.at(-1)]).toEqual([-result.lags, result.lags]);
      // The series' own correlogram waits below.
      expect(parts.filter(p => p.part === "chart" && p.detail).map(p => (p as ChartPart).title)[0]).toBe("Correlations of sales, differenced at lag 1 with its own past");
    });
    test("gives the leader as options that a fit can take", async () => {
      const levels = months("sales", read("bjsales")), leader = months("lead", read("bjsales_lead"));
      const said = texts(correlogram.show(await run({ series: sales, with: leader }), show));
      const [, lag, from] = /regressors: \{leader: lagged\(lead, (\d+)\)\}, window: \{from: "(\d{4}-\d\d)"\}/.exec(said)!;
      const options = { series: stepped(levels, [{ step: "difference", lag: 1 }]), ma: 1, regressors: { leader: lagged(leader, Number(lag)) } };
      expect(estimate({ ...options, window: { from } }).beta.leader).toBeGreaterThan(0);
      expect(() => estimate(options)).toThrow("has no value at 2000-01");
    });
    test("compares the periods that both have, and says so", async () => {
      const later = stepped(months("lead", read("bjsales_lead").slice(20, 140), "2001-09"), [{ step: "difference", lag: 1 }]);
      const result = await run({ series: sales, with: later });
      expect(result.cross!.strongest!.lag).toBe(3);
      expect(texts(correlogram.show(result, show))).toContain("are compared over the periods that both have, 2001-10 to 2011-08.");
    });
    test("says that nothing leads where nothing does, and refuses what cannot be compared", async () => {
      const other = months("other", read("sim_white").slice(0, 149), "2000-02");
      expect(texts(correlogram.show(await run({ series: sales, with: other, level: 0.999 }), show))).toContain("no sign that one leads the other, or moves with it");
      await expect(run({ series: sales, with: makeSeries({ name: "weekly", every: "P1W", start: "2000-W01", values: read("sim_white").slice(0, 100) }) })).rejects.toThrow("aggregate one of them first");
    });
  });
  test("widens Bartlett's band with the lag", async () => {
    const { band } = await run({ series: nile, band: "bartlett", lags: 10 });
    expect(band.acf[10]).toBeGreaterThan(band.acf[1]);
  });
});

describe("correlogram refuses, in words for its author,", () => {
  test("a constant series", async () => {
    await expect(run({ series: numbered([4, 4, 4, 4, 4]) })).rejects.toThrow("short is constant: each of its 5 values is 4");
  });
  test("more lags than values", async () => {
    await expect(run({ series: numbered([1, 3, 2, 5]), lags: 50 })).rejects.toThrow("lags is 50; with 4 values it can be a whole number from 1 to 3");
  });
  test("a series of two values", async () => {
    await expect(run({ series: numbered([1, 2]) })).rejects.toThrow("short has 2 observations; a correlogram needs at least 3");
  });
  test("a level in percent", async () => {
    await expect(run({ series: nile, level: 95 })).rejects.toThrow(/0\.95/);
  });
});
