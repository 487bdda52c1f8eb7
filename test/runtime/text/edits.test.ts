import { describe, expect, test } from "vitest";
import { acceptNumber, applyEdits, keepSetting, setOption } from "../../../runtime/text/edits.ts";
import type { EditOutcome } from "../../../runtime/text/edits.ts";
import { parse } from "../../../runtime/text/parse.ts";
import { cell, shapes } from "./shapes.ts";

const after = (text: string, outcome: EditOutcome): string => ("refused" in outcome ? `refused: ${outcome.refused}` : applyEdits(text, outcome.edits));
const keep = (text: string, name: string, setting: unknown): string => after(text, keepSetting(parse(text, shapes), shapes, name, setting));

describe("keepSetting", () => {
  test.each<[string, string, unknown, string]>([
    ["rewrites the literal", cell("slider: q", "from: 0", "at: 1 // here", "to: 5"), 3, cell("slider: q", "from: 0", "at: 3 // here", "to: 5")],
    ["rewrites a negative literal", cell("slider: q", "from: -5", "at: -1", "to: 5"), -0.5, cell("slider: q", "from: -5", "at: -0.5", "to: 5")],
    ["adds the line where there is none", cell("slider: q", "from: 0", "to: 5"), 3, cell("slider: q", "from: 0", "to: 5", "at: 3")],
    ["keeps the quotes", cell("choice: q", "among: ['a', 'b']", "at: 'a'"), "b", cell("choice: q", "among: ['a', 'b']", "at: 'b'")],
    ["writes a text", cell("choice: q", "among: ['a', 'b\"']"), 'b"', cell("choice: q", "among: ['a', 'b\"']", 'at: "b\\""')],
    ["writes nothing where nothing moved", cell("slider: q", "from: 0", "at: 3.0", "to: 5"), 3, cell("slider: q", "from: 0", "at: 3.0", "to: 5")],
  ])("%s", (_, text, setting, expected) => { expect(keep(text, "q", setting)).toBe(expected); });

  test("keeps both ends of a window, in one go", () => {
    expect(keep(cell("window: q", "of: x", 'from: "2001"'), "q", { from: "2002-01", to: "2003-12" })).toBe(cell("window: q", "of: x", 'from: "2002-01"', 'to: "2003-12"'));
    expect(keep(cell("window: q", "of: x"), "q", { from: "2002-01", to: "2003-12" })).toBe(cell("window: q", "of: x", 'from: "2002-01"', 'to: "2003-12"'));
  });

  test("keeps the file's line breaks and the fence's indentation", () => {
    expect(keep("```slider: q\r\nfrom: 0\r\nto: 2\r\n```\r\n", "q", 1)).toBe("```slider: q\r\nfrom: 0\r\nto: 2\r\nat: 1\r\n```\r\n");
    expect(keep("  ```slider: q\n  from: 0\n  to: 2\n  ```\n", "q", 1)).toBe("  ```slider: q\n  from: 0\n  to: 2\n  at: 1\n  ```\n");
  });

  test.each<[string, string, unknown, RegExp]>([
    ["an expression", cell("slider: q", "from: 0", "to: 5", "at: 1 + p"), 3, /`at` of `q` is the expression `1 \+ p`/],
    ["what is no control", cell("values: q", "a: 1"), 3, /`q` is not a control/],
    ["what is not there", "words", 3, /no control `q`/],
    ["an open fence", "```slider: q\nfrom: 0\nto: 3\n", 3, /fault that must be mended/],
    ["a value that is no literal", cell("slider: q", "from: 0", "to: 5"), [1], /cannot be written/],
  ])("refuses %s", (_, text, setting, message) => { expect(keep(text, "q", setting)).toMatch(message); });
});

describe("acceptNumber", () => {
  const accept = (text: string, value: number | string): string => after(text, acceptNumber(parse(text, shapes), 0, value));
  test("rewrites the text of the link and nothing else", () => {
    expect(accept("p is [0.31](<=f(a) \\< 2> \"\") here\n", 0.2)).toBe("p is [0.20](<=f(a) \\< 2> \"\") here\n");
    expect(accept("[1,204](=n) \n", 98765.4)).toBe("[98,765](=n) \n");
    expect(accept("[](=n)\n", 5)).toBe("[5](=n)\n");
    expect(accept("| a |\n| - |\n| [1](=n) |\n", 5)).toBe("| a |\n| - |\n| [5](=n) |\n");
  });
  test("writes words so that Markdown reads them back", () => {
    for (const word of ["a*b*", "x_y_z", "[a]", "(2,1,1)(0,1,1)12", "a\\b", "<b>", "AT&T &amp;", "`code`", "$x$", "~~s~~", "a|b", "plain"]) {
      const text = accept("say [old](=n) now\n", word);
      expect(parse(text, shapes).numbers[0]?.saved).toBe(word);
    }
  });
  test("refuses what is missing", () => { expect(accept("[1](=n)\n", NaN)).toMatch(/missing/); });
});

describe("setOption", () => {
  test("replaces an expression or adds a line", () => {
    const text = cell("load: a", 'file: "x" // data');
    const notebook = parse(text, shapes);
    expect(after(text, setOption(notebook, 0, "file", '"y"'))).toBe(cell("load: a", 'file: "y" // data'));
    expect(after(text, setOption(notebook, 0, "time", '"t"'))).toBe(cell("load: a", 'file: "x" // data', 'time: "t"'));
    expect(after("```load: a\nfile:\n```", setOption(parse("```load: a\nfile:\n```", shapes), 0, "file", '"y"'))).toBe('```load: a\nfile: "y"\n```');
  });
});
