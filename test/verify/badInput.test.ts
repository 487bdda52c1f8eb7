import { mkdtempSync, rmSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { run } from "../../runtime/host/run.ts";

// What an analyst is told when something is wrong, and that nothing else stops for it. Each notebook holds a sound
// cell beside the faulty one; `verify` must end with 1, name the place, say what to try, and keep the sound cell current.

let folder = "";
beforeAll(() => {
  folder = mkdtempSync(join(tmpdir(), "lagbook-bad-"));
  const months = Array.from({ length: 48 }, (_, i) => `${2020 + Math.floor(i / 12)}-${String((i % 12) + 1).padStart(2, "0")}`);
  const good = months.map((month, i) => `${month},${(100 + 10 * Math.sin(i / 2) + ((i * 7919) % 13)).toFixed(1)}`);
  const files: Readonly<Record<string, string | Uint8Array>> = {
    "good.csv": ["month,value", ...good].join("\n"),
    "empty.csv": "",
    "header-only.csv": "month,value\n",
    "picture.csv": new Uint8Array([0x89, 0x50, 0x4e, 0x47, 0, 1, 2, 3, 0, 0xff, 0xfe]),
    "twice.csv": ["month,value", ...good, "2021-03,999"].join("\n"),
    "shuffled.csv": ["month,value", ...[...good].reverse()].join("\n"),
    "words.csv": ["month,value", ...good.slice(0, 20), "2021-09,about ninety", ...good.slice(21)].join("\n"),
    "constant.csv": ["month,value", ...months.map((month) => `${month},5`)].join("\n"),
    "short.csv": ["month,value", ...good.slice(0, 6)].join("\n"),
  };
  for (const [name, content] of Object.entries(files)) writeFileSync(join(folder, name), content);
});
afterAll(() => { rmSync(folder, { recursive: true, force: true }); });

interface Result { readonly ok: boolean; readonly cells: readonly { readonly name: string | null; readonly kind: string; readonly line: number; readonly state: string; readonly message: string | null }[] }

const cell = (head: string, ...lines: readonly string[]): string => ["```" + head, ...lines, "```", ""].join("\n");
const sound = cell("load: sound", 'file: "good.csv"');
const loaded = (file: string): string => cell("load: y", `file: "${file}"`);

async function verify(...cells: readonly string[]): Promise<{ readonly code: number; readonly result: Result; readonly printed: string }> {
  const notebook = join(folder, "notebook.md");
  writeFileSync(notebook, ["# Trouble", "", sound, ...cells].join("\n"));
  const printed = { out: "", error: "" };
  const io = { out: (text: string) => { printed.out += text; }, error: (text: string) => { printed.error += text; }, cwd: folder, now: () => new Date("2026-01-01T00:00:00Z"), stop: new AbortController().signal };
  const code = await run(["verify", "--json", "notebook.md"], io);
  const plain = { out: "" };
  await run(["verify", "notebook.md"], { ...io, out: (text) => { plain.out += text; }, error: (text) => { plain.out += text; } });
  return { code, result: JSON.parse(printed.out) as Result, printed: plain.out };
}

/** State and message of a cell. */
const told = (result: Result, name: string): { readonly state: string; readonly message: string } => {
  const found = result.cells.filter((each) => each.name === name).map((each) => ({ state: each.state, message: each.message ?? "" }));
  return found.find((each) => each.state === "failed") ?? found[0];
};

describe("bad input", () => {
  const faults: readonly { readonly title: string; readonly cells: readonly string[]; readonly name: string; readonly says: readonly RegExp[] }[] = [
    { title: "a missing file", cells: [loaded("nowhere.csv")], name: "y", says: [/nowhere\.csv/] },
    { title: "an empty file", cells: [loaded("empty.csv")], name: "y", says: [/empty\.csv/, /empty/] },
    { title: "a file with a header and no rows", cells: [loaded("header-only.csv")], name: "y", says: [/header-only\.csv/] },
    { title: "a file that is not text", cells: [loaded("picture.csv")], name: "y", says: [/picture\.csv/, /not text|not a text/] },
    { title: "a path outside the folder", cells: [loaded("../outside.csv")], name: "y", says: [/outside/, /folder/] },
    { title: "an absolute path", cells: [loaded("/etc/hostname")], name: "y", says: [/folder/] },
    { title: "duplicate times with different values", cells: [loaded("twice.csv")], name: "y", says: [/2021-03/, /999/] },
    { title: "text where a number should be", cells: [loaded("words.csv")], name: "y", says: [/about ninety/, /22|2021-09/] },
    { title: "a constant series", cells: [loaded("constant.csv"), cell("fit: m", "series: y", "ar: 1")], name: "m", says: [/constant|same value|does not vary/i] },
    { title: "a series shorter than the orders ask for", cells: [loaded("short.csv"), cell("fit: m", "series: y", "ar: 5", "ma: 4")], name: "m", says: [/observations|values|short/] },
    { title: "an order of 50", cells: [loaded("good.csv"), cell("fit: m", "series: y", "ar: 50", "ma: 50")], name: "m", says: [/50|observations|orders/] },
    { title: "an unknown option", cells: [loaded("good.csv"), cell("fit: m", "series: y", "arr: 1")], name: "m", says: [/arr/, /`ar`/] },
    { title: "an unknown name", cells: [cell("fit: m", "series: soundd", "ar: 1")], name: "m", says: [/soundd/, /`sound`/] },
    { title: "a list's method on a series", cells: [cell("values: m", "a: sound.map(x => x + 1)")], name: "m", says: [/A series has no `map`: use that of its values, `\.values\.map`/] },
    { title: "an unquoted date", cells: [cell("window: s", "of: sound", "from: 2021-01")], name: "s", says: [/quote/i] },
    { title: "a circle", cells: [cell("values: a", "x: b.x"), cell("values: b", "x: a.x")], name: "a", says: [/circle|each other|itself/i, /`b`/] },
    { title: "two cells of one name", cells: [cell("slider: twice", "from: 0", "to: 3"), cell("slider: twice", "from: 0", "to: 5")], name: "twice", says: [/twice/, /line/] },
  ];

  for (const { title, cells, name, says } of faults) {
    it(`${title} fails its own cell with words that name it, and nothing else`, async () => {
      const { code, result, printed } = await verify(...cells);
      expect(code).toBe(1);
      expect(result.ok).toBe(false);
      const { state, message } = told(result, name);
      expect(state).toBe("failed");
      for (const pattern of says) expect(message).toMatch(pattern);
      expect(message).not.toMatch(/undefined|\[object|TypeError|is not a function/);
      expect(told(result, "sound").state).toBe("current");
      expect(printed).toMatch(/notebook\.md:\d+/);
    });
  }

  it("unordered times are put in order, and that is said", async () => {
    const { result } = await verify(loaded("shuffled.csv"));
    expect(told(result, "y").state).toBe("current");
  });

  it("an unterminated fence is reported with its line, and the cells before it stand", async () => {
    const { code, result, printed } = await verify("```fit: m\nseries: sound\nar: 1\n\nSome prose after it.");
    expect(code).toBe(1);
    expect(told(result, "sound").state).toBe("current");
    expect(printed).toMatch(/```|fence/);
  });

  it("what depends on a failed cell is blocked by its name", async () => {
    const { result } = await verify(loaded("nowhere.csv"), cell("fit: m", "series: y", "ar: 1"));
    expect(told(result, "m")).toMatchObject({ state: "blocked", message: expect.stringContaining("y") });
  });

  it("a notebook that is not there cannot be run: exit code 2, and the path is named", async () => {
    let error = "";
    const io = { out: () => {}, error: (text: string) => { error += text; }, cwd: folder, now: () => new Date(), stop: new AbortController().signal };
    expect(await run(["verify", "absent.md"], io)).toBe(2);
    expect(error).toMatch(/absent\.md/);
  });
});
