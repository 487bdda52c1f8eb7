import { readFileSync } from "node:fs";
import { csvParseRows } from "d3-dsv";
import { beforeAll, describe, expect, it } from "vitest";
import type { ChartPart, Column, Part, TablePart } from "../../../cells/parts/part.ts";
import { compute } from "../../../runtime/host/headless.ts";
import { chartCsv, columnsBehind, tableCsv, timeFields } from "../../../runtime/page/chartData.ts";

// Every table and chart of the main example as CSV, read back and held against what is in memory.

let parts: readonly Part[] = [];
beforeAll(async () => {
  const { cells } = await compute({ text: readFileSync("examples/ferry.md", "utf8"), folder: "examples", settings: [], allowCode: false });
  parts = cells.flatMap((cell) => cell.show ?? []);
}, 60_000);

/** Equal to the bit: what is missing is empty, all else is the number itself. */
function same(text: string, value: number | string | boolean | null | undefined, where: string): void {
  if (value === null || value === undefined || (typeof value === "number" && Number.isNaN(value))) expect(text, where).toBe("");
  else if (typeof value === "number") expect(Object.is(Number(text), value), `${where}: ${text} for ${value}`).toBe(true);
  else expect(text, where).toBe(String(value));
}

describe("CSV of the main example", () => {
  it("gives every number of every table back to the bit, under a heading of its own", () => {
    const tables = parts.filter((part): part is TablePart => part.part === "table");
    expect(tables.length).toBeGreaterThan(8);
    for (const table of tables) {
      const [head, ...rows] = csvParseRows(tableCsv(table));
      expect(new Set(head).size, `${table.title}: ${head.join(" | ")}`).toBe(head.length);
      expect(rows).toHaveLength(table.rows.length);
      table.rows.forEach((row, r) => row.forEach((value, c) => same(rows[r][c], value, `${table.title}, row ${r}, ${head[c]}`)));
    }
  });
  it("gives every number behind every chart back to the bit, times as ISO 8601", () => {
    const charts = parts.filter((part): part is ChartPart => part.part === "chart");
    expect(charts.length).toBeGreaterThan(8);
    for (const chart of charts) {
      const sets = Object.entries(columnsBehind(chart)), [head, ...rows] = csvParseRows(chartCsv(chart)), times = timeFields(chart.spec);
      let at = 0;
      for (const [set, columns] of sets) {
        const length = Math.max(0, ...Object.values(columns).map((column) => column.length));
        for (let i = 0; i < length; i++, at++) {
          for (const [name, column] of Object.entries(columns)) {
            same(rows[at][head.indexOf(name)], (column as Exclude<Column, Float64Array>)[i], `${chart.title}, ${set}, ${name}`);
            if (times.has(name) && rows[at][head.indexOf(name)] !== "") expect(rows[at][head.indexOf(name)]).toMatch(/^[+-]?\d{4,6}(-\d\d(-\d\d(T[\d:.]+Z)?)?)?$/);
          }
        }
      }
      expect(rows).toHaveLength(at);
    }
  });
});
