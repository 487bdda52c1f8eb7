import { existsSync, mkdtempSync, readFileSync, rmSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { afterEach, beforeEach, describe, expect, it } from "vitest";
import type { Io } from "../../../runtime/host/io.ts";
import { run } from "../../../runtime/host/run.ts";

// The commands as functions: arguments in, exit code and text out.

let folder = "";
beforeEach(() => {
  folder = mkdtempSync(join(tmpdir(), "lagbook-commands-"));
  writeFileSync(join(folder, "sold.csv"), ["month,sold", ...Array.from({ length: 72 }, (_, i) => `${2018 + Math.floor(i / 12)}-${String((i % 12) + 1).padStart(2, "0")},${(200 + i + 30 * Math.sin((i * Math.PI) / 6) + ((i * 7919) % 17)).toFixed(1)}`)].join("\n"));
  writeFileSync(join(folder, "n.md"), notebook);
});
afterEach(() => { rmSync(folder, { recursive: true, force: true }); });

const notebook = ["# N", "", "```load: sold", 'file: "sold.csv"', "```", "", "```window: sample", "of: sold", "```", "", "```slider: q", "from: 0", "to: 3", "at: 1", "```", "",
  "Of [72](=sold.n) months [72](=sample.n) are used; twice q is [2](<=2 * q>).", "", "```claims:", '"q is small": q < 3', "```", ""].join("\n");

async function lagbook(...argv: readonly string[]): Promise<{ readonly code: number; readonly out: string; readonly error: string }> {
  const said = { out: "", error: "" };
  const io: Io = { out: (text) => { said.out += text; }, error: (text) => { said.error += text; }, cwd: folder, now: () => new Date("2026-01-02T03:04:05Z"), stop: AbortSignal.abort() };
  return { code: await run(argv, io), ...said };
}

describe("lagbook verify", () => {
  it("ends with 0 and one sentence where all stands", async () => {
    expect(await lagbook("verify", "n.md")).toEqual({ code: 0, out: "All stands: 4 cells current, 3 numbers agree, 1 claim holds.\n", error: "" });
  });

  it("says what moved and what broke, by line, and ends with 1", async () => {
    const { code, out } = await lagbook("verify", "n.md", "--set", "q=3");
    expect(code).toBe(1);
    expect(out).toContain("n.md:17  moved   2 is now 6  (2 * q)\n");
    expect(out).toMatch(/n\.md:20 {2}broken {2}“q is small”/);
  });

  it("names line and column of a fault, not the line of its cell's fence", async () => {
    writeFileSync(join(folder, "f.md"), "# F\n\n```load: sold\nfile: \"sold.csv\"\n```\n\n```fit: m\nseries: sold\n\nar: [1,\n  two]\n```\n");
    expect((await lagbook("verify", "f.md")).out).toMatch(/^f\.md:11:3 {2}failed {2}fit m: There is no `two`/);
    const { cells } = JSON.parse((await lagbook("verify", "f.md", "--json")).out) as { cells: unknown[] };
    expect(cells[1]).toMatchObject({ name: "m", line: 7, state: "failed", at: { line: 11, column: 3 } });
  });

  it("gives the reason why a number or claim is undecided: the cell that failed, or what is missing", async () => {
    writeFileSync(join(folder, "u.md"), ["```load: sold", 'file: "gone.csv"', "```", "", "```values: v", "none: [NaN]", "```", "", "[1](=sold.n), [2](<=v.none[0]>) and [3](<=1 / 0>).", "", "```claims:", '"many": sold.n > 3', '"large": 4 < v.none[0] + 1', '"list": v.none', "```", ""].join("\n"));
    const { out } = await lagbook("verify", "u.md");
    expect(out).toContain("u.md:9    undecided  1  (sold.n): `sold` failed\n");
    expect(out).toContain("u.md:9    undecided  2  (v.none[0]): `v.none[0]` is missing (NaN)\n");
    expect(out).toContain("u.md:9    undecided  3  (1 / 0): `1 / 0` is infinite\n");
    expect(out).toContain("u.md:12   undecided  “many”: `sold` failed\n");
    expect(out).toContain("u.md:13   undecided  “large”: `v.none[0] + 1` is missing (NaN)\n");
    expect(out).toContain("u.md:14   undecided  “list”: a claim is true or false, and this gives a list of 1\n");
    const { numbers } = JSON.parse((await lagbook("verify", "u.md", "--json")).out) as { numbers: { message: string }[] };
    expect(numbers[1].message).toBe("Undecided: `v.none[0]` is missing (NaN)");
  });

  it("counts what waits for a failed cell beside it, where that is much", async () => {
    writeFileSync(join(folder, "w.md"), ["```load: sold", 'file: "gone.csv"', "```", "", "```window: w", "of: sold", "```", "", `${"[1](=sold.n) ".repeat(9)}`, "", "```claims:", '"many": sold.n > 3', "```", ""].join("\n"));
    const { code, out } = await lagbook("verify", "w.md");
    expect([code, out]).toEqual([1, 'w.md:2:7  failed  load sold: There is no file "gone.csv" in the notebook\'s folder. What is there: "sold.csv". (1 cell is blocked by it, 9 numbers and 1 claim undecided)\nNot all stands: 1 of 3 cells current, 0 of 9 numbers agree, 0 of 1 claim holds.\n']);
  });

  it("a fence that only lacks its colon is prose, with a note that says so, and all may stand", async () => {
    writeFileSync(join(folder, "c.md"), "Words.\n\n```fit m\nseries: sold\n```\n");
    expect(await lagbook("verify", "c.md")).toMatchObject({ code: 0, out: expect.stringMatching(/^c\.md:3:4 {2}note {2}This is read as prose: for a cell, write `fit:` with a colon\n/) });
  });

  it("sets a window by an ISO 8601 interval", async () => {
    const { out } = await lagbook("verify", "n.md", "--json", "--set", "sample=2019-01/2019-12");
    const { numbers } = JSON.parse(out) as { numbers: { expression: string; value: unknown }[] };
    expect(numbers.find((number) => number.expression === "sample.n")?.value).toBe(12);
  });

  it("refuses a setting of a control that is not there, naming those that are", async () => {
    expect(await lagbook("verify", "n.md", "--set", "r=1")).toMatchObject({ code: 2, out: "", error: expect.stringMatching(/no control of that name.*sample \(window\), q \(slider\)/) });
  });

  it("refuses a setting that its control cannot take, with the reason", async () => {
    expect(await lagbook("verify", "n.md", "--set", "q=9")).toMatchObject({ code: 2, out: "", error: "lagbook: --set q: the setting is 9, outside 0 to 3.\n" });
    expect(await lagbook("verify", "n.md", "--set", "sample=1990")).toMatchObject({ code: 2, error: expect.stringMatching(/--set sample: the setting 1990 is no window/) });
  });

  it("prints the whole result as JSON in the fields of the language", async () => {
    const result = JSON.parse((await lagbook("verify", "n.md", "--json")).out) as Record<string, unknown[]>;
    expect(Object.keys(result)).toEqual(["language", "notebook", "ok", "cells", "numbers", "claims", "problems", "notes"]);
    expect(result.notebook).toBe("n.md");
    expect(result.cells[0]).toEqual({ name: "sold", kind: "load", line: 3, state: "current", message: null, at: null });
    expect(result.numbers[0]).toEqual({ line: 17, expression: "sold.n", saved: "72", now: "72", value: 72, agrees: true, message: null });
    expect(result.claims[0]).toEqual({ line: 20, claim: "q is small", holds: true, message: null });
  });

  it("--accept writes moved numbers and no other byte", async () => {
    writeFileSync(join(folder, "n.md"), notebook.replace("[72](=sold.n)", "[70](=sold.n)").replaceAll("\n", "\r\n"));
    expect(await lagbook("verify", "n.md", "--accept")).toMatchObject({ code: 0, out: expect.stringContaining("1 number was written into the text.") });
    expect(readFileSync(join(folder, "n.md"), "utf8")).toBe(notebook.replaceAll("\n", "\r\n"));
  });

  it("runs script cells only when told so", async () => {
    writeFileSync(join(folder, "s.md"), "# S\n\n```script: own\nexport const three = 1 + 2;\n```\n\n[3](=own.three)\n");
    expect(await lagbook("verify", "s.md")).toMatchObject({ code: 1, out: expect.stringContaining("--allow-code") });
    expect((await lagbook("verify", "s.md", "--allow-code")).code).toBe(0);
  });
});

describe("lagbook begin", () => {
  it("writes a first notebook that verifies clean, and never over one that is there", async () => {
    expect((await lagbook("begin", "sold.csv")).code).toBe(0);
    expect(readFileSync(join(folder, "sold.md"), "utf8")).toMatch(/```load: sold\nfile: "sold\.csv"\n```[\s\S]*```stationarity:[\s\S]*```correlogram:[\s\S]*```fit: model[\s\S]*```compare: contest[\s\S]*```forecast:/);
    expect((await lagbook("verify", "sold.md")).code).toBe(0);
    writeFileSync(join(folder, "sold.md"), "mine");
    expect(await lagbook("begin", "sold.csv")).toMatchObject({ code: 2, error: expect.stringMatching(/sold\.md is there already.*--out/) });
    expect(readFileSync(join(folder, "sold.md"), "utf8")).toBe("mine");
  }, 60_000);

  it("says why where the data cannot be read", async () => {
    writeFileSync(join(folder, "words.csv"), "a,b\nx,y\n");
    for (const file of ["nowhere.csv", "words.csv"]) {
      const { code, error } = await lagbook("begin", file);
      expect(code, error).toBe(2);
      expect(error).toContain(file);
    }
    expect(existsSync(join(folder, "words.md"))).toBe(false);
  });
});

describe("lagbook", () => {
  it("explains itself, and says what it did not understand", async () => {
    expect(await lagbook("--help")).toMatchObject({ code: 0, out: expect.stringContaining("lagbook verify NOTEBOOK.md") });
    expect(await lagbook("vrify")).toMatchObject({ code: 2, out: "", error: expect.stringMatching(/^lagbook: There is no command "vrify"/) });
  });
});
