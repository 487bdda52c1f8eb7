import * as fc from "fast-check";
import { describe, expect, it } from "vitest";
import { daysIn, indexRange, milliseconds, periodIndex, periodSpan, timeAt, timesFrom } from "../../../stdlib/series/calendar.ts";
import { civilFromDays, daysFromCivil, daysInMonth, isoWeek } from "../../../stdlib/series/civil.ts";
import { defaultSeasonLength, everyInWords, formatEvery, parseEvery, periodsAYear } from "../../../stdlib/series/every.ts";
import { endMs, formatPeriod, parsePeriod, startMs } from "../../../stdlib/series/period.ts";
import { makeSeries } from "../../../stdlib/series/series.ts";

describe("civil dates", () => {
  it("agree with the platform's calendar wherever that has no two-digit years", () => {
    fc.assert(fc.property(fc.integer({ min: 100, max: 9999 }), fc.integer({ min: 1, max: 12 }), fc.integer({ min: 1, max: 28 }), (y, m, d) => {
      expect(daysFromCivil(y, m, d) * 86_400_000).toBe(Date.UTC(y, m - 1, d));
    }), { seed: 11 });
  });
  it("go back and forth over ten thousand years on both sides of year 0", () => {
    fc.assert(fc.property(fc.integer({ min: -4_000_000, max: 4_000_000 }), (days) => {
      const { year, month, day } = civilFromDays(days);
      expect(daysFromCivil(year, month, day)).toBe(days);
    }), { seed: 12 });
  });
  it("year 0 is a leap year and 1900 is none", () => {
    expect(daysInMonth(0, 2)).toBe(29);
    expect(daysInMonth(1900, 2)).toBe(28);
    expect(daysInMonth(2000, 2)).toBe(29);
  });
  it("weeks follow ISO 8601: 2020 has 53, and 2019-W01 starts in 2018", () => {
    expect(formatPeriod(parsePeriod("2020-W53")!)).toBe("2020-W53");
    expect(() => parsePeriod("2019-W53")).toThrow("there is no week 53 in that year");
    expect(startMs(parsePeriod("2019-W01")!)).toBe(Date.UTC(2018, 11, 31));
    expect(isoWeek(parsePeriod("2021-W01")!.index - 1)).toEqual({ year: 2020, week: 53 });
  });
});

describe("period texts", () => {
  it.each(["1871", "-6000", "0000", "+12345", "2019-Q1", "2019-03", "-0001-12", "2019-W07", "2019-03-05", "2019-03-05T14:00Z", "2019-03-05T14:00", "2019-03-05T14:00:30", "2019-03-05T14:00:30.250Z"])("%s is read and written alike", (text) => {
    expect(formatPeriod(parsePeriod(text)!)).toBe(text);
  });
  it("an offset is turned into UTC", () => {
    expect(formatPeriod(parsePeriod("2019-03-05T00:30+02:00")!)).toBe("2019-03-04T22:30Z");
  });
  it("a partial date covers its whole period", () => {
    const p = parsePeriod("2020-02")!;
    expect((endMs(p) - startMs(p)) / 86_400_000).toBe(29);
  });
  it("a text of another form is null, and one that names no date says why", () => {
    expect(parsePeriod("March 2019")).toBeNull();
    expect(parsePeriod("12")).toBeNull();
    expect(() => parsePeriod("2019-13")).toThrow("2019-13 is not a date: there is no month 13");
    expect(() => parsePeriod("2019-02-29")).toThrow("2019-02-29 is not a date: that month has 28 days");
    expect(() => parsePeriod("2019-Q5")).toThrow("no quarter 5");
  });
});

describe("spacing", () => {
  it("takes words and durations and writes the usual form", () => {
    expect(formatEvery(parseEvery("month"))).toBe("P1M");
    expect(formatEvery(parseEvery("P12M"))).toBe("P1Y");
    expect(formatEvery(parseEvery("P7D"))).toBe("P1W");
    expect(formatEvery(parseEvery("PT60M"))).toBe("PT1H");
    expect(everyInWords("P3M")).toBe("quarter");
    expect(() => parseEvery("fortnight")).toThrow('"fortnight" is not a spacing');
  });
  it("knows the usual season and the periods of a year", () => {
    expect(["P1M", "P3M", "P1W", "P1D", "PT1H", "PT30M", "P1Y", null].map(defaultSeasonLength)).toEqual([12, 4, 52, 7, 24, 48, null, null]);
    expect(periodsAYear("P3M")).toBe(4);
    expect(periodsAYear("P1W")).toBeCloseTo(52.1775, 4);
  });
});

describe("times of a series", () => {
  it("run over year ends in each form", () => {
    expect(timesFrom("2019-11", "P1M", 3)).toEqual(["2019-11", "2019-12", "2020-01"]);
    expect(timesFrom("2019-Q4", "P3M", 2)).toEqual(["2019-Q4", "2020-Q1"]);
    expect(timesFrom("2020-W53", "P1W", 2)).toEqual(["2020-W53", "2021-W01"]);
    expect(timesFrom("-0001", "P1Y", 3)).toEqual(["-0001", "0000", "0001"]);
    expect(timesFrom("2020-02-28", "P1D", 3)).toEqual(["2020-02-28", "2020-02-29", "2020-03-01"]);
    expect(timesFrom("2020-01-31", "P1M", 3)).toEqual(["2020-01-31", "2020-02-29", "2020-03-31"]);
    expect(timesFrom("2019-03-30T23:00Z", "PT1H", 2)).toEqual(["2019-03-30T23:00Z", "2019-03-31T00:00Z"]);
    expect(timesFrom("1", null, 3)).toEqual(["1", "2", "3"]);
    expect(timeAt("2019-01", "P3M", 2)).toBe("2019-07");
  });
  it("are UTC instants, years before 100 included", () => {
    expect([...milliseconds("0099", "P1Y", 2)]).toEqual([-59042995200000, -59011459200000]);
    expect(milliseconds("2019-01", "P1M", 2)[1]).toBe(Date.UTC(2019, 1, 1));
  });
  it("positions on the common grid differ by one between neighbours, whatever the spacing", () => {
    for (const [start, every] of [["2019-01", "P1M"], ["2019-Q1", "P3M"], ["2019-W05", "P1W"], ["2019-03-06", "P1W"], ["2019-03-06", "P2W"], ["2019-03-05T14:15", "PT15M"], ["-0003", "P1Y"], ["2019-01-31", "P1M"]] as const) {
      const k = timesFrom(start, every, 30).map((t) => periodIndex(t, every));
      expect(k.map((v) => v - k[0])).toEqual(k.map((_, i) => i));
    }
  });
  it("spans cover whole partial dates", () => {
    expect(periodSpan("2019", "P1M")).toEqual({ from: 24228, to: 24240 });
    expect(periodSpan("2019-03-17", "P1M")).toEqual({ from: 24230, to: 24231 });
    const weeks = periodSpan("2020", "P1W");
    expect(weeks.to - weeks.from).toBe(53);
    expect(periodSpan("2020-W53", "P1W").to - periodSpan("2020-W53", "P1W").from).toBe(1);
    expect(periodSpan("2019-03-06", "P1W").from).toBe(periodIndex("2019-03-04", "P1W"));
  });
  it("days of a period", () => {
    expect(daysIn("2020-02", "P1M")).toBe(29);
    expect(daysIn("2019-Q1", "P3M")).toBe(90);
  });
});

describe("indexRange", () => {
  const monthly = makeSeries({ name: "crossings", every: "P1M", start: "2010-01", values: new Float64Array(180) });
  it("includes both ends, partial dates whole", () => {
    expect(indexRange(monthly, "2011", "2012")).toEqual({ from: 12, to: 36 });
    expect(indexRange(monthly, "2011-03", "2011-03")).toEqual({ from: 14, to: 15 });
    expect(indexRange(monthly, "2011-Q2", undefined)).toEqual({ from: 15, to: 180 });
    expect(indexRange(monthly, undefined, "2010-01-20")).toEqual({ from: 0, to: 1 });
    expect(indexRange(monthly, "1999", "2030")).toEqual({ from: 0, to: 180 });
  });
  it("puts an ISO week into the year of its Thursday", () => {
    const weekly = makeSeries({ name: "prices", every: "P1W", start: "2019-W01", values: new Float64Array(120) });
    expect(indexRange(weekly, "2019", "2019")).toEqual({ from: 0, to: 52 });
    expect(indexRange(weekly, "2020", "2020")).toEqual({ from: 52, to: 105 });
    expect(indexRange(weekly, "2019-01-09", undefined)).toEqual({ from: 1, to: 120 });
  });
  it("works on quarters, days and hours", () => {
    const quarterly = makeSeries({ name: "output", every: "P3M", start: "1960-Q1", values: new Float64Array(40) });
    expect(indexRange(quarterly, "1961", "1961-05")).toEqual({ from: 4, to: 6 });
    const hourly = makeSeries({ name: "load", every: "PT1H", start: "2019-03-05T00:00Z", values: new Float64Array(72) });
    expect(indexRange(hourly, "2019-03-06", "2019-03-06")).toEqual({ from: 24, to: 48 });
  });
  it("says in words what is wrong", () => {
    expect(() => indexRange(monthly, 2011, undefined)).toThrow("2011 is a number where a time belongs: quote the date");
    expect(() => indexRange(monthly, "2011-13", undefined)).toThrow("2011-13 is not a date");
    expect(() => indexRange(monthly, "2030-01", undefined)).toThrow("2030-01 lies after the last period of crossings, 2024-12");
    expect(() => indexRange(monthly, undefined, "2009")).toThrow("2009 lies before the first period of crossings, 2010-01");
    expect(() => indexRange(monthly, "2012", "2011")).toThrow("the start comes after the end");
    expect(() => indexRange(makeSeries({ name: "x", values: [1, 2] }), "2012-01", undefined)).toThrow("only numbered");
  });
});
