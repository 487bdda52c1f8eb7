import { parse, View } from "vega";
import type { Spec } from "vega";
import { parseExpression } from "vega-expression";
import { describe, expect, it } from "vitest";
import { compileChart } from "../../../runtime/page/chartSpec.ts";
import { rowsOf } from "../../../runtime/page/chartData.ts";
import { vegaExpression } from "../../../runtime/page/vegaExpression.ts";
import { fakeNotebook, fakeText } from "./fakeNotebook.ts";

const value = (code: string, signals: Record<string, unknown> = {}, functions: Record<string, unknown> = {}): unknown =>
  vegaExpression.operator({ functions }, { ast: parseExpression(code) as never })(Object.fromEntries(Object.entries(signals).map(([name, v]) => [`$${name}`, v])));

describe("vegaExpression", () => {
  it("computes what the language's operators mean", () => {
    const cases: [string, unknown][] = [
      ["1 + 2 * 3", 7], ["(1 + 2) * 3", 9], ["7 % 4", 3], ["-3 - -1", -2], ["!0", true], ["~5", -6], ["1 < 2 && 2 <= 2", true], ["0 || 'a'", "a"], ["1 == '1'", true], ["1 === '1'", false],
      ["1 != '1'", false], ["1 !== '1'", true], ["5 & 3", 1], ["5 | 3", 7], ["5 ^ 3", 6], ["1 << 3", 8], ["-8 >> 1", -4], ["-8 >>> 28", 15], ["true ? 1 : 2", 1], ["if(0, 1, 2)", 2],
      ["[1, 2][1]", 2], ["{a: {b: 4}}.a.b", 4], ["{a: 4}['a']", 4], ["PI > 3.14", true], ["max(1, 3, 2)", 3], ["clamp(7, 0, 5)", 5], ["upper('ab')", "AB"], ["substring('abcd', 1, 3)", "bc"],
      ["utcyear(utc(2019, 2, 1))", 2019], ["length([1,2,3])", 3], ["test(/b+/, 'abb')", true], ["isNaN(NaN)", true], ["sqrt(x * x)", 3],
    ];
    for (const [code, wanted] of cases) expect(value(code, { x: 3 }), code).toEqual(wanted);
  });

  it("calls no function outside the library's table", () => {
    for (const code of ["constructor(1)", "eval('1')", "Function('1')", "toString()", "hasOwnProperty('a')", "fetch('x')"]) expect(() => value(code), code).toThrow(/not a function of the chart library/);
    expect(value("twice(4)", {}, { twice: (x: number) => 2 * x })).toBe(8);
  });

  it("reads no way out of an object", () => {
    for (const code of ["x.constructor", "x['const' + 'ructor']", "x.__proto__", "''.length.constructor", "{__proto__: 1}"]) expect(() => value(code, { x: {} }), code).toThrow(/may not/);
    // The library's parser takes the quoted word for a signal's name: there is none.
    expect(value("x['constructor']", { x: {} })).toBeUndefined();
  });

  it("draws every chart of the notebook exactly as generated code would", async () => {
    for (const message of fakeNotebook().answer({ to: "text", version: 1, text: fakeText })) {
      if (message.from !== "cell") continue;
      for (const part of message.cell.show ?? []) {
        if (part.part !== "chart") continue;
        const { spec, dataNames } = compileChart(part);
        const drawn = async (closures: boolean): Promise<string> => {
          const view = new View(closures ? parse(spec as Spec, undefined, { ast: true }) : parse(spec as Spec), { renderer: "none", ...(closures ? { expr: vegaExpression as never } : {}) });
          for (const [name, columns] of Object.entries(part.data)) if (dataNames.has(name)) view.data(name, rowsOf(columns));
          return (await view.toSVG()).replace(/clip\d+/g, "clip");
        };
        const ours = await drawn(true);
        expect(ours).toBe(await drawn(false));
        expect(ours).toContain("<path");
      }
    }
  });
});
