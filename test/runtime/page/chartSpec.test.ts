import { describe, expect, it } from "vitest";
import type { ChartPart } from "../../../cells/parts/part.ts";
import { chartStill } from "../../../runtime/page/chartStill.ts";
import { compileChart, shapeOf } from "../../../runtime/page/chartSpec.ts";

const x = { field: "time", type: "temporal" }; const y = { field: "v", type: "quantitative" };
const chart = (spec: Record<string, unknown>, more: Partial<ChartPart> = {}): ChartPart => ({
  part: "chart", title: "t", alt: "a", height: 200, spec, data: { d: { time: Float64Array.of(Date.UTC(2019, 0, 1), Date.UTC(2019, 5, 1)), v: Float64Array.of(1, 2), g: ["p", "q"] } }, ...more });

describe("compileChart", () => {
  it("runs time axes in UTC, whatever the reader's clock", () => {
    const { spec } = compileChart(chart({ mark: "line", encoding: { x, y } }));
    expect(spec.scales?.find(({ name }) => name === "x")?.type).toBe("utc");
  });
  it("takes rows of a named set, also where the specification names none", () => {
    expect([...compileChart(chart({ mark: "line", encoding: { x, y } })).dataNames]).toContain("d");
  });
  it("does not change the description that it is given", () => {
    const part = chart({ mark: { type: "line", style: "model", point: true }, encoding: { x, y } });
    const before = JSON.stringify(part.spec);
    compileChart(part);
    expect(JSON.stringify(part.spec)).toBe(before);
  });
  it("refuses an address and a bound element", () => {
    expect(() => compileChart(chart({ data: { url: "https://example.org/x.csv" }, mark: "line", encoding: { x, y } }))).toThrow(/asks for data at https:\/\/example\.org\/x\.csv/);
    expect(() => compileChart(chart({ params: [{ name: "k", value: 1, bind: { input: "range" } }], mark: "line", encoding: { x, y } }))).toThrow(/slider, choice or switch/);
  });
  it("passes on no notes from which a drawn chart would take options, and no name of a schema", () => {
    const { spec } = compileChart(chart({ mark: "line", encoding: { x, y }, usermeta: { embedOptions: { actions: true, ast: false } } }));
    expect(Object.keys(spec)).toContain("marks");
    expect(Object.keys(spec)).not.toContain("usermeta");
    expect(Object.keys(spec)).not.toContain("$schema");
  });
  it("finds the width of every kind of composition", () => {
    const unit = { mark: "line", encoding: { x, y } };
    expect(compileChart(chart(unit)).fits).toBe(true);
    for (const spec of [{ vconcat: [unit, unit] }, { hconcat: [unit, unit] }, { facet: { row: { field: "g" } }, spec: unit }, { ...unit, encoding: { x, y, column: { field: "g" } } }]) {
      const compiled = compileChart(chart(spec));
      expect(compiled.fits).toBe(false);
      expect(compiled.widthSignals.length, JSON.stringify(Object.keys(spec))).toBeGreaterThan(0);
    }
  });
  it("is the same shape for other data and another for another mark", () => {
    const line = chart({ mark: "line", encoding: { x, y } });
    expect(shapeOf({ ...line, data: { d: { time: [], v: [] } } })).toBe(shapeOf(line));
    expect(shapeOf(chart({ mark: "bar", encoding: { x, y } }))).not.toBe(shapeOf(line));
  });
});

describe("chartStill", () => {
  it("prints SVG in the page's colours, scaled to its box", async () => {
    const svg = await chartStill(chart({ mark: { type: "line", style: "model" }, encoding: { x, y } }), 640);
    expect(svg).toMatch(/^<svg aria-hidden="true" style="width:100%;max-width:640px;height:auto"/);
    expect(svg).toContain('stroke="var(--accent)"');
    expect(svg).not.toContain("NaN");
  });
  it("follows the parameters of the description", async () => {
    const spec = { params: [{ name: "cut", value: 0 }], transform: [{ filter: "datum.v > cut" }], mark: "point", encoding: { x, y } };
    const points = async (cut: number): Promise<number> => /<path d="([^"]*)" fill="var\(--sample\)"/.exec(await chartStill(chart(spec, { params: { cut } }), 400))?.[1].split("M").length as number - 1;
    expect(await points(0)).toBe(2);
    expect(await points(1)).toBe(1);
  });
});
