import { readdirSync, readFileSync } from "node:fs";
import { join } from "node:path";
import * as fc from "fast-check";
import { describe, expect, it } from "vitest";
import { OptionError } from "../../../cells/kind.ts";
import { load } from "../../../cells/load/load.ts";
import { isSeries, type Series } from "../../../stdlib/index.ts";
import { contextOf, runCell } from "../context.ts";
import { draw } from "../parts/draw.ts";

const one = async (text: string | Uint8Array, options: Record<string, unknown> = {}, file = "data.csv"): Promise<Series & { notes: string[] }> => {
  const context = contextOf({ name: "crossings", files: { [file]: text } });
  const series = await runCell(load, { file, ...options }, context);
  if (!isSeries(series)) throw new Error("expected one series");
  return { ...series, notes: context.notes };
};
const said = async (text: string | Uint8Array, options: Record<string, unknown> = {}): Promise<string> => one(text, options).then((s) => { throw new Error(`read ${s.n} values`); }, (error: Error) => error.message);

describe("load reads files as people write them", () => {
  it("a plain file: the first column of times, the first of numbers", async () => {
    const s = await one("month,vehicles\n2019-01,10\n2019-02,12.5\n2019-03,11\n", { unit: "vehicles" });
    expect([s.name, s.unit, s.every, s.start, ...s.values]).toEqual(["crossings", "vehicles", "P1M", "2019-01", 10, 12.5, 11]);
    expect(s.notes).toEqual([]);
  });
  it("byte order mark, carriage returns, quotes with separators and line breaks, blank lines", async () => {
    const s = await one('\uFEFFmonth,"vehicles, all",remark\r\n2019-01,"1,234","first\r\nmonth"\r\n\r\n2019-02,"2,345.5",""\r\n');
    expect([...s.values]).toEqual([1234, 2345.5]);
  });
  it("UTF-16 with its mark", async () => {
    const text = "month,x\n2019-01,1\n2019-02,2\n";
    const bytes = new Uint8Array(2 + 2 * text.length);
    bytes.set([0xff, 0xfe]);
    for (let i = 0; i < text.length; i++) bytes[2 + 2 * i] = text.charCodeAt(i);
    expect([...(await one(bytes)).values]).toEqual([1, 2]);
  });
  it.each([
    ["semicolons with a decimal comma", "Monat;Wert\n2019-01;1,5\n2019-02;2,25\n", [1.5, 2.25]],
    ["semicolons, points grouping thousands", "m;v\n2019-01;1.234,5\n2019-02;12.000,0\n", [1234.5, 12000]],
    ["semicolons, three decimals that could be thousands", "m;v\n2019-01;1,234\n2019-02;2,345\n", [1.234, 2.345]],
    ["semicolons with a decimal point", "m;v\n2019-01;1.25\n2019-02;2.345\n", [1.25, 2.345]],
    ["tabs", "m\tv\n2019-01\t1.5\n2019-02\t-2e3\n", [1.5, -2000]],
    ["bars", "m|v\n2019-01|1\n2019-02|2\n", [1, 2]],
    ["months with a point between month and year, decimal commas", "m;v\n11.2019;1.230,5\n12.2019;2,25\n", [1230.5, 2.25]],
    ["spaces grouping thousands and a long minus sign", "m;v\n2019-01;1 234,5\n2019-02;−3,5\n", [1234.5, -3.5]],
    ["a quoted decimal comma between commas", "m,v\n2019-01,\"1,5\"\n2019-02,\"2,25\"\n", [1.5, 2.25]],
  ])("%s", async (_, text, values) => {
    expect([...(await one(text)).values]).toEqual(values);
  });
  it("a month and its year with a point between them, beside decimal commas", async () => {
    const s = await one("m;v\n11.2019;1.230,5\n12.2019;2,25\n01.2020;3,5\n");
    expect([s.every, s.start, ...s.values]).toEqual(["P1M", "2019-11", 1230.5, 2.25, 3.5]);
  });
  it("says how an undecided thousand is read", async () => {
    const s = await one('m,v\n2019-01,"1,234"\n2019-02,"2,345"\n');
    expect([...s.values]).toEqual([1234, 2345]);
    expect(s.notes[0]).toContain('"1,234" is read as 1234');
  });
  it.each([
    ["2019-11,1\n2019-12,2\n2020-01,3", "P1M", "2019-11"],
    ["2019-Q4,1\n2020-Q1,2\n2020-Q2,3", "P3M", "2019-Q4"],
    ["2019-W51,1\n2019-W52,2\n2020-W01,3", "P1W", "2019-W51"],
    ["2019-03-05,1\n2019-03-06,2\n2019-03-07,3", "P1D", "2019-03-05"],
    ["2019-01-31,1\n2019-02-28,2\n2019-03-31,3", "P1M", "2019-01"],
    ["2019-03-31,1\n2019-06-30,2\n2019-09-30,3", "P3M", "2019-Q1"],
    ["2017-12-31,1\n2018-12-31,2\n2019-12-31,3", "P1Y", "2017"],
    ["2019-03-05T22:00Z,1\n2019-03-05T23:00Z,2\n2019-03-06T00:00Z,3", "PT1H", "2019-03-05T22:00Z"],
    ["2019-03-05 00:00:00,1\n2019-03-06 00:00:00,2\n2019-03-07 00:00:00,3", "P1D", "2019-03-05"],
    ["2019-03-05 13:30,1\n2019-03-05 13:45,2\n2019-03-05 14:00,3", "PT15M", "2019-03-05T13:30"],
    ["-6000,1\n-5999,2\n-5998,3", "P1Y", "-6000"],
    ["-0001,1\n0000,2\n0001,3", "P1Y", "-0001"],
    ["1871,1\n1872,2\n1873,3", "P1Y", "1871"],
    ["201911,1\n201912,2\n202001,3", "P1M", "2019-11"],
    ["20190305,1\n20190306,2\n20190307,3", "P1D", "2019-03-05"],
    ["2019M11,1\n2019M12,2\n2020M01,3", "P1M", "2019-11"],
    ["2019/1,1\n2019/2,2\n2019/3,3", "P1M", "2019-01"],
    ["Nov 2019,1\nDec 2019,2\nJan 2020,3", "P1M", "2019-11"],
    ["Q4 2019,1\nQ1 2020,2\nQ2 2020,3", "P3M", "2019-Q4"],
    ["5 March 2019,1\n6 March 2019,2\n7 March 2019,3", "P1D", "2019-03-05"],
    ["30.12.2019,1\n31.12.2019,2\n01.01.2020,3", "P1D", "2019-12-30"],
    ["12/30/2019,1\n12/31/2019,2\n1/1/2020,3", "P1D", "2019-12-30"],
    ["1,1\n2,2\n3,3", null, "1"],
  ])("times: %j", async (rows, every, start) => {
    for (const text of [`time,value\n${rows}\n`, ...(every === null ? [] : [`${rows}\n`])]) {
      const s = await one(text);
      expect([s.every, s.start, ...s.values]).toEqual([every, start, 1, 2, 3]);
    }
  });
  it("a year and a month beside each other", async () => {
    const s = await one("year,month,vehicles\n2019,11,1\n2019,12,2\n2020,1,3\n");
    expect([s.start, s.every, ...s.values]).toEqual(["2019-11", "P1M", 1, 2, 3]);
    expect((await one("y,q,v\n2019,Q3,1\n2019,Q4,2\n2020,Q1,3\n", { time: ["y", "q"], value: "v" })).start).toBe("2019-Q3");
    expect((await one("day,clock,v\n2019-03-05,9:00,1\n2019-03-05,10:00,2\n", { time: ["day", "clock"], value: "v" })).start).toBe("2019-03-05T09:00");
  });
  it("the order of day and month, where it is given", async () => {
    const text = "date,v\n01/02/2019,1\n01/03/2019,2\n01/04/2019,3\n";
    expect((await one(text, { order: "day-month" })).start).toBe("2019-02");
    expect((await one(text, { order: "month-day" })).start).toBe("2019-01-02");
  });
  it("no times at all: rows are numbered, or counted from a start", async () => {
    const s = await one("v\n5\n6\n7\n");
    expect([s.every, s.start, s.n]).toEqual([null, "1", 3]);
    expect(s.notes[0]).toContain("no column of times");
    expect((await one("v\n5\n6\n7\n", { start: "2019-11" })).times).toEqual(["2019-11", "2019-12", "2020-01"]);
    expect((await one("v\n5\n6\n", { start: "2019-03-05T10:00", every: "hour" })).times[1]).toBe("2019-03-05T11:00");
    expect((await one("t,v\n2019-01,5\n2019-04,6\n", { start: "1" })).every).toBeNull();
  });
  it("several series by header, or by names of one's own", async () => {
    const text = "month,full,reduced\n2019-01,1,2\n2019-02,3,4\n";
    const context = contextOf({ files: { "d.csv": text } });
    const byHeader = await runCell(load, { file: "d.csv", value: ["full", "reduced"], unit: { full: "fares" } }, context) as Record<string, Series>;
    expect([...byHeader["reduced"].values]).toEqual([2, 4]);
    expect([byHeader["full"].unit, byHeader["full"].name]).toEqual(["fares", "full"]);
    const own = await runCell(load, { file: "d.csv", value: { adult: "full" } }, context) as Record<string, Series>;
    expect(own["adult"].name).toBe("adult");
    const first = contextOf({ files: { "d.csv": text } });
    await runCell(load, { file: "d.csv" }, first);
    expect(first.notes[0]).toContain('"reduced"');
  });
  it("gaps become missing values and are told; missing texts can be named", async () => {
    const s = await one("month,v\n2019-01,1\n2019-02,NA\n2019-04,-\n2019-05,5\n", { missing: ["NA", "-"] });
    expect([...s.values]).toEqual([1, NaN, NaN, NaN, 5]);
    expect(s.notes).toEqual(["1 period of 5 is absent from data.csv and taken as missing: 2019-03", "2 values of crossings are missing: 2019-02 and 2019-04"]);
  });
  it("unordered rows are put in order, repeated ones kept once", async () => {
    const s = await one("month,v\n2019-03,3\n2019-01,1\n2019-02,2\n2019-02,2\n");
    expect([...s.values]).toEqual([1, 2, 3]);
    expect(s.notes[0]).toContain("line 3 (2019-01) comes after a later time");
    expect(s.notes[1]).toContain("1 row of data.csv repeats a time");
  });
  it("dates go before a numbering of the rows, as times and as values", async () => {
    const s = await one("id,date,vehicles\n1,2019-01,10\n2,2019-02,20\n3,2019-03,15\n");
    expect([s.start, ...s.values]).toEqual(["2019-01", 10, 20, 15]);
  });
  it("one row a year with a column a month is read across, to the last value there is", async () => {
    const names = "Jan,Feb,Mar,Apr,May,Jun,Jul,Aug,Sep,Oct,Nov,Dec";
    const s = await one(`Year,${names}\n2019,,2,3,4,5,6,7,8,9,10,11,12\n2020,13,14,,16,,,,,,,,\n`);
    expect([s.start, s.every, s.n, s.values[0], s.values[14]]).toEqual(["2019-02", "P1M", 15, 2, 16]);
    expect(s.notes[0]).toContain("read across its columns of months");
    expect((await one("year,Q1,Q2,Q3,Q4\n2019,1,2,3,4\n2020,5,6,7,8\n")).times.at(-1)).toBe("2020-Q4");
  });
  it("working days: absent weekends are told, with what to do", async () => {
    const rows = Array.from({ length: 20 }, (_, i) => { const d = new Date(Date.UTC(2019, 2, 4 + Math.floor(i / 5) * 7 + (i % 5))); return `${d.toISOString().slice(0, 10)},${i}`; });
    const s = await one(`day,v\n${rows.join("\n")}\n`);
    expect(s.every).toBe("P1D");
    expect(s.notes[0]).toContain('start: "1" numbers the rows');
  });
  it("every reference series keeps its numbers and times to the digit", async () => {
    const folder = join(import.meta.dirname, "../../reference/series");
    for (const file of readdirSync(folder)) {
      const text = readFileSync(join(folder, file), "utf8");
      const rows = text.trim().split("\n").slice(1).map((line) => line.split(","));
      const s = await one(text, {}, file);
      expect(s.times, file).toEqual(rows.map((r) => r[0]));
      expect([...s.values], file).toEqual(rows.map((r) => (r[1] === "" ? NaN : Number(r[1]))));
    }
  });
});

describe("load says in words what is wrong, and where", () => {
  it.each<[string, string | Uint8Array, Record<string, unknown>, string]>([
    ["an empty file", "", {}, "data.csv is empty"],
    ["white space only", "\n \n", {}, "data.csv has no rows to read"],
    ["a header only", "month,v\n", {}, "data.csv has a header and no rows below it"],
    ["a file with zero bytes", new Uint8Array([65, 44, 0, 10]), {}, "not a text file: byte 3 is zero"],
    ["another encoding", new Uint8Array([0x61, 0x2c, 0x62, 10, 0xe4, 0x2c, 0x31, 10]), {}, "not UTF-8 text: line 2"],
    ["a damaged spreadsheet", new Uint8Array([0x50, 0x4b, 3, 4, 0, 0]), {}, "a damaged archive"],
    ["a quote never closed", 'month,v\n2019-01,"1\n2019-02,2\n', {}, "line 2: a quote (\") is opened and never closed"],
    ["a text among numbers", "month,vehicles\n2019-01,1\n2019-02,closed\n2019-03,3\n", {}, 'data.csv, line 3, column "vehicles": "closed" is not a number; if it stands for a missing value, say missing: ["closed"]'],
    ["a number with a unit", "month,v\n2019-01,1\n2019-02,5 kg\n2019-03,3\n", {}, '"5 kg" is not a number; write the number plainly'],
    ["two values for one time", "month,v\n2019-01,1\n2019-02,2\n2019-02,3\n", {}, 'lines 3 and 4 both give 2019-02, one with 2 and one with 3 in column "v"'],
    ["a month that is none", "month,v\n2019-12,1\n2019-13,2\n", {}, "data.csv, line 3: 2019-13 is not a date: there is no month 13"],
    ["a time that is none", "month,v\n2019-01,1\nlater,2\n2019-03,3\n", {}, 'line 3: "later" is not a time'],
    ["no time in a row", "month,v\n2019-01,1\n,2\n2019-03,3\n", {}, 'line 3: there is no time in column "month"'],
    ["times of several forms", "month,v\n2019-01,1\n2019-02,2\n2019-Q3,3\n", {}, "line 4: 2019-Q3 is a quarter, where the rows before give a month"],
    ["dates that may be either", "d,v\n01/02/2019,1\n02/02/2019,2\n", {}, 'say order: "day-month" or order: "month-day"'],
    ["dates in both orders", "d,v\n13/02/2019,1\n02/13/2019,2\n", {}, "mixes orders of day and month"],
    ["a year of two digits", "d,v\n3/5/19,1\n4/5/19,2\n", {}, "data.csv, line 2: 3/5/19 has a year of two digits; write all four"],
    ["a month with a year of two digits", "m,v\nJan-19,1\nFeb-19,2\n", {}, "Jan-19 has a year of two digits"],
    ["uneven times", "d,v\n2019-01-01,1\n2019-01-06,2\n2019-01-08,3\n2019-01-31,4\n", {}, "are not evenly spaced"],
    ["a slip in a year", "m,v\n2019-01,1\n2019-02,2\n2091-03,3\n", {}, "after 2019-02 (line 3) comes 2091-03 (line 4)"],
    ["a column that is not there", "month,vehicles\n2019-01,1\n", { value: "Vehicles" }, 'has no column "Vehicles": did you mean "vehicles"?'],
    ["another column that is not there", "month,vehicles\n2019-01,1\n", { value: "price" }, 'has no column "price"; its columns are "month", "vehicles"'],
    ["two columns of one name", "month,v,v\n2019-01,1,2\n", { value: "v" }, '2 columns called "v"'],
    ["a spacing that the times do not have", "month,v\n2019-01,1\n2019-02,2\n", { every: "day" }, "every day does not fit times such as 2019-01: the spacing is not a whole number of months"],
    ["a percentage", "month,share\n2019-01,20.3%\n2019-02,21%\n", {}, 'In "share", "20.3%" is no plain number: leave out what is not a digit'],
    ["sums of money", 'month,fee\n2019-01,"$1,204"\n2019-02,"$1,300"\n', {}, 'In "fee", "$1,204" is no plain number'],
    ["several series below one another", "month,region,v\n2019-01,north,1\n2019-01,south,2\n2019-02,north,3\n", {}, 'they differ in column "region" ("north", "south"): the file holds several series below one another'],
    ["no numbers", "month,v\n2019-01,a\n2019-02,b\n", {}, "has no column of numbers beside the times"],
    ["more cells than the header", "month,v\n2019-01,1,2\n", {}, "line 2: 3 cells, where the header has 2"],
    ["every without times", "v\n1\n2\n", { every: "month" }, 'start: "2019-01"'],
    ["an unknown spacing", "m,v\n2019-01,1\n2019-02,2\n", { every: "fortnight" }, '"fortnight" is not a spacing'],
    ["a spacing coarser than the rows", "d,v\n2019-03-04,1\n2019-03-05,2\n2019-03-06,3\n", { every: "week" }, "does not fall on a week"],
    ["days loaded as months", "d,v\n2019-03-04,1\n2019-03-05,2\n2019-03-06,3\n", { every: "month" }, "both give 2019-03"],
    ["start and time", "m,v\n2019-01,1\n", { start: "2019-01", time: "m" }, "leave out either"],
    ["a start that is no date", "v\n1\n", { start: "2019-13" }, "2019-13 is not a date"],
    ["everything missing", "m,v,w\n2019-01,NA,1\n2019-02,NA,2\n", { value: "v" }, "every value in data.csv is missing"],
    ["a sheet of a text file", "m,v\n2019-01,1\n", { sheet: "one" }, "has no sheets"],
    ["a file that is not there", "", { file: "other.csv" }, "there is no file other.csv"],
    ["a number for a file", "", { file: 3 }, "`file` is the number 3"],
  ])("%s", async (_, text, options, message) => {
    expect(await said(text, options)).toContain(message);
  });
});

describe("load on any text at all", () => {
  it("gives series or a refusal in words, never another fault (seed 31)", async () => {
    const piece = fc.constantFrom("2019-01", "2019-02", "2019-Q1", "2019", "1", "2", "-3.5", "1,5", "1.234,5", "NA", "", "x", "Jan", "Feb", "year", "month", "5/3/2019", "31/31/2019", '"', "a\"b", ";", "\t", "#", "−", "1e999", "0000", "-6000");
    const line = fc.array(piece, { minLength: 1, maxLength: 4 });
    await fc.assert(fc.asyncProperty(fc.array(line, { maxLength: 8 }), fc.constantFrom(",", ";", "\t"), async (lines, separator) => {
      const text = lines.map((cells) => cells.join(separator)).join("\n");
      try {
        const s = await one(text);
        expect(s.times.length).toBe(s.values.length);
        expect(s.n).toBeGreaterThan(0);
      } catch (error) {
        expect(error).toBeInstanceOf(OptionError);
        expect((error as Error).message.length).toBeGreaterThan(20);
      }
    }), { seed: 31, numRuns: 600 });
  });
});

describe("what load shows", () => {
  it("a picture and figures of one series, with a sentence for whoever does not see it", async () => {
    const s = await one("month,v\n2019-01,10\n2019-02,12\n2019-03,\n2019-04,11\n", { unit: "vehicles" });
    const parts = load.show(s, { name: "crossings", width: 700 });
    const chart = parts.find((p) => p.part === "chart");
    if (chart?.part !== "chart") throw new Error("no chart");
    expect(chart.alt).toBe("Crossings, every month from 2019-01 to 2019-04: 3 values between 10 and 12 vehicles, the first 10, the last 11; 1 missing.");
    expect((await draw(chart)).warnings).toEqual([]);
  });
});
