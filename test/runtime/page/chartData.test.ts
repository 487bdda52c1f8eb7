import { csvParseRows } from "d3-dsv";
import * as fc from "fast-check";
import { describe, expect, it } from "vitest";
import type { ChartPart } from "../../../cells/parts/part.ts";
import { chartCsv, csv, rowsOf, timeFields, timeTexts } from "../../../runtime/page/chartData.ts";

const day = (text: string): number => Date.parse(text);

describe("csv", () => {
  it("gives every number back to the bit", () => {
    fc.assert(fc.property(fc.array(fc.double({ noNaN: true }), { minLength: 1 }), (numbers) => {
      const [, ...rows] = csvParseRows(csv(["x"], numbers.map((x) => [x])));
      rows.forEach(([text], i) => expect(Number(text)).toBe(numbers[i]));
    }), { seed: 3 });
  });
  it("quotes what needs it and leaves a missing value empty", () => {
    expect(csv(["a", "b, c"], [["x\"y", null], [NaN, true]])).toBe('a,"b, c"\r\n"x""y",\r\n,true\r\n');
  });
});

describe("timeTexts", () => {
  it("writes dates as short as all of them allow", () => {
    expect(timeTexts(Float64Array.of(day("2019-01-01"), day("2020-01-01")))).toEqual(["2019", "2020"]);
    expect(timeTexts(Float64Array.of(day("2019-03-01"), day("2019-04-01")))).toEqual(["2019-03", "2019-04"]);
    expect(timeTexts(Float64Array.of(day("2019-03-05"), NaN))).toEqual(["2019-03-05", null]);
    expect(timeTexts(Float64Array.of(day("2019-03-05T14:00:00Z")))).toEqual(["2019-03-05T14:00Z"]);
    expect(timeTexts(Float64Array.of(Date.UTC(-5999, 0, 1), Date.UTC(-5998, 0, 1)))).toEqual(["-005999", "-005998"]);
  });
});

describe("chartCsv", () => {
  const part: ChartPart = {
    part: "chart", title: "t", alt: "a", height: 100,
    spec: { layer: [{ encoding: { x: { field: "when", type: "temporal" }, y: { field: "v", type: "quantitative" } } }] },
    data: { thin: { when: Float64Array.of(day("2019-01-01")), v: Float64Array.of(1) } },
    full: { thin: { when: Float64Array.of(day("2019-01-01"), day("2019-02-01")), v: Float64Array.of(1 / 3, NaN) } },
  };
  it("gives the full data where the drawn ones were thinned, times as texts", () => {
    expect(chartCsv(part)).toBe("when,v\r\n2019-01,0.3333333333333333\r\n2019-02,\r\n");
  });
  it("leaves out what is only drawn where the full data are there: nothing stands in the file twice", () => {
    expect(chartCsv({ ...part, full: { all: { when: ["2019-01", "2019-02"], v: Float64Array.of(1, 2) } } })).toBe("when,v\r\n2019-01,1\r\n2019-02,2\r\n");
  });
  it("says which data set a row is of when there are several", () => {
    expect(chartCsv({ ...part, full: undefined, data: { a: { when: Float64Array.of(day("2019-03-04")) }, b: { v: [2] } } })).toBe("data,when,v\r\na,2019-03-04,\r\nb,,2\r\n");
  });
  it("knows the second end of a span for a time too", () => {
    expect([...timeFields({ encoding: { x: { field: "from", type: "temporal" }, x2: { field: "to" } } })]).toEqual(["from", "to"]);
  });
});

describe("rowsOf", () => {
  it("makes missing values null, and fills short columns", () => {
    expect(rowsOf({ a: Float64Array.of(1, NaN), b: ["x"] })).toEqual([{ a: 1, b: "x" }, { a: null, b: null }]);
  });
});
