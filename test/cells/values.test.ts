import { describe, expect, it } from "vitest";
import { claims } from "../../cells/claims.ts";
import { script } from "../../cells/script.ts";
import { values } from "../../cells/values.ts";
import { makeSeries } from "../../stdlib/index.ts";
import { contextOf, runCell } from "./context.ts";

const seen = { name: null, width: 700 };

describe("values", () => {
  it("keeps what the expressions give, and shows each in a few words", async () => {
    const s = makeSeries({ name: "ratio", every: "P1M", start: "2019-01", values: [1, 2] });
    const result = await runCell(values, { share: 0.25, ratio: s, list: [1, 2], word: "yes" });
    expect(result["share"]).toBe(0.25);
    const [table, chart] = values.show(result, seen);
    expect(table).toMatchObject({ rows: [["share", 0.25], ["ratio", "a series, every month from 2019-01 to 2019-02, 2 periods"], ["list", "1, 2"], ["word", "yes"]] });
    expect(chart.part).toBe("chart");
  });
  it("says how to begin when it is empty", () => {
    expect(values.show({}, seen)[0]).toMatchObject({ part: "text", tone: "note" });
  });
});

describe("claims", () => {
  it("shows each with its outcome, undecided ones with the reason", async () => {
    const outcomes = { "it grows": { holds: true }, "it passes": { holds: false }, "it is known": { holds: null, message: "a value compared here is missing (NaN)" } };
    const result = await claims.run(outcomes, contextOf());
    expect(claims.show(result, seen)).toEqual([{ part: "claims", claims: [{ claim: "it grows", holds: true }, { claim: "it passes", holds: false }, { claim: "it is known", holds: null, message: "a value compared here is missing (NaN)" }] }]);
    expect(claims.value?.(result)).toEqual({ "it grows": true, "it passes": false, "it is known": null });
  });
});

describe("script", () => {
  it("hands its source and copies of what it reads to the isolated run, and shows its exports", async () => {
    const context = contextOf({ importCode: async (source, inputs) => ({ source, twice: 2 * (inputs["x"] as number) }) });
    const result = await script.run({ source: "export const twice = 2 * x", inputs: { x: 4 } }, context);
    expect(result).toEqual({ source: "export const twice = 2 * x", twice: 8 });
    expect(script.show(result, seen)[0]).toMatchObject({ rows: [["source", "export const twice = 2 * x"], ["twice", 8]] });
  });
  it("refuses a default export, and passes on why code may not run", async () => {
    await expect(script.run({ source: "", inputs: {} }, contextOf({ importCode: async () => ({ default: 1 }) }))).rejects.toThrow("a script exports names");
    await expect(script.run({ source: "", inputs: {} }, contextOf({ importCode: async () => { throw new Error("not allowed here"); } }))).rejects.toThrow("not allowed here");
  });
});
