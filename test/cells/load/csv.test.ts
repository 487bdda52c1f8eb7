import * as fc from "fast-check";
import { describe, expect, it } from "vitest";
import { parseRows, separatorOf, type Separator } from "../../../cells/load/csv.ts";
import { decimalOf, numberOf } from "../../../cells/load/numbers.ts";
import { orderOf, timeOf } from "../../../cells/load/times.ts";
import { formatPeriod } from "../../../stdlib/index.ts";

const quoted = (cell: string): string => `"${cell.replaceAll('"', '""')}"`;

describe("parseRows", () => {
  it("gives back every cell that was written, whatever stands in it (seed 21)", () => {
    const cell = fc.stringMatching(/^[a-z",;\n 0-9-]{0,8}$/);
    const rows = fc.array(fc.array(cell, { minLength: 2, maxLength: 4 }), { minLength: 1, maxLength: 6 });
    fc.assert(fc.property(rows, fc.constantFrom<Separator>(",", ";", "\t", "|"), fc.constantFrom("\n", "\r\n"), (table, separator, end) => {
      const text = table.map((row) => row.map(quoted).join(separator)).join(end);
      const expected = table.map((row) => row.map((c) => c.trim())).filter((row) => row.some((c) => c !== ""));
      expect(parseRows(text, separator).map((row) => [...row.cells])).toEqual(expected);
    }), { seed: 21, numRuns: 400 });
  });
  it("knows the line of every row, also after a line break inside quotes", () => {
    expect(parseRows('a,b\n"x\ny",1\n\nz,2', ",").map((row) => row.line)).toEqual([1, 2, 5]);
  });
  it("ends where the text ends, with or without a line end", () => {
    expect(parseRows("a,b\n1,", ",")[1].cells).toEqual(["1", ""]);
    expect(parseRows("", ",")).toEqual([]);
    expect(parseRows("a\rb\r", ",").map((row) => row.cells[0])).toEqual(["a", "b"]);
  });
});

describe("separatorOf", () => {
  it.each<[string, Separator]>([
    ["a,b\n1,2\n", ","], ["a;b\n1,5;2,5\n3,5;4,5\n", ";"], ["a\tb\n1,5\t2\n", "\t"], ["a|b\n1|2", "|"], ["v\n1\n2\n", ","], ['"x;y",b\n"p;q",2\n', ","],
  ])("%j", (text, separator) => { expect(separatorOf(text)).toBe(separator); });
});

describe("numberOf", () => {
  it("reads back every double in both conventions (seed 22)", () => {
    fc.assert(fc.property(fc.double({ noNaN: true, noDefaultInfinity: true }), (x) => {
      expect(numberOf(String(x), ".")).toBe(Number(String(x)));
      expect(numberOf(String(x).replace(".", ","), ",")).toBe(Number(String(x)));
    }), { seed: 22, numRuns: 500 });
  });
  it.each<[string, "." | ",", number | null]>([
    ["1,234.5", ".", 1234.5], ["1.234,5", ",", 1234.5], ["1 234", ".", 1234], ["1'234'567.5", ".", 1234567.5], ["−3", ".", -3], ["+3", ".", 3], [".5", ".", 0.5], ["5.", ".", 5], ["1e3", ".", 1000],
    ["1,23", ".", null], ["1.5", ",", null], ["12 34", ".", null], ["", ".", null], ["-", ".", null], ["5%", ".", null], ["0x10", ".", null], ["Infinity", ".", null], ["1e999", ".", null], ["1,2345", ".", null], ["1,234,56", ".", null],
  ])("%j with decimal %j is %j", (cell, decimal, value) => { expect(numberOf(cell, decimal)).toBe(value); });
  it("the decimal sign is decided by the cells that can only be read one way", () => {
    expect(decimalOf(["1,234", "2,5"], ";")).toEqual({ decimal: ",", unsure: null });
    expect(decimalOf(["1,234", "2.5"], ",")).toEqual({ decimal: ".", unsure: null });
    expect(decimalOf(["1,234"], ";")).toEqual({ decimal: ",", unsure: "1,234" });
    expect(decimalOf(["1,234"], ",")).toEqual({ decimal: ".", unsure: "1,234" });
    expect(decimalOf(["1,234,567"], ",")).toEqual({ decimal: ".", unsure: null });
    expect(decimalOf(["5.3.2019", "7"], ",")).toEqual({ decimal: ".", unsure: null });
  });
});

describe("timeOf", () => {
  it.each<[string, string]>([
    ["2019-3", "2019-03"], ["03/2019", "2019-03"], ["2019 Q1", "2019-Q1"], ["2019q1", "2019-Q1"], ["Q1/2019", "2019-Q1"], ["2019:3", "2019-03"], ["2019W7", "2019-W07"], ["Sept. 2019", "2019-09"], ["2019-Mar", "2019-03"], ["March 5th, 2019", "2019-03-05"],
    ["2019/3/5", "2019-03-05"], ["2019-03-05 9:30", "2019-03-05T09:30"], ["2019-03-05 9:30 PM", "2019-03-05T21:30"], ["2019-03-05 12:00 am", "2019-03-05T00:00"], ["2019-03-05T09:30:00.000Z", "2019-03-05T09:30:00Z"],
  ])("%j is %s", (cell, text) => { const p = timeOf(cell, null); expect(p === null ? null : formatPeriod(p)).toBe(text); });
  it.each(["2710.34", "12.3456", "abc", "may", "12345", "123456789", "05/03/2019", "2019-03-05 noon"])("%j is none, without an order", (cell) => { expect(timeOf(cell, null)).toBeNull(); });
  it("day and month follow the order", () => {
    expect(formatPeriod(timeOf("05/03/2019", "day-month")!)).toBe("2019-03-05");
    expect(formatPeriod(timeOf("05/03/2019 14:00", "month-day")!)).toBe("2019-05-03T14:00");
    expect(() => timeOf("05/13/2019", "day-month")).toThrow("no month 13");
    expect(orderOf(["05/03/2019", "13/03/2019"])).toBe("day-month");
    expect(orderOf(["5.3.2019"])).toBe("day-month");
    expect(orderOf(["2019-03-05"])).toBeNull();
  });
});
