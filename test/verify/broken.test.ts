import { mkdtempSync, readdirSync, readFileSync, rmSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import * as fc from "fast-check";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { language } from "../../cells/index.ts";
import { run } from "../../runtime/host/run.ts";
import { parse } from "../../runtime/text/parse.ts";

// Notebooks cut off, garbled and pasted together: each is read, `verify` ends with a code of its own, and what it prints are words.

const seeded = { seed: 20240611 };
const examples = readdirSync("examples").filter((name) => name.endsWith(".md")).map((name) => readFileSync(join("examples", name), "utf8"));
const shapes = language.kinds;

let folder = "";
beforeAll(() => {
  folder = mkdtempSync(join(tmpdir(), "lagbook-broken-"));
  writeFileSync(join(folder, "y.csv"), ["month,y", ...Array.from({ length: 60 }, (_, i) => `${2015 + Math.floor(i / 12)}-${String((i % 12) + 1).padStart(2, "0")},${(100 + 10 * Math.sin(i / 2) + ((i * 7919) % 13)).toFixed(1)}`)].join("\n"));
});
afterAll(() => { rmSync(folder, { recursive: true, force: true }); });

/** Exit code and what was printed. */
async function verify(text: string): Promise<{ readonly code: number; readonly printed: string }> {
  writeFileSync(join(folder, "n.md"), text);
  let printed = "";
  const say = (more: string): void => { printed += more; };
  const code = await run(["verify", "n.md"], { out: say, error: say, cwd: folder, now: () => new Date("2026-01-01T00:00:00Z"), stop: new AbortController().signal });
  return { code, printed };
}

/** What a person should never be shown. */
const internal = /\bat .*\.ts:\d|TypeError|\[object |is not a function|A fault inside|Maximum call stack|Cannot read prop/;

const cell = (head: string, ...lines: readonly string[]): string => ["```" + head, ...lines, "```", "", ""].join("\n");
const whole = [
  "# N\n", cell("load: y", 'file: "y.csv"', 'unit: "units"'), cell("window: sample", "of: y", 'from: "2015-03"'), cell("slider: q", "from: 0", "to: 2", "at: 1"), cell("transform: steady", "series: y", "window: sample", "steps: [log, difference(1)]"),
  cell("correlogram: shape", "series: steady", "lags: 8"), cell("fit: m", "series: steady", "ma: q"), cell("diagnostics: left", "model: m", "lags: 8"), cell("forecast: ahead", "model: m", "horizon: 3"), cell("table: t", "rows: ahead"), cell("values: v", "a: [1, 2].map(x => x + q)", "b: {text: `MA ${q}`}"),
  "Numbers [0.3](=left.ljungBox.p) and [yes](<=v.a[0] \\> 1 ? \"yes\" : \"no\">) for $x^2$.\n\n", cell("claims:", '"noise": left.ljungBox.p > 0.05'),
].join("\n");

/** What slips into a text. */
const scrap = fc.constantFrom(
  "\t", "\r\n", "\r", "\uFEFF", "\0", "\ud800", "\u2028", "```", "~~~", "````\n", "- ", "> ", "$", "[1](=m.", "](=", "NaN", "[]", "null", "-1", "1e309", "\"", "'", "(", "}", "...", "=>", "1/0", "\\", "<!--", "y", "m", "constructor", "__proto__",
  "```zzz: q\n```\n", "~~~fit: d\nseries: y\n~~~\n", "- ```fit: a\n  series: y\n  ```\n", "> ```fit: b\n> series: y\n> ```\n", "````\n```fit: c\n```\n````\n", "```fit: m\nseries: y\n```\n", "```values: loop\na: back.a\n```\n```values: back\na: loop.a\n```\n", "difference(9999)", "ar: 50\n",
);
type Slip = { readonly at: number; readonly cut: number; readonly put: string };
const slip: fc.Arbitrary<Slip> = fc.record({ at: fc.double({ min: 0, max: 1, noNaN: true }), cut: fc.constantFrom(0, 0, 0, 1, 3, 20), put: fc.oneof(scrap, fc.constant("")) });
const slipped = (text: string, slips: readonly Slip[]): string => slips.reduce((now, { at, cut, put }) => { const from = Math.floor(at * now.length); return now.slice(0, from) + put + now.slice(from + cut); }, text);

describe("any notebook is read", () => {
  it("every beginning of an example, and every example garbled, with all places inside the text", () => {
    fc.assert(fc.property(fc.constantFrom(...examples), fc.double({ min: 0, max: 1, noNaN: true }), fc.array(slip, { maxLength: 4 }), (example, end, slips) => {
      const text = slipped(example.slice(0, Math.ceil(end * example.length)), slips), read = parse(text, shapes, { names: [] });
      const lines = text.split(/\r\n|\n|\r/);
      for (const each of read.problems) {
        expect(each.from >= 0 && each.from <= each.to && each.to <= text.length, each.message).toBe(true);
        expect(each.column - 1, each.message).toBeLessThanOrEqual(lines[each.line - 1].length);
        expect(each.message).not.toMatch(internal);
      }
      for (const each of read.cells) expect(text.slice(each.from, each.to)).toMatch(/^\uFEFF?[ \t]*(?:```|~~~)/);
      for (const each of read.numbers) expect(text.slice(each.from, each.to)).toMatch(/^\[[\s\S]*\)$/);
    }), { ...seeded, numRuns: 150 });
  }, 120_000);
});

describe("verify ends with a code and words", () => {
  it("for a sound notebook with slips in it", async () => {
    expect((await verify(whole)).printed).toMatch(/: 11 cells current/);
    await fc.assert(fc.asyncProperty(fc.array(slip, { minLength: 1, maxLength: 3 }), async (slips) => {
      const { code, printed } = await verify(slipped(whole, slips));
      expect([0, 1]).toContain(code);
      expect(printed).not.toMatch(internal);
      expect(printed).toMatch(/^(?:All stands|Not all stands): /m);
      if (code === 1) expect(printed).toMatch(/^n\.md:\d+/m);
    }), { ...seeded, numRuns: 60 });
  }, 240_000);

  it.each<[string, string, number, RegExp]>([
    ["nothing", "", 0, /^All stands: there is nothing to compute\.\n$/],
    ["white space", " \t\r\n\u00a0\n", 0, /nothing to compute/],
    ["a mark of byte order and nothing else", "\uFEFF", 0, /nothing to compute/],
    ["a mark of byte order before a cell", `\uFEFF${cell("values: v", "a: 1")}`, 0, /1 cell current/],
    ["carriage returns", cell("values: v", "a: 1 +", "  2", "b: 3").replaceAll("\n", "\r\n"), 0, /1 cell current/],
    ["tabs for indentation", cell("values: v", "a: 1 +", "\t2"), 0, /1 cell current/],
    ["fences of tildes", "~~~values: v\na: 1\n~~~\n", 0, /1 cell current/],
    ["a cell inside a longer fence, which is prose", `\`\`\`\`\n${cell("values: v", "a: 1")}\`\`\`\`\n`, 0, /nothing to compute/],
    ["a cell in a list", "- here\n\n  ```values: v\n  a: 1\n  ```\n", 1, /^n\.md:3:3 {2}problem {2}A cell stands at the top level/],
    ["a cell in a quotation", "> ```values: v\n> a: 1\n> ```\n", 1, /^n\.md:1:3 {2}problem {2}A cell stands at the top level/],
    ["a fence that is never closed", "```values: v\na: 1\n", 1, /^n\.md:1:1 {2}failed {2}values v: The fence opened in line 1 is never closed, .*: close it with a line of ``` after its body\n/],
    ["an unknown kind", cell("fitt: m", "a: 1"), 1, /n\.md:1:4 {2}failed {2}fitt m: There is no kind of cell `fitt`: did you mean `fit`\?/],
    ["two cells of a name", cell("values: v", "a: 1") + cell("values: v", "a: 2"), 1, /`v` is defined twice, here and in line 5/],
    ["a circle", cell("values: a", "x: b.x") + cell("values: b", "x: a.x"), 1, /A circle: `a` reads `b` reads `a`/],
    ["3,000 quotations in one another", `${"> ".repeat(3000)}x\n`, 0, /nothing to compute/],
    ["half a character", `# \ud800\n\n${cell("values: v", "a: \"\udc00\"")}`, 0, /1 cell current/],
  ])("for %s", async (_, text, code, says) => {
    const found = await verify(text);
    expect(found.printed).toMatch(says);
    expect(found.code).toBe(code);
  });

  it("for a file that is no text: it could not be run, and why", async () => {
    writeFileSync(join(folder, "n.md"), new Uint8Array([0x23, 0x20, 0xff, 0xfe, 0x0a]));
    let error = "";
    expect(await run(["verify", "n.md"], { out: () => undefined, error: (text) => { error += text; }, cwd: folder, now: () => new Date(0), stop: new AbortController().signal })).toBe(2);
    expect(error).toMatch(/n\.md is not UTF-8 text/);
  });
});
