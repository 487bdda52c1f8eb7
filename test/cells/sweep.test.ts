import { describe, expect, test } from "vitest";
import { sweep } from "../../cells/sweep.ts";
import type { TextPart } from "../../cells/parts/part.ts";
import { madeContext } from "./madeContext.ts";
import { drawnCharts } from "./drawn.ts";

const show = { name: "hinge", width: 640 };
const control = (values: readonly unknown[], at: unknown) => () => ({ kind: "slider", values, at });
const texts = (parts: readonly { readonly part: string }[]): string => parts.filter((p): p is TextPart => p.part === "text").map(p => p.text).join(" ");

describe("sweep", () => {
  test("recomputes a measure for each value of the control and marks the present one", async () => {
    const asked: unknown[][] = [];
    const context = madeContext({
      source: { measure: "airline.aicc" }, control: control([0, 1, 2], 1),
      recompute: async (...given) => { asked.push(given); return 10 - (given[1] as number); },
    });
    const result = await sweep.run({ over: "order" } as never, context);
    expect(asked).toEqual([["order", 0, "airline.aicc"], ["order", 1, "airline.aicc"], ["order", 2, "airline.aicc"]]);
    expect(result).toMatchObject({ over: "order", at: 1, measures: ["measure"], rows: [{ value: 0, measure: 10, present: false }, { value: 1, measure: 9, present: true }, { value: 2, measure: 8, present: false }] });
    expect(context.steps.at(-1)).toEqual([3, 3]);
  });
  test("takes several measures from an object, and says when one does not hang on the choice", async () => {
    const context = madeContext({
      source: { measure: "{a: x, beats: y}" }, control: control(["2019-01", "2020-01"], "2020-01"),
      recompute: async () => ({ a: 3, beats: true }),
    });
    const parts = sweep.show(await sweep.run({ over: "start" } as never, context) as never, show);
    expect(texts(parts)).toContain("a stays at 3");
    expect(texts(parts)).toContain("does not hang on this choice");
    await expect(drawnCharts(parts)).resolves.toHaveLength(2);
  });
  test("names the values at which a truth turns", async () => {
    const context = madeContext({ source: { measure: "{holds: p > 0.05}" }, control: control([1, 2, 3], 2), recompute: async (_, value) => ({ holds: (value as number) < 3 }) });
    const parts = sweep.show(await sweep.run({ over: "order" } as never, context) as never, show);
    expect(texts(parts)).toContain("holds hangs on order: true at 1 and 2 and false at 3. At the present order, 2, it is true.");
    await expect(drawnCharts(parts)).resolves.toHaveLength(1);
  });
  test("keeps the order of words on the axis, wherever the present one stands", async () => {
    const context = madeContext({ source: { measure: "m" }, control: control(["none", "short", "long"], "long"), recompute: async (_, value) => String(value).length });
    const [svg] = await drawnCharts(sweep.show(await sweep.run({ over: "choice" } as never, context) as never, show));
    const at = ["none", "short", "long"].map(word => svg.indexOf(`>${word}</text>`));
    expect(at.every(place => place > 0)).toBe(true);
    expect(at).toEqual([...at].sort((a, b) => a - b));
  });
  test("keeps the values that worked when one fails, with the reason", async () => {
    const context = madeContext({ source: { measure: "m" }, control: control([1, 2, 3], 2), recompute: async (_, value) => { if (value === 3) throw new Error("too few observations"); return value; } });
    const result = await sweep.run({ over: "order" } as never, context) as { rows: readonly Record<string, unknown>[] };
    expect(result.rows[2]).toMatchObject({ failed: "too few observations", measure: NaN });
    expect(texts(sweep.show(result as never, show))).toContain("1 value of order gave no result (3); the first said: too few observations");
  });
  test("ended early, it shows the values that were tried, and says so first", async () => {
    let asked = 0;
    const context = madeContext({ source: { measure: "m" }, control: control([1, 2, 3, 4], 3), recompute: async (_, value) => value, stopped: () => ++asked > 1 });
    const result = await sweep.run({ over: "order" } as never, context) as { rows: readonly unknown[]; asked: number };
    expect([result.rows.length, result.asked]).toEqual([2, 4]);
    expect(texts(sweep.show(result as never, show))).toContain("Stopped early: 2 of 4 values of order were tried.");
    await expect(drawnCharts(sweep.show(result as never, show))).resolves.toHaveLength(1);
  });
  test("stops when it is overtaken", async () => {
    const context = madeContext({ source: { measure: "m" }, control: control([1, 2, 3], 2), recompute: async () => 1, breathe: async () => { throw new Error("overtaken"); } });
    await expect(sweep.run({ over: "order" } as never, context)).rejects.toThrow("overtaken");
  });
  test("refuses a measure that is no number, word or truth", async () => {
    const context = madeContext({ source: { measure: "airline" }, control: control([1], 1), recompute: async () => ({ phi: [1, 2] }) });
    await expect(sweep.run({ over: "order" } as never, context)).rejects.toThrow('the measure "phi" gives a list; choose one number, word or truth in it');
  });
  test("refuses to run over nothing", async () => {
    const context = madeContext({ source: { measure: "m" }, control: control([], 1) });
    await expect(sweep.run({ over: "order" } as never, context)).rejects.toThrow("there are no values to try for order");
  });
});
