import * as fc from "fast-check";
import { describe, expect, test, vi } from "vitest";
import { applyEdits, acceptNumber, keepSetting } from "../../../runtime/text/edits.ts";
import { fenceOf } from "../../../runtime/text/fences.ts";
import { markdownTree } from "../../../runtime/text/markdown.ts";
import { parse } from "../../../runtime/text/parse.ts";
import { cell, fence, names, shapes } from "./shapes.ts";

// Thousands of texts: on a busy machine they take a while.
vi.setConfig({ testTimeout: 180_000 });

const seeded = { seed: 20240611, numRuns: 300 };

/** Lines that make and break every kind of block. */
const line = fc.constantFrom(
  "", "", "", "words and *more* words", "two [0.31](=mean) numbers [7](<=mean(a) > 2>)", "# Head", "Under", "===", "---", "- item", "  goes on", "1. one", "   two", "> quote", ">", "    indented", "\tTab", `${fence}`, `${fence}js`, `${fence}values: v`, "a: 1", "b: [1,", "c: 'x", "  2]", "~~~", "~~~values: w", "````", "$$", "$$ x $$", "x^2", "<div>", "</div>", "<!-- remark", "-->", "<pre>", "</pre>", "<?php", "?>", "<![CDATA[", "]]>", "<!A", "| a | b |", "| - | - |", "| 1 | [2](=mean) |", "[a]: http://x", "[a] and [b][a]", "[^1]", "[^1]: note", "[^1]: ```", "- ```", "> ```", "  ```", "***", "+", "[c]:", "/url", "'title'", "\u00a0", "\uFEFF", "x\u2028y", "&amp; \\* www.a.com a@b.co",
);
const breaks = fc.constantFrom("\n", "\n", "\n", "\r\n", "\r");
const notebook = fc.array(fc.tuple(line, breaks), { maxLength: 30 }).map((lines) => lines.map(([text, end]) => text + end).join(""));
const strip = (text: string): unknown => JSON.parse(JSON.stringify(markdownTree(text)));

describe("what nests without end", () => {
  const much = 50_000;
  test.each([
    ["members", `x${".a".repeat(much)}`], ["sums", `x${" + 1".repeat(much)}`], ["calls", `x${"()".repeat(much)}`], ["brackets", `${"(".repeat(much)}x${")".repeat(much)}`], ["lists", `${"[".repeat(much)}${"]".repeat(much)}`], ["signs", `${"- ".repeat(much)}x`],
  ])("%s: one cell and one number are told so, and the rest of the notebook is read", (_, source) => {
    const parsed = parse(`[1](<=${source}>)\n\n${cell("values: deep", `a: ${source}`)}${cell("values: sound", "a: 1")}${cell("script: s", `export const a = ${source};`)}`, shapes);
    expect(parsed.cells.map((each) => each.broken)).toEqual([true, false, true]);
    expect(parsed.problems.some((each) => each.cell === 0 && /[Tt]his nests too deeply/.test(each.message))).toBe(true);
  });
});

describe("what is very long", () => {
  // Twice as long costs twice as much: four times as much, as once, would outlast any test here.
  test("one line of a cell with 400,000 tokens", () => {
    const parsed = parse(cell("values: v", `list: [${"1, ".repeat(200_000)}1]`, "b: 2"), shapes);
    expect(parsed.problems).toEqual([]);
    expect(parsed.cells[0].options.map((each) => each.name)).toEqual(["list", "b"]);
  });

  test("a fence is read at the cost of its own lines, however long the text before it", () => {
    const text = `${"words\n".repeat(700_000)}${cell("values: v", "a: 1")}`;
    const node = { type: "code", value: "a: 1", position: { start: { line: 700_001, column: 1, offset: text.indexOf("`") }, end: { line: 700_003, column: 4, offset: text.length - 2 } } } as const;
    const started = performance.now();
    for (let i = 0; i < 3000; i += 1) expect(fenceOf(text, node)?.rest).toBe("v");
    // A few milliseconds; looking through the whole text took twenty seconds.
    expect(performance.now() - started).toBeLessThan(3000);
  });
});

describe("for any text", () => {
  test("blocks read one by one are the blocks of the whole text, every node with its place", () => {
    fc.assert(fc.property(notebook, (text) => { expect(JSON.parse(JSON.stringify(parse(text, shapes).tree))).toEqual(strip(text)); }), { ...seeded, numRuns: 1500 });
  });

  test("parsing never throws, and the blocks stand in order without overlap inside the text", () => {
    fc.assert(fc.property(fc.oneof(notebook, fc.string({ unit: "binary", maxLength: 200 })), (text) => {
      const read = parse(text, shapes, { names });
      let at = 0;
      for (const block of read.blocks) {
        expect(block.from).toBeGreaterThanOrEqual(at);
        expect(block.to).toBeGreaterThanOrEqual(block.from);
        at = block.to;
      }
      expect(at).toBeLessThanOrEqual(text.length);
      for (const each of read.problems) { expect(each.from).toBeLessThanOrEqual(each.to); expect(each.to).toBeLessThanOrEqual(text.length); }
      for (const each of read.numbers) expect(text.slice(each.from, each.to)).toMatch(/^\[[\s\S]*\)$/);
      for (const each of read.cells.flatMap((one) => one.options)) expect(text.slice(each.expression.from, each.expression.to)).toBe(each.source);
    }), { ...seeded, numRuns: 1000 });
  });

  test("parsing after an edit gives what parsing afresh gives", () => {
    fc.assert(fc.property(notebook, fc.nat(), fc.nat({ max: 12 }), fc.oneof(line, notebook), (text, at, cut, insert) => {
      const from = text.length === 0 ? 0 : at % (text.length + 1);
      const edited = text.slice(0, from) + insert + text.slice(from + cut);
      const { memory: _a, ...quick } = parse(edited, shapes, { names, before: parse(text, shapes, { names }) });
      const { memory: _b, ...fresh } = parse(edited, shapes, { names });
      expect(quick).toEqual(fresh);
    }), seeded);
  });
});

describe("edits change only the bytes they name", () => {
  const padding = fc.array(line, { maxLength: 4 }).map((lines) => (lines.some((each) => /[`~$<[^\uFEFF]/.test(each)) ? "words\n\n" : `${lines.join("\n")}\n\n`));
  test("keepSetting", () => {
    fc.assert(fc.property(padding, padding, fc.double({ noNaN: true, noDefaultInfinity: true }), fc.double({ noNaN: true, noDefaultInfinity: true }), fc.boolean(), (before, after, was, now, given) => {
      const head = `${before}${fence}slider: q\nfrom: 0\nto: 1`;
      const tail = `\n${fence}\n\n${after}`;
      const text = `${head}${given ? `\nat: ${was}` : ""}${tail}`;
      const outcome = keepSetting(parse(text, shapes), shapes, "q", now);
      if ("refused" in outcome) throw new Error(outcome.refused);
      const edited = applyEdits(text, outcome.edits);
      if (Object.is(was, now) && given) expect(edited).toBe(text);
      expect(edited.startsWith(head)).toBe(true);
      expect(edited.endsWith(tail)).toBe(true);
      const at = parse(edited, shapes).cells.find((each) => each.name === "q")?.options.find((each) => each.name === "at");
      expect(Number(at?.source)).toEqual(now === 0 ? expect.closeTo(0) : now);
    }), seeded);
  });

  test("acceptNumber: what is written agrees and everything else stays", () => {
    fc.assert(fc.property(padding, padding, fc.constantFrom("0.31", "1,204", "12%", "<0.001", "−2.0", "word", ""), fc.double({ noNaN: true, noDefaultInfinity: true, min: -1e9, max: 1e9 }), (before, after, saved, value) => {
      const head = `${before}It is [`, tail = `](<=mean(a) \\> 1>).\n\n${after}`;
      const text = head + saved + tail;
      const read = parse(text, shapes);
      const index = read.numbers.findIndex((each) => each.savedPlace.from === head.length);
      const outcome = acceptNumber(read, index, value);
      if ("refused" in outcome) throw new Error(outcome.refused);
      const edited = applyEdits(text, outcome.edits);
      expect(edited.startsWith(head)).toBe(true);
      expect(edited.endsWith(tail)).toBe(true);
      expect(parse(edited, shapes).numbers).toHaveLength(read.numbers.length);
    }), seeded);
  });
});

test("a 5,000-line notebook is parsed again after an edit in a fraction of its first parse", () => {
  let text = "# Title\n\n";
  for (let i = 0; text.split("\n").length < 5000; i += 1) text += `## Section ${i}\n\nThe residuals pass (p = [0.31](<=mean(t${i}, 24)>)), and the *criterion*\nis [-483.2](=t${i}.aicc). More words of a usual length.\n\n| a | b |\n| - | - |\n| 1 | 2 |\n\n${cell(`values: t${i}`, "aicc: 1", "b: [log, difference(1), difference(12)]")}`;
  const started = performance.now();
  const first = parse(text, shapes, { names });
  const firstMs = performance.now() - started;
  const at = text.indexOf("Section 100");
  const times = Array.from({ length: 5 }, (_, i) => {
    const again = performance.now();
    parse(`${text.slice(0, at)}${"x".repeat(i + 1)}${text.slice(at)}`, shapes, { names, before: first });
    return performance.now() - again;
  });
  expect(first.problems).toEqual([]);
  // A ratio within one run, for the machine's own speed is not known; about a twentieth when nothing else runs.
  expect(Math.min(...times)).toBeLessThan(firstMs / 3);
});
