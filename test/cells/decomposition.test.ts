import { readFileSync } from "node:fs";
import { describe, expect, test } from "vitest";
import { checkOptions } from "../../cells/check.ts";
import { decomposition } from "../../cells/decomposition.ts";
import type { ChartPart, Part, TextPart } from "../../cells/parts/part.ts";
import { makeSeries, type Series } from "../../stdlib/index.ts";
import { drawnCharts } from "./drawn.ts";
import { madeContext } from "./madeContext.ts";
import { madeSeries, stepped } from "./made.ts";

const show = { name: "pieces", width: 640 };
const texts = (parts: readonly Part[]): string => parts.filter((p): p is TextPart => p.part === "text").map(p => p.text).join(" ");
const charts = (parts: readonly Part[]): readonly ChartPart[] => parts.filter((p): p is ChartPart => p.part === "chart");
const run = async (options: Record<string, unknown>) => decomposition.run(checkOptions(decomposition, options) as never, madeContext());
const column = (file: string) => readFileSync(new URL(`../reference/series/${file}.csv`, import.meta.url), "utf8").trim().split("\n").slice(1).map(line => Number(line.split(",").at(-1)));
const monthly = (values: readonly number[], start: string): Series => makeSeries({ name: "deaths", unit: "deaths", every: "P1M", start, values });

/** Accidental deaths in the USA, monthly from 1973 (Brockwell and Davis 1991). */
const deaths = monthly(column("usaccdeaths"), "1973-01");

describe("decomposition", () => {
  test("gives the pieces of the reference's STL, which add up to the series", async () => {
    interface Case { id: string; series: string; what: string; transform: unknown[]; inputs: { seasonalWindow?: number; robust?: boolean }; expected: Record<string, number[]> }
    const cases = JSON.parse(readFileSync(new URL("../reference/expected/decomposition.json", import.meta.url), "utf8")) as Case[];
    const one = cases.find(item => item.what === "decompose" && item.series === "usaccdeaths") ?? cases.find(item => item.what === "decompose" && item.series === "airline")!;
    const series = one.series === "usaccdeaths" ? deaths : monthly(column(one.series), "1949-01");
    const result = await run({ series, method: (one.inputs as { type?: string }).type ?? "additive" });
    one.expected.trend.forEach((value, t) => { if (value !== null) expect(result.trend!.values[t]).toBeCloseTo(value, 6); });
    const whole = await run({ series: deaths });
    deaths.values.forEach((value, t) => { expect(whole.trend!.values[t] + whole.seasonal!.values[t] + whole.remainder!.values[t]).toBeCloseTo(value, 8); });
  });
  test("says how strong the season is and where it stands highest, then draws the pieces, the positions and the spectrum", async () => {
    const parts = decomposition.show(await run({ series: deaths }), show);
    // July is the month of most accidents and February that of the fewest (Brockwell & Davis 1991, figure 1.6).
    expect(texts(parts)).toMatch(/^The season explains \d\d% of what is left after the trend: a strong season.* highest at Jul \(\+1,\d{3} deaths\) and lowest at Feb \(−1,\d{3} deaths\), against the trend\./);
    expect(charts(parts).map(p => p.title)).toEqual(["Deaths taken apart by loess (STL)", "The season, position by position", "Spectrum of deaths, less a straight line", "Share of the variation at slower frequencies (Bartlett's test)"]);
    const svgs = await drawnCharts(parts);
    for (const name of ["trend", "season", "remainder"]) expect(svgs[0]).toContain(name);
    const places = ["Jan", "Jun", "Dec"].map(name => svgs[1].indexOf(`>${name}<`));
    expect(places.every(place => place > 0)).toBe(true);
    expect(svgs[2]).toContain("density (deaths² × periods)");
    expect(charts(parts)[2].alt).toMatch(/^Strongest in the periodogram: one cycle in 12\.0 periods \(\d\d% of the variation\)/);
    expect((await run({ series: deaths })).spectrum.peak!.period).toBeCloseTo(12, 10);
  });
  test("smooths such that a cycle is a peak of the line, not a plateau", async () => {
    const { spectrum } = await run({ series: deaths });
    const top = spectrum.smoothed.indexOf(Math.max(...spectrum.smoothed));
    expect(1 / spectrum.frequency[top]).toBeCloseTo(12, 10);
    expect(spectrum.smoothed[top + 2] / spectrum.smoothed[top]).toBeLessThan(0.8);
  });
  test("names positions by the calendar, wherever the series starts", async () => {
    const from = (every: string, start: string, n: number) => run({ series: makeSeries({ name: "x", every, start, values: Array.from({ length: n }, (_, t) => Math.sin(t) + t / 50) }) });
    expect((await from("P3M", "2019-Q3", 24)).labels.map(one => one.label)).toEqual(["Q3", "Q4", "Q1", "Q2"]);
    // 2024-02-29 was a Thursday.
    expect((await from("P1D", "2024-02-29", 30)).labels.map(one => one.label)).toEqual(["Thu", "Fri", "Sat", "Sun", "Mon", "Tue", "Wed"]);
    expect((await from("PT1H", "2024-02-29T22:00Z", 80)).labels.slice(0, 3).map(one => one.label)).toEqual(["22 h", "23 h", "0 h"]);
    const chart = charts(decomposition.show(await from("P3M", "2019-Q3", 24), show))[1];
    expect(chart.data.names.label).toEqual(["Q1", "Q2", "Q3", "Q4"]);
  });
  test("gives a multiplied season as shares of the trend", async () => {
    const parts = decomposition.show(await run({ series: madeSeries(), method: "multiplicative" }), show);
    // madeSeries has exp(0.2 sin): a fifth up at the fourth month.
    expect(texts(parts)).toMatch(/highest at Apr \(\+\d\d(\.\d)?% of the trend\)/);
    expect(texts(parts)).not.toMatch(/NaN|undefined/);
    await expect(drawnCharts(parts)).resolves.toHaveLength(4);
  });
  test("shows the spectrum alone where the spacing names no season, and says so", async () => {
    const nile = makeSeries({ name: "nile", every: "P1Y", start: "1871", values: column("nile") });
    const parts = decomposition.show(await run({ series: nile }), show);
    expect(texts(parts)).toContain("Its spacing names no season");
    expect(charts(parts).map(p => p.title)[0]).toBe("Spectrum of nile, less a straight line");
    await drawnCharts(parts);
  });
  test("says what gaps keep it from, and still shows the positions", async () => {
    const holes = monthly(column("usaccdeaths").map((v, t) => (t === 20 ? NaN : v)), "1973-01");
    const parts = decomposition.show(await run({ series: holes }), show);
    expect(texts(parts)).toContain("could not be taken apart: the series has gaps: fill them first.");
    expect(texts(parts)).toContain("No spectrum: the series has gaps");
    expect(charts(parts).map(p => p.title)).toEqual(["The season, position by position"]);
  });
  test("keeps a long series to what the width can show, and gives all of it as data", async () => {
    const long = makeSeries({ name: "load", unit: "MW", every: "PT1H", start: "2020-01-01T00:00Z", values: Array.from({ length: 20_000 }, (_, t) => 100 + 10 * Math.sin(2 * Math.PI * t / 24) + ((t * 7919) % 101) / 20) });
    const parts = charts(decomposition.show(await run({ series: long }), show));
    const sizes = parts.flatMap(p => Object.values(p.data).map(data => Object.values(data)[0]?.length ?? 0));
    expect(Math.max(...sizes)).toBeLessThan(6000);
    expect(parts[2].full!.spectrum.frequency).toHaveLength(10_000);
  });
  test("takes apart the log of a series, whose unit is then not that of the data", async () => {
    const parts = decomposition.show(await run({ series: stepped(madeSeries(), [{ step: "log" }]) }), show);
    expect(charts(parts)[0].title).toBe("The log of crossings taken apart by loess (STL)");
    expect(texts(parts)).toMatch(/highest at Apr \(\+0\.\d+ log vehicles\)/);
  });
});

describe("decomposition refuses, in words for its author,", () => {
  test("a season longer than half of the data, and an even window", async () => {
    await expect(run({ series: deaths, length: 50 })).rejects.toThrow("length is 50, and 72 values are fewer than two seasons of it");
    await expect(run({ series: deaths, seasonalWindow: 8 })).rejects.toThrow("expected an odd number from 3 on");
  });
});
