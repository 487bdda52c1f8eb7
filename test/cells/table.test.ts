import { describe, expect, it } from "vitest";
import { table } from "../../cells/table.ts";
import { makeSeries } from "../../stdlib/index.ts";
import { runCell } from "./context.ts";

describe("table", () => {
  it("shows rows with a column a field, numbers alike down a column", async () => {
    const part = await runCell(table, { rows: [{ label: "a", n: 3, aicc: -483.25 }, { label: "b", n: 12, aicc: NaN }] });
    expect(part.columns).toEqual([{ title: "label" }, { title: "n", align: "right", format: ",d" }, { title: "aicc", align: "right", format: ",.1f" }]);
    expect(part.rows).toEqual([["a", 3, -483.25], ["b", 12, NaN]]);
  });
  it("gives no more decimals than the numbers have", async () => {
    expect((await runCell(table, { rows: [{ a: 1, b: 0.1 + 0.2, c: 1e-7 }, { a: 2.5, b: 1, c: 2e-7 }] })).columns.map((c) => c.format)).toEqual([",.1f", ",.1f", ",.7f"]);
  });
  it("shows a series by its periods, and columns side by side", async () => {
    const s = makeSeries({ name: "x", every: "P1M", start: "2019-01", values: [1, 2] });
    expect((await runCell(table, { rows: s })).rows).toEqual([["2019-01", 1], ["2019-02", 2]]);
    expect((await runCell(table, { rows: s })).columns[1].title).toBe("x");
    expect((await runCell(table, { rows: { lag: [1, 2], r: Float64Array.of(0.5, 0.25) } })).rows).toEqual([[1, 0.5], [2, 0.25]]);
    expect((await runCell(table, { rows: [5, 6] })).rows).toEqual([[1, 5], [2, 6]]);
  });
  it("shows chosen fields, under headings of one's own, by path", async () => {
    const rows = [{ label: "a", fit: { aicc: 1 } }, { label: "b" }];
    const part = await runCell(table, { rows, columns: { model: "label", AICc: "fit.aicc" } });
    expect([part.columns.map((c) => c.title), part.rows]).toEqual([["model", "AICc"], [["a", 1], ["b", null]]]);
    expect((await runCell(table, { rows, columns: ["label"] })).rows).toEqual([["a"], ["b"]]);
  });
  it.each<[Record<string, unknown>, string]>([
    [{ rows: [{ a: 1 }], columns: ["b"] }, 'no field "b"; they have a'],
    [{ rows: [{ a: 1 }, 3] }, "row 2 is 3, where an object such as {name: value} belongs"],
    [{ rows: "text" }, "expected rows"],
    [{ rows: { a: [1], b: [1, 2] } }, "columns must be of one length"],
    [{ rows: [{ a: 1 }], columns: { A: 3 } }, "where the name of a field belongs"],
  ])("refuses in words, case %#", async (options, message) => {
    await expect(runCell(table, options)).rejects.toThrow(message);
  });
  it("an empty list is an empty table", async () => {
    expect(await runCell(table, { rows: [] })).toEqual({ part: "table", columns: [], rows: [] });
  });
});
