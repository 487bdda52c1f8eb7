import { describe, expect, it } from "vitest";
import { chart } from "../../cells/chart.ts";
import { makeSeries } from "../../stdlib/index.ts";
import { runCell } from "./context.ts";
import { draw } from "./parts/draw.ts";

const crossings = makeSeries({ name: "crossings", unit: "vehicles", every: "P1M", start: "2015-01", values: Float64Array.from({ length: 24 }, (_, t) => 100 + t) });
const line = { mark: "line", encoding: { x: { field: "time" }, y: { field: "value" } } };
const many = Array.from({ length: 20_001 }, (_, a) => ({ a }));
const grid = (n: number) => Array.from({ length: n * n }, (_, i) => ({ a: `a${i % n}`, b: `b${Math.floor(i / n)}` }));
const part = async (options: Record<string, unknown>) => {
  const [one] = chart.show(await runCell(chart, options), { name: "c", width: 700 });
  if (one.part !== "chart") throw new Error("no chart");
  return one;
};

describe("chart", () => {
  it("draws a series, its times in UTC, types read from the data", async () => {
    const one = await part({ data: crossings, title: "Crossings", ...line });
    expect(one.spec["encoding"]).toEqual({ x: { field: "time", type: "temporal", scale: { type: "utc" }, title: null }, y: { field: "value", type: "quantitative" } });
    expect(one.data["rows"]["time"][0]).toBe(Date.UTC(2015, 0, 1));
    expect([one.title, one.alt]).toEqual(["Crossings", "Crossings: value by time, from 24 rows."]);
    expect((await draw(one)).warnings).toEqual([]);
  });
  it("draws rows, with ISO 8601 texts as times, and several series", async () => {
    const rows = await part({ data: [{ month: "2019-01", n: 3, kind: "car" }, { month: "2019-02", n: 4, kind: "van" }], mark: "bar", encoding: { x: { field: "month" }, y: { field: "n" }, shape: { field: "kind" } } });
    expect(rows.data["rows"]["month"][1]).toBe(Date.UTC(2019, 1, 1));
    expect((rows.spec["encoding"] as Record<string, { type: string }>)["shape"].type).toBe("nominal");
    const two = await part({ data: { a: crossings, b: crossings }, ...line });
    expect(two.data["rows"]["series"].length).toBe(48);
    expect((await draw(two)).svg).toContain("<path");
  });
  it("takes layers with data of their own, and Vega-Lite's {values: …}", async () => {
    const one = await part({ data: crossings, layer: [line, { data: { values: [{ y: 110 }] }, mark: "rule", encoding: { y: { field: "y" } } }] });
    expect(Object.keys(one.data)).toEqual(["rows", "rows2"]);
    expect((await draw(one)).warnings).toEqual([]);
  });
  it("panels stand in the order of the rows, and layers of one series share its columns", async () => {
    const rows = await part({ data: { trend: crossings, season: crossings }, mark: "line", encoding: { x: { field: "time" }, y: { field: "value" }, row: { field: "series" } } });
    expect(rows.spec).toMatchObject({ width: 500, encoding: { row: { sort: ["trend", "season"] } } });
    expect(rows.height).toBe(325);
    const { svg, warnings } = await draw(rows);
    expect(warnings).toEqual([]);
    expect(svg.indexOf(">trend<")).toBeLessThan(svg.indexOf(">season<"));
    expect(Object.keys((await part({ layer: [{ data: crossings, ...line }, { data: crossings, ...line }] })).data)).toEqual(["rows"]);
  });
  it("draws a long series as a line, where it would not draw as many points", async () => {
    expect((await part({ data: many, mark: "line", encoding: { x: { field: "a" }, y: { field: "a" } } })).data).not.toEqual({});
  });

  it("draws panels, categories and bins as many as a page has room for", async () => {
    expect((await part({ data: grid(10), mark: "point", encoding: { row: { field: "a" }, column: { field: "b" } } })).data).not.toEqual({});
    expect((await part({ data: many.slice(0, 2000), mark: "bar", encoding: { x: { field: "a", type: "ordinal" } } })).data).not.toEqual({});
    expect((await part({ data: crossings, mark: "bar", encoding: { x: { field: "value", bin: { step: 0.5 } }, y: { aggregate: "count" } } })).data).not.toEqual({});
  });

  it("moves a mean along a long series, whatever its window", async () => {
    const running = { window: [{ op: "mean", field: "a", as: "m" }], frame: [-5000, 5000] };
    expect((await part({ data: many.slice(0, 10_000), mark: "line", transform: [running], encoding: { x: { field: "a" }, y: { field: "m", type: "quantitative" } } })).data).not.toEqual({});
  });

  it("takes transforms that are described by data", async () => {
    const one = await part({ data: [{ a: 1 }, { a: 5 }], transform: [{ filter: { field: "a", gt: 2 } }, { aggregate: [{ op: "count", as: "n" }] }], mark: "bar", encoding: { y: { field: "n", type: "quantitative" } } });
    expect((await draw(one)).warnings).toEqual([]);
    const trend = await part({ data: [{ a: 1, b: 2 }, { a: 2, b: 4 }, { a: 3, b: 7 }], transform: [{ regression: "b", on: "a" }], mark: "line", encoding: { x: { field: "a", type: "quantitative" }, y: { field: "b", type: "quantitative" } } });
    expect((await draw(trend)).warnings).toEqual([]);
  });
  it.each<[Record<string, unknown>, string]>([
    [{ data: { url: "elsewhere.csv" }, ...line }, "load the file in a `load` cell"],
    [{ data: crossings, layer: [{ data: { url: "x" }, mark: "line" }] }, "load the file in a `load` cell"],
    [{ data: crossings, ...line, params: [{ name: "p", bind: { input: "range" } }] }, "`params[0].bind` is not taken"],
    [{ data: crossings, mark: { type: "line", strokeWidth: { expr: "1+1" } }, encoding: {} }, "`mark.strokeWidth.expr` is not taken"],
    [{ data: crossings, ...line, width: { signal: "1" } }, "`width.signal` is not taken"],
    [{ data: crossings, ...line, transform: [{ density: "value", steps: 1e9 }] }, "`transform[0].steps` is 1000000000; up to 10000 are drawn"],
    [{ data: crossings, ...line, transform: [{ impute: "value", key: "time", keyvals: { start: 0, stop: 1e9 } }] }, "`transform[0].keyvals` is taken as a list only"],
    [{ data: crossings, mark: "line", encoding: { x: { field: "time", axis: { tickCount: 1e7 } } } }, "`encoding.x.axis.tickCount` is 10000000"],
    [{ data: crossings, mark: "line", encoding: { x: { field: "time", axis: { values: Array.from({ length: 20_000 }, (_, i) => i) } } } }, "`encoding.x.axis.values` has 20000 items"],
    [{ data: many, mark: "point", encoding: { x: { field: "a" } } }, "draws up to 20000 rows, and here are 20001"],
    [{ data: many, layer: [{ mark: "line" }, { mark: { type: "bar" } }], encoding: { x: { field: "a" } } }, "draws up to 20000 rows"],
    [{ data: crossings, ...line, transform: [{ calculate: "datum.value", as: "v" }] }, "`transform[0].calculate` is not taken"],
    [{ data: crossings, ...line, transform: [{ filter: "datum.value > 1" }] }, "is code in a text"],
    [{ data: crossings, ...line, transform: [{ filter: { and: ["datum.value > 1"] } }] }, "is code in a text"],
    [{ data: crossings, ...line, transform: [{ filter: { not: { or: ["datum.value > 1"] } } }] }, "is code in a text"],
    [{ data: crossings, mark: "line", encoding: { y: { field: "value", condition: { test: "true", value: 1 } } } }, "is code in a text"],
    [{ data: crossings, mark: "line", encoding: { x: { field: "time", axis: { labelExpr: "datum.label" } } } }, "`encoding.x.axis.labelExpr` is not taken"],
    [{ data: crossings, mark: "line", encoding: { href: { field: "period" } } }, "`encoding.href` is not taken"],
    [{ data: crossings, mark: { type: "line", href: "elsewhere" }, encoding: {} }, "`mark.href` is not taken"],
    [{ data: crossings, mark: { type: "image", url: "x" }, encoding: {} }, "reads pictures from elsewhere"],
    [{ data: crossings, mark: "image", encoding: {} }, "which is no mark"],
    [{ data: crossings, ...line, usermeta: { embedOptions: {} } }, "`usermeta` is not taken"],
    [{ data: crossings, ...line, params: [{ name: "p", select: { type: "point", on: "click[event.altKey]" } }] }, "may name one event"],
    [{ data: crossings, mark: "lines", encoding: {} }, '"lines", which is no mark'],
    [{ data: crossings, mark: "line", encoding: { x: { field: "date" } } }, 'no field "date"; they have time, period, value, series'],
    [{ data: crossings, mark: "line", encoding: { across: { field: "time" } } }, "`encoding.across` is no channel"],
    [{ data: crossings, marks: "line" }, "no option `marks`"],
    [{ data: crossings }, "needs a `mark`"],
    [{ data: 3, mark: "line" }, "expected rows"],
    [{ mark: "line" }, "`chart` needs `data`"],
    [{ layer: [{ mark: "line" }] }, "`chart` needs `data`"],
    [{ data: crossings, mark: "line", encoding: { y: { field: "value", sort: () => 1 } } }, "is a function"],
    [{ data: many, mark: "line", encoding: { y: { field: "a" }, row: { field: "a", type: "nominal" } } }, "up to 100 panels are drawn, and here are 20001"],
    [{ data: grid(11), mark: "line", encoding: { y: { field: "a" }, row: { field: "a" }, column: { field: "b" } } }, "up to 100 panels are drawn, and here are 121"],
    [{ data: grid(101), facet: { field: "a", type: "nominal" }, spec: { mark: "line", encoding: { y: { field: "b" } } } }, "up to 100 panels"],
    [{ data: crossings, repeat: { row: Array(20).fill("value"), column: Array(20).fill("value") }, spec: { mark: "line" } }, "up to 100 panels are drawn, and here are 400"],
    [{ data: crossings, vconcat: Array.from({ length: 101 }, () => line) }, "up to 100 panels are drawn, and here are 101"],
    [{ data: many, mark: "line", encoding: { x: { field: "a", type: "nominal" }, y: { field: "a" } } }, "up to 2000 categories of x are drawn, and here are 20001"],
    [{ data: crossings, layer: [line, { data: many, mark: "line", encoding: { y: { field: "a", type: "ordinal" } } }] }, "up to 2000 categories of y"],
    [{ data: many, mark: "line", encoding: { x: { field: "a" }, y: { field: "a" }, detail: { field: "a", type: "nominal" } } }, "up to 2000 lines are drawn, and here are 20001"],
    [{ data: grid(50), encoding: { color: { field: "a" }, detail: { field: "b" } }, layer: [{ mark: { type: "trail" }, encoding: { x: { field: "a" } } }] }, "up to 2000 lines are drawn, and here are 2500"],
    [{ data: many.slice(0, 10_000), mark: "line", transform: [{ window: [{ op: "median", field: "a", as: "m" }], frame: [-5000, 5000] }], encoding: { x: { field: "a" }, y: { field: "m", type: "quantitative" } } }, "a window of up to 10000 rows at each of 10000"],
    [{ data: crossings, mark: "bar", encoding: { x: { field: "value", bin: { step: 1e-6 } }, y: { aggregate: "count" } } }, "up to 1000 bins are drawn, and here are 23000000"],
    [{ data: crossings, mark: "bar", transform: [{ bin: { step: 0 }, field: "value", as: "b" }], encoding: { x: { field: "b", type: "quantitative" } } }, "more than can be counted"],
  ])("refuses in words, case %#", async (options, message) => {
    await expect(runCell(chart, options)).rejects.toThrow(message);
  });
});
