import { describe, expect, it } from "vitest";
import type { Catalogue } from "../../../runtime/desk/catalogue.ts";
import { contextAt } from "../../../runtime/desk/context.ts";
import { helpAt } from "../../../runtime/desk/help.ts";
import { suggest } from "../../../runtime/desk/suggest.ts";

const catalogue: Catalogue = {
  version: "1",
  kinds: [
    { name: "fit", sentence: "Estimates a model.", body: "options", example: "series: y\n", callable: true, options: {
      series: { type: "series", sentence: "The series.", required: true }, ma: { type: "lags", sentence: "Moving-average lags.", default: 0, min: 0 },
      method: { type: { oneOf: ["exact", "conditional"] }, sentence: "How it is estimated." } } },
    { name: "claims", sentence: "Conclusions.", body: "claims", example: "\"x\": true\n", options: {} },
    { name: "script", sentence: "Code.", body: "code", example: "export const a = 1;\n", options: {} },
  ],
  functions: [{ name: "acf", signature: "acf(series, lags)", sentence: "Autocorrelations.", topic: "correlogram" }, { name: "rule.naive", signature: "rule.naive(series)", sentence: "Last value.", topic: "rules" }],
};
const cells = [{ name: "steady", kind: "transform", state: "current" }];

/** The text without its `|`, and where that was. */
const marked = (text: string): [string, number] => [text.replace("|", ""), text.indexOf("|")];
const labels = (text: string, asked = false): readonly string[] => suggest(...marked(text), catalogue, cells, asked)?.list.map(({ label }) => label) ?? [];
const inCell = (...lines: readonly string[]): string => ["# T", "", "```fit: model", ...lines, "```", "", "After"].join("\n");

describe("where a place is", () => {
  it("tells prose, fence, option, expression and live number apart", () => {
    expect(contextAt(...marked(inCell("se|")))).toMatchObject({ in: "option", kind: "fit" });
    expect(contextAt(...marked(inCell("series: st|")))).toMatchObject({ in: "expression", kind: "fit", option: "series" });
    expect(contextAt(...marked(inCell("season: {", "length: 1|", "}")))).toMatchObject({ in: "expression", option: "season" });
    expect(contextAt(...marked("# T\n\n```fi|"))).toMatchObject({ in: "fence", typed: "fi" });
    expect(contextAt(...marked("the [0.3](=acf(|"))).toMatchObject({ in: "number" });
    expect(contextAt(...marked("the [0.3](<=a + |"))).toMatchObject({ in: "number" });
    expect(contextAt(...marked("the [0.3](<=a>) is |"))).toEqual({ in: "prose" });
    expect(contextAt(...marked("the [0.3](=acf(y)[1]) and |"))).toEqual({ in: "prose" });
    expect(contextAt(...marked(`${inCell("series: y")}|`))).toEqual({ in: "prose" });
    expect(contextAt(...marked("```js\nx|\n```"))).toEqual({ in: "prose" });
    expect(contextAt(...marked("````fit: a\n```\nse|"))).toMatchObject({ in: "option", kind: "fit" });
  });
});

describe("suggestions", () => {
  it("offer kinds after a fence's marks, with a name and a first body", () => {
    const [text, at] = marked("```f|");
    expect(suggest(text, at, catalogue, cells, false)?.list[0]).toMatchObject({ label: "fit", help: "Estimates a model.", insert: expect.stringContaining("fit: ${fit1}\nseries: y") });
  });
  it("offer a kind's options that are not given yet, required ones named as such", () => {
    expect(labels(inCell("series: steady", "m|"))).toEqual(["ma", "method"]);
    expect(labels(inCell("|"), true)).toEqual(["series", "ma", "method"]);
    expect(labels(inCell("|"))).toEqual([]);
  });
  it("offer an option's own values, cells and library in an expression", () => {
    expect(labels(inCell("method: e|"))).toEqual(["\"exact\"", "\"conditional\"", "steady", "acf", "rule.naive", "fit"]);
    expect(labels("the [0.3](=st|")).toContain("steady");
  });
  it("say nothing in prose, in a text, in a comment, after a dot, in claims' words", () => {
    for (const text of ["some a|", inCell("series: \"st|"), inCell("series: y // st|"), inCell("series: steady.n|"), "```claims:\n\"a|"]) expect(labels(text), text).toEqual([]);
  });
});

describe("help", () => {
  const help = (text: string): string | undefined => helpAt(...marked(text), catalogue, cells)?.text;
  it("explains kind, option, cell and function where they stand", () => {
    expect(help("```fi|t: model\nma: 1\n```")).toBe("Estimates a model.");
    expect(help(inCell("m|a: 1"))).toBe("Moving-average lags. Takes a number of lags, or a list of lags, 0 or more. Left out: 0.");
    expect(help(inCell("method: 1", "series: ste|ady"))).toMatch(/transform cell “steady”: current/);
    expect(help("the [1](=rule.na|ive(y))")).toBe("Last value.");
    expect(help("plain ac|f here")).toBeUndefined();
  });
});
