import { describe, expect, test } from "vitest";
import type { Notebook } from "../../../runtime/text/notebook.ts";
import { parse } from "../../../runtime/text/parse.ts";
import { cell, fence, names, shapes } from "./shapes.ts";

const read = (text: string): Notebook => parse(text, shapes, { names });
const told = (text: string): string[] => read(text).problems.map((each) => `${each.line}:${each.column} ${each.message}`);

describe("cells and options", () => {
  const text = `# Title *here*\n\nWords.\n\n${cell("transform: steady", "series: crossings", "// a remark", "window: sample /* the sample */", "steps: [log,", "difference(1),", "  difference(12)]   // three", "")}${cell("load: crossings", 'file: "a.csv"')}${cell("window: sample", "of: crossings")}`;

  test("are found with their places", () => {
    const notebook = read(text);
    expect(notebook.problems).toEqual([]);
    expect(notebook.title).toBe("Title here");
    const [steady] = notebook.cells;
    expect([steady.kind, steady.name, steady.line]).toEqual(["transform", "steady", 5]);
    expect(text.slice(steady.from, steady.to)).toMatch(/^```transform: steady\n[\s\S]*\n```$/);
    expect(steady.options.map((each) => [each.name, each.source, each.reads, each.line])).toEqual([
      ["series", "crossings", ["crossings"], 6], ["window", "sample", ["sample"], 8], ["steps", "[log,\ndifference(1),\n  difference(12)]", ["log", "difference"], 9],
    ]);
    for (const each of steady.options) {
      expect(text.slice(each.expression.from, each.expression.to)).toBe(each.source);
      expect(text.slice(each.namePlace.from, each.namePlace.to)).toBe(each.name);
    }
    expect(steady.reads).toEqual(["crossings", "sample", "log", "difference"]);
    expect(text.slice(steady.body.to, steady.body.to + 3)).toBe(fence);
  });

  test("a line that starts with white space goes on with the option above; texts may hold what looks like an option", () => {
    const [values] = read(cell("values: v", "a: 1 +", "  2", "b: `x", "c: ${1 + 1}", "`", 'd: "e: 5"', "", "f: {", "g: 1,", "}")).cells;
    expect(values.options.map((each) => [each.name, each.source])).toEqual([["a", "1 +\n  2"], ["b", "`x\nc: ${1 + 1}\n`"], ["d", '"e: 5"'], ["f", "{\ng: 1,\n}"]]);
  });

  test("an indented fence takes its indentation off every line; tildes, CRLF and an empty body work", () => {
    expect(read("  ```values: v\n  a: 1\n  b: 2\n  ```\n").cells[0].options.map((each) => each.name)).toEqual(["a", "b"]);
    expect(read("~~~values: v\r\na: 1\r\nb: 2\r\n~~~\r\n").cells[0].options.map((each) => each.source)).toEqual(["1", "2"]);
    expect(read("\uFEFF```values: v\na: 1\n```").cells[0].options).toHaveLength(1);
    expect(read(cell("values: v")).cells[0].options).toEqual([]);
  });

  test("claims have quoted names; scripts have exports and reads", () => {
    const notebook = read(cell("claims:", '"p is large, by far": mean(x) > 0.05', "'another \\'one\\'': true") + cell("script: s", "const k = x.values;", "export const total = k.reduce((a, b) => a + b, 0), { half, ...rest } = g();", "export function f(u) { var w = u; return w + Math.PI; }", "function g() { return { half: 1 }; }", "export { k as values };") + cell("values: y", "t: total + half + s.values") + cell("values: x", "values: [1]", "t: 2"));
    expect(notebook.problems).toEqual([]);
    expect(notebook.cells[0].options.map((each) => each.name)).toEqual(["p is large, by far", "another 'one'"]);
    expect(notebook.cells[1].exports).toEqual(["total", "half", "rest", "f", "values"]);
    expect(notebook.cells[1].reads).toEqual(["x", "Math"]);
  });

  test("other fenced blocks are prose", () => {
    const notebook = read(`${fence}js\nlet a: 1\n${fence}\n\n    values: indented\n`);
    expect(notebook.cells).toEqual([]);
    expect(notebook.blocks.map((each) => each.block)).toEqual(["prose", "prose"]);
  });
});

describe("problems say what was found, where, and what to try", () => {
  test.each<[string, string, RegExp]>([
    ["an unknown kind", cell("transfrom: x", "a: 1"), /^1:4 There is no kind of cell `transfrom`: did you mean `transform`\?$/],
    ["a kind that is like no other", cell("zzz: x"), /there are load, slider/],
    ["no kind", cell(":"), /^1:4 A kind of cell stands before the colon/],
    ["a colon without a space", cell("values:v", "a: 1"), /^1:4 .*put a space after the colon, `values: v`/],
    ["an unknown option", cell("load: x", 'fil: "a"', 'file: "a"'), /^2:1 `load` has no option `fil`: did you mean `file`\?/],
    ["an option given twice", cell("load: x", 'file: "a"', 'file: "b"'), /^3:1 `file` is given twice/],
    ["a required option left out", cell("load: x"), /^1:4 `load` needs the option `file`: add a line `file: …`/],
    ["an option without a value", cell("load: x", "file:"), /^2:1 `file` has no value/],
    ["a line that is no option", cell("load: x", 'file = "a"', 'file: "a"'), /^2:1 `file = "a"` is not of the form `option: expression`: write `:` for `=`/],
    ["an indented first option", cell("load: x", '  file: "a"'), /an option starts at the beginning of its line/],
    ["an open bracket", cell("transform: x", "series: mean", "steps: [log, (1", "window: null"), /^3:8 `\[` is opened here and not closed/],
    ["an open text", cell("load: x", 'file: "a', "time: null"), /^2:7 A text that opens here is not closed/],
    ["a syntax fault", cell("values: x", "a: 1 +* 2"), /^2:7 `\*` is not expected here/],
    ["a date without quotes", cell("window: w", "of: mean", "from: 2019-03"), /^3:7 Quote the date: write "2019-03"/],
    ["a quarter without quotes", cell("window: w", "of: mean", "to: 2019-Q1"), /^3:5 Quote the date: write "2019-Q1"/],
    ["an unclosed fence", `words\n\n${fence}values: v\na: 1\n`, /^3:1 The fence opened in line 3 is never closed/],
    ["an unclosed fence of prose", `${fence}\nwords`, /^1:1 The fence opened in line 1 is never closed/],
    ["a name defined twice", cell("values: v", "a: 1") + cell("values: v", "a: 2"), /^1:12 `v` is defined twice, here and in line 5/],
    ["a script that exports a name defined elsewhere", cell("values: v", "a: 1") + cell("script: s", "export const v = 1;"), /`v` is defined twice/],
    ["a circle", cell("values: a", "x: b.x") + cell("values: b", "x: c.x") + cell("values: c", "x: a.x"), /^2:4 A circle: `a` reads `b` reads `c` reads `a`\. Break it/],
    ["a cell that reads itself", cell("values: a", "x: 1 + a.x"), /^2:8 A circle: `a` reads itself/],
    ["an unknown name", cell("values: a", "x: 1 + maen(b)", "b: 1"), /^2:8 There is no `maen`: did you mean `mean`\?/],
    ["an unknown name that is like no other", cell("values: a", "x: quux"), /^2:4 There is no `quux`: no cell and no library function has this name/],
    ["the beginning of a name", cell("transform: x", "series: mean", "steps: [diff(1)]"), /^3:9 There is no `diff`: did you mean `difference`\?$/],
    ["another word for a name", cell("transform: x", "series: mean", "steps: [ln]"), /^3:9 There is no `ln`: did you mean `log`\?$/],
    ["a namespace of ECMAScript", cell("values: x", "a: Math.sqrt(2)"), /^2:4 There is no `Math`: its functions stand alone here, as in `sqrt\(2\)`$/],
    ["a statement", cell("values: x", "a: if (true) 1"), /^2:4 `if` is not expected here$/],
    ["an unknown cell where a name is taken, with no word of quotes", cell("sweep: s", "over: nowhere", "measure: mean"), /^2:7 There is no `nowhere`: no cell and no library function has this name$/],
    ["a path without quotes", cell("load: x", "file: data/sales.csv"), /^2:7 `file` takes a text: put it in quotes, "data\/sales\.csv"$/],
    ["a path without quotes that is no expression", cell("load: x", "file: data/2019 sales.csv"), /^2:7 `file` takes a text: put it in quotes, "data\/2019 sales\.csv"$/],
    ["a path without quotes in a cell of its folder's name", cell("load: data", "file: data/sales.csv"), /^2:7 `file` takes a text/],
    ["a file's name without quotes", cell("load: x", "file: sales.csv"), /^2:7 There is no `sales`: .* If a text is meant, put it in quotes: "sales\.csv"$/],
    ["a word without quotes", cell("load: x", 'file: "a"', "order: day-month"), /^3:8 `order` takes a text: put it in quotes, "day-month"$/],
    ["a choice without quotes", cell("choice: c", 'among: ["aicc", "bic"]', "at: bic"), /^3:5 There is no `bic`: .* If a text is meant, put it in quotes: "bic"$/],
    ["a comma at the end of an option", cell("slider: x", "from: 1,", "to: 2"), /^2:8 A comma is left over after the value: take it away/],
    ["a reserved word as a name", cell("values: class", "a: 1"), /^1:12 `class` is a reserved word/],
    ["a kind as a name", cell("values: slider", "a: 1"), /^1:12 `slider` is a kind of cell/],
    ["a fixed value as a name", cell("values: NaN", "a: 1"), /`NaN` has a fixed meaning/],
    ["two words as a name", cell("values: my cell", "a: 1"), /`my cell` is not a name: .*such as `myCell`/],
    ["a control without a name", cell("slider:", "from: 0", "to: 1"), /A `slider` needs a name/],
    ["a claim without quotes", cell("claims:", "holds: true"), /^2:1 `holds: true` is not of the form|^2:1 A claim stands in quotes/],
    ["a script that imports", cell("script: s", "import x from 'y';"), /^2:1 A script cannot import/],
    ["a script that imports late", cell("script: s", "export const a = await import('y');"), /^2:24 A script cannot import/],
    ["a script with a syntax fault", cell("script: s", "export const = 1;"), /The script cannot be read/],
    ["a cell in a list", `- item\n\n  ${fence}values: v\n  a: 1\n  ${fence}\n`, /A cell stands at the top level/],
    ["a live number that is no link", "Is [0.31](=ljungBox(x, 24).p)\n", /^1:9 This is not read as a link: wrap the expression in `<…>`/],
    ["a sign that ends a live number early", "Is [yes](<=mean > 2>)\n", /^1:8 This is not read as a link: inside `<…>`, write `\\<` and `\\>` for the signs, as in `\[yes\]\(<=checks\.p \\> 0\.05>\)`$/],
    ["a live number between two signs of a currency", "From $5 over [7](=mean) to $9.\n", /^1:6 A live number stands between two `\$`, which make mathematics of it: write `\\\$`/],
    ["a live number with emphasis inside", "Is [*0.31*](=mean)\n", /the text of a live number is plain/i],
    ["a live number with a fault", "Is [0.31](<=1 +>)\n", /^1:4 In the live number `1 \+`: The expression stops too early/],
    ["a live number with an unknown name", "Is [0.31](=maen)\n", /^1:4 There is no `maen`: did you mean `mean`\?/],
    ["a live number by reference", "Is [0.31][a]\n\n[a]: <=mean>\n", /A live number is an inline link/],
    ["`sweep` over something that is no name", cell("sweep: s", "over: 1 + 2", "measure: mean"), /`over` takes the name of a cell/],
  ])("%s", (_, text, message) => { expect(told(text).find((each) => message.test(each)) ?? told(text)).toMatch(message); });

  test("a library name taken by a cell is a note, and the cell wins", () => {
    const notebook = read(cell("values: mean", "a: 1") + cell("values: v", "b: mean.a"));
    expect(notebook.problems).toMatchObject([{ severity: "note", code: "library-name", cell: 0 }]);
    expect(notebook.cells[0].broken).toBe(false);
  });

  test("a text that is computed needs no quotes", () => {
    expect(told(cell("choice: which", 'among: ["a.csv", "b.csv"]') + cell("values: v", 'folder: "data/"') + cell("load: x", "file: which") + cell("load: y", "file: v.folder + which") + cell("load: z", "file: `${v.folder}${which}`"))).toEqual([]);
  });

  test("one slip costs one option: those after it are still read", () => {
    const [x] = read(cell("values: x", "a: [1, 2", "b: 'open", "c: 3", "d: )", "e: 5")).cells;
    expect(x.options.map((each) => each.name)).toEqual(["a", "b", "c", "d", "e"]);
    expect(x.broken).toBe(true);
  });

  test("brackets and texts in live numbers may be as CommonMark wants them", () => {
    const notebook = read("a [1](=mean) b [2](<=mean(a < b)\n");
    expect(notebook.numbers).toHaveLength(1);
    expect(read("[1](<=f(1) \\< 2>)\n").numbers[0].expression).toBe("f(1) < 2");
    expect(read("`[1](=a b)` and \\[1\\](=a b) and $](=x y)$ \n\n<!-- [1](=a b) -->\n").problems.filter((each) => each.code === "live-number-not-link")).toEqual([]);
  });
});

describe("live numbers", () => {
  test("may be sums of money, which are no mathematics", () => {
    const text = 'It costs [$1,204](=mean "$,.0f"), [-$3](<=mean("$")>), [\\$7](=mean) and [2](=mean "$.2f"), where $x$ is $1. `[$1](=mean)`\n';
    const notebook = read(text);
    expect(notebook.problems).toEqual([]);
    expect(notebook.numbers.map((each) => [each.saved, each.expression, each.pattern])).toEqual([["$1,204", "mean", "$,.0f"], ["-$3", 'mean("$")', null], ["$7", "mean", null], ["2", "mean", "$.2f"]]);
    for (const each of notebook.numbers) expect(text.slice(each.savedPlace.from, each.savedPlace.to).replace("\\", "")).toBe(each.saved);
    const [paragraph] = notebook.tree.children;
    expect("children" in paragraph ? paragraph.children.flatMap((each) => ("value" in each ? [[each.type, each.value]] : [])) : []).toEqual([["text", "It costs "], ["text", ", "], ["text", ", "], ["text", " and "], ["text", ", where "], ["inlineMath", "x"], ["text", " is $1. "], ["inlineCode", "[$1](=mean)"]]);
  });

  test("are found in paragraphs, headings, lists, tables, quotations and footnotes, with places and patterns", () => {
    const text = '# Head [1](=mean)\n\nText [2.50](=mean ".2f") and *so [3](=mean)*.\n\n- item [4](=mean)\n\n> quote [5](=mean)\n\n| a | b |\n| - | - |\n| [6](=mean) | x |\n\nNote[^1].\n\n[^1]: foot [−7](<=-mean>)\n';
    const notebook = read(text);
    expect(notebook.problems).toEqual([]);
    expect(notebook.numbers.map((each) => each.saved)).toEqual(["1", "2.50", "3", "4", "5", "6", "−7"]);
    expect(notebook.numbers.map((each) => each.line)).toEqual([1, 3, 3, 5, 7, 11, 15]);
    expect(notebook.numbers[1].pattern).toBe(".2f");
    for (const each of notebook.numbers) {
      expect(text.slice(each.savedPlace.from, each.savedPlace.to)).toBe(each.saved);
      expect(text.slice(each.from, each.to)).toMatch(/^\[.*\)$/);
    }
    const listed = notebook.blocks.flatMap((each) => (each.block === "prose" ? each.numbers : []));
    expect(listed).toEqual([0, 1, 2, 3, 4, 5, 6]);
  });
});
