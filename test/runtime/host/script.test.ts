import { describe, expect, it } from "vitest";
import { runScript } from "../../../runtime/host/script.ts";

const never = new AbortController().signal;

describe("a script outside the browser", () => {
  it("gives its exports, computed from copies of what it reads", async () => {
    const values = Float64Array.of(1, 2, Number.NaN);
    expect(await runScript("export const sum = y.values[0] + y.values[1]; y.values[0] = 9; export const list = [n, 'a'];", { y: { values }, n: 3 }, never)).toEqual({ sum: 3, list: [3, "a"] });
    expect(values[0]).toBe(1);
  });

  it("says what went wrong in its own words", async () => {
    await expect(runScript("throw new Error('no such month')", {}, never)).rejects.toThrow("no such month");
    await expect(runScript("export const f = () => 1", {}, never)).rejects.toThrow(/`f` is a function/);
    await expect(runScript("syntax error here", {}, never)).rejects.toThrow();
  });

  it("may neither write files, nor read the user's, nor start programs", async () => {
    await expect(runScript("import fs from 'node:fs'; fs.writeFileSync('lagbook-script-was-here', 'x')", {}, never)).rejects.toThrow(/restricted|permission/i);
    await expect(runScript("import fs from 'node:fs'; export const a = fs.readFileSync('/etc/hostname', 'utf8')", {}, never)).rejects.toThrow(/restricted|permission/i);
    await expect(runScript("import p from 'node:child_process'; export const a = p.execSync('id').toString()", {}, never)).rejects.toThrow(/restricted|permission/i);
  });

  it("finds no name that leads to the network or the process, and makes no code of texts", async () => {
    const names = ["fetch", "WebSocket", "process", "require", "Buffer", "navigator", "BroadcastChannel", "Worker"];
    expect(await runScript(`export const kinds = [${names.map((name) => `typeof ${name}`).join(",")}]`, {}, never)).toEqual({ kinds: names.map(() => "undefined") });
    await expect(runScript("export const a = (function () {}).constructor('return 1')()", {}, never)).rejects.toThrow(/Code generation from strings disallowed/);
  });

  it("says in which of its lines it went wrong", async () => {
    await expect(runScript("const a = null;\nexport const b = a.c;", {}, never)).rejects.toThrow(/\(line 2 of the script\)/);
  });

  it("is ended when it is overtaken, even in an endless loop", async () => {
    const stop = new AbortController();
    const run = runScript("while (true) {}", {}, stop.signal);
    setTimeout(() => stop.abort(), 300);
    await expect(run).rejects.toThrow(/ended before/);
  });
});
