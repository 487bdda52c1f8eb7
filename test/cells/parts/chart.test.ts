import { describe, expect, it } from "vitest";
import { timePlot } from "../../../cells/parts/chart.ts";
import { thin } from "../../../cells/parts/thin.ts";
import { makeSeries } from "../../../stdlib/index.ts";
import { draw } from "./draw.ts";

describe("timePlot", () => {
  it("compiles and draws lines, a window, limits and a single observation between gaps", async () => {
    const series = makeSeries({ name: "crossings", unit: "vehicles", every: "P1M", start: "2019-01", values: [1, 2, NaN, 4, NaN, 6, 7] });
    const part = timePlot({ title: "Crossings", alt: "a", axis: "vehicles", width: 700, limits: [3], stretch: { from: Date.UTC(2019, 1), to: Date.UTC(2019, 4) }, lines: [{ label: "observed", series, style: "sample" }, { label: "fitted", series, style: "model" }] });
    const { svg, warnings } = await draw(part);
    expect(warnings).toEqual([]);
    expect(svg).toContain("fitted");
    expect([...part.data["line1Single"]["value"]]).toEqual([4, 7]);
    expect(part.full?.["observed"]["time"][3]).toBe("2019-04");
  });
  it("has the same spec for other data, so that one view serves all settings", () => {
    const plot = (n: number) => timePlot({ title: "x", alt: "", axis: "x", width: 700, lines: [{ label: "", series: makeSeries({ name: "x", values: Array.from({ length: n }, (_, i) => i) }), style: "sample" }] });
    expect(plot(10_000).spec).toEqual(plot(3).spec);
    expect(plot(10_000).data["line1"]["value"].length).toBeLessThan(1500);
    expect(plot(0).data["line1"]["value"].length).toBe(0);
  });
});

describe("thin", () => {
  it("keeps every extreme, both ends and the gaps of a long line", () => {
    const values = Float64Array.from({ length: 50_000 }, (_, i) => Math.sin(i / 50));
    values[12_345] = 99; values[40_001] = -99; values[30_000] = NaN;
    const kept = [...thin(values, 600)];
    for (const i of [0, 12_345, 30_000, 40_001, 49_999]) expect(kept).toContain(i);
    expect(kept.length).toBeLessThan(1500);
    expect(kept.every((v, i) => i === 0 || v > kept[i - 1])).toBe(true);
  });
  it("keeps a short line whole", () => {
    expect([...thin([3, 1, 2], 600)]).toEqual([0, 1, 2]);
  });
});
