import * as fc from "fast-check";
import { fromMarkdown } from "mdast-util-from-markdown";
import { describe, expect, it } from "vitest";
import { fieldLink } from "../../../runtime/page/fieldLink.ts";
import { fieldText, printNumber, printValue } from "../../../runtime/page/format.ts";

interface Link { readonly type: string; readonly url?: string; readonly children?: readonly { readonly type: string; readonly value?: string }[] }

function read(text: string): Link {
  const [paragraph] = fromMarkdown(text).children as unknown as { children: Link[] }[];
  expect(paragraph.children.length).toBe(1);
  return paragraph.children[0];
}

describe("fieldLink", () => {
  it("is a live number ready for the prose", () => {
    expect(fieldLink("airline.aicc", -483.2012)).toBe("[-483.2](=airline.aicc)");
    expect(fieldLink("ljungBox(airline, 24).p", 0.31274)).toBe("[0.3127](<=ljungBox(airline, 24).p>)");
    expect(fieldLink("best.label", "AR(2)")).toBe("[AR(2)](=best.label)");
    expect(fieldLink("fit.n", 131)).toBe("[131](=fit.n)");
  });

  it("is read back by CommonMark as the same expression and text, whatever they are", () => {
    const marks = fc.constantFrom("a", "b", "(", ")", "<", ">", "[", "]", "\\", "'", '"', " ", ".", ",", "=", "*", "_", "`", "0", "é", "&");
    fc.assert(fc.property(fc.array(marks, { minLength: 1, maxLength: 12 }).map((list) => `x${list.join("")}y`), fc.array(marks, { minLength: 1, maxLength: 8 }).map((list) => `t${list.join("")}u`), (expression, text) => {
      const link = read(fieldLink(expression, text));
      expect(link.type).toBe("link");
      expect(link.url).toBe(`=${expression}`);
      expect((link.children ?? []).map((child) => child.value).join("")).toBe(text);
    }), { seed: 20260101, numRuns: 500 });
  });

  it("prints numbers with four telling digits and no grouping", () => {
    expect([0.000123456, 0.31274, 12.3456, 1234.567, 1e7, -0.5, 3].map(fieldText)).toEqual(["0.0001235", "0.3127", "12.35", "1234.6", "10000000", "-0.5000", "3"]);
  });
});

describe("printNumber", () => {
  it("prints a missing number as a dash and never as NaN", () => {
    expect(printNumber(Number.NaN, ".2f")).toBe("–");
    expect(printValue(null)).toBe("–");
    expect(printNumber(Infinity)).toBe("∞");
  });
  it("follows a pattern, and a sensible form without one", () => {
    expect(printNumber(1234.567, ",.1f")).toBe("1,234.6");
    expect(printNumber(-0.123456789)).toBe("−0.123457");
    expect(printNumber(180)).toBe("180");
    expect(printNumber(123456)).toBe("123,456");
    expect(printNumber(2, "not a pattern")).toBe("2");
  });
});
