import { describe, expect, it } from "vitest";
import { easterMs } from "../../../stdlib/forecast/easter.ts";
import { easterEffect, harmonics, interventionColumns, levelShift, pulse, ramp, temporaryChange, tradingDays } from "../../../stdlib/forecast/interventions.ts";

const column = (...given: Parameters<typeof interventionColumns>) => [...interventionColumns(...given).columns[0]];

describe("interventions by hand", () => {
  it("a pulse is 1 in its period, and in every period of a longer date", () => {
    expect(column(pulse("2024-02"), "x", "2024-01", "P1M", 4)).toEqual([0, 1, 0, 0]);
    expect(column(pulse("2024"), "x", "2023-12", "P1M", 14)).toEqual([0, ...Array.from({ length: 12 }, () => 1), 0]);
    expect(column(pulse("2024-02-11"), "x", "2024-01", "P1M", 3)).toEqual([0, 1, 0]);
    expect(column(pulse("2"), "x", "1", null, 3)).toEqual([0, 1, 0]);
    expect(column(pulse("2019-Q2"), "x", "2019-Q1", "P3M", 3)).toEqual([0, 1, 0]);
  });
  it("a level shift stays, a ramp rises from 0 to 1, a temporary change dies away", () => {
    expect(column(levelShift("2024-02"), "x", "2024-01", "P1M", 4)).toEqual([0, 1, 1, 1]);
    expect(column(levelShift("2020"), "x", "2024-01", "P1M", 2)).toEqual([1, 1]);
    expect(column(ramp("2024-01", "2024-05"), "x", "2023-12", "P1M", 7)).toEqual([0, 0, 0.25, 0.5, 0.75, 1, 1]);
    expect(column(temporaryChange("2024-02", 0.5), "x", "2024-01", "P1M", 4)).toEqual([0, 1, 0.5, 0.25]);
  });
  it("refuses a ramp that ends before it starts, and a count of harmonics beyond half the length", () => {
    expect(() => column(ramp("2024-05", "2024-01"), "x", "2023-12", "P1M", 7)).toThrow(/not after its start/);
    expect(() => harmonics(12, 7)).toThrow("whole number from 1 to 6");
  });
  it("June 2024 had five Saturdays and Sundays and four of each other day", () => {
    const { names, columns } = interventionColumns(tradingDays(), "td", "2024-06", "P1M", 1);
    expect(names[0]).toBe("td.Monday");
    expect(columns.map((c) => c[0])).toEqual([-1, -1, -1, -1, -1, 0]);
    expect(() => interventionColumns(tradingDays(), "td", "2024-W01", "P1W", 3)).toThrow("whole weeks");
  });
});

describe("interventions by reference", () => {
  // Dates of Easter Sunday as printed in the tables of the Book of Common Prayer and any almanac.
  it.each([["1961-04-02", 1961], ["2000-04-23", 2000], ["2019-04-21", 2019], ["2024-03-31", 2024], ["2038-04-25", 2038], ["2285-03-22", 2285]])("Easter fell on %s", (date, year) => {
    expect(new Date(easterMs(year)).toISOString().slice(0, 10)).toBe(date);
  });
  it("the eight days before Easter 2024 (31 March) all fall in March; before 2018's (1 April) too; 2019's in April", () => {
    expect(column(easterEffect(8), "e", "2024-02", "P1M", 3)).toEqual([0, 1, 0]);
    expect(column(easterEffect(8), "e", "2019-03", "P1M", 2)).toEqual([0, 1]);
    // Easter 2021 was on 4 April: three of the eight days before it in April.
    expect(column(easterEffect(8), "e", "2021-03", "P1M", 2)).toEqual([5 / 8, 3 / 8]);
  });
});

describe("interventions by law", () => {
  it("values do not depend on where the columns start", () => {
    for (const what of [pulse("2020-06"), levelShift("2020-06"), ramp("2019-06", "2021-06"), harmonics(12, 6), tradingDays(), easterEffect(6), temporaryChange("2020-01")]) {
      const whole = interventionColumns(what, "x", "2019-01", "P1M", 48), late = interventionColumns(what, "x", "2021-01", "P1M", 24);
      expect(late.names).toEqual(whole.names);
      late.columns.forEach((c, j) => c.forEach((v, t) => expect(v).toBeCloseTo(whole.columns[j][24 + t], 12)));
    }
    const daily = interventionColumns(harmonics(7, 3), "x", "2019-01-01", "P1D", 40), later = interventionColumns(harmonics(7, 3), "x", "2019-01-11", "P1D", 30);
    later.columns.forEach((c, j) => c.forEach((v, t) => expect(v).toBeCloseTo(daily.columns[j][10 + t], 12)));
  });
  it("each Easter adds up to 1 over its year; the six contrasts over 28 years of months to 0", () => {
    const e = column(easterEffect(10), "e", "2001-01", "P1M", 336);
    for (let year = 0; year < 28; year++) expect(e.slice(12 * year, 12 * year + 12).reduce((a, b) => a + b)).toBeCloseTo(1, 12);
    for (const c of interventionColumns(tradingDays(), "td", "2001-01", "P1M", 336).columns) expect(c.reduce((a, b) => a + b)).toBe(0);
  });
  it("the last harmonic of an even length has no sine", () => {
    expect(interventionColumns(harmonics(4, 2), "w", "2019-Q1", "P3M", 2).names).toEqual(["w.cos1", "w.sin1", "w.cos2"]);
  });
});
