import { existsSync } from "node:fs";
import { describe, expect, it } from "vitest";
import { SCRIPT_NAMES } from "../../../runtime/engine/isolated.ts";
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

  it("cannot import, by word or by call, whatever checked its text before", async () => {
    await expect(runScript("import fs from 'node:fs'; export const a = fs.readFileSync('/etc/hostname', 'utf8')", {}, never)).rejects.toThrow("A script cannot import");
    expect(await runScript("export const a = await import('node:net').then(() => 'in', (e) => e.message)", {}, never)).toEqual({ a: "A script cannot import" });
  });

  it("finds the names of the language and of its inputs, the same as in the browser, and nothing else", async () => {
    const { names } = await runScript("export const names = Object.getOwnPropertyNames(globalThis)", { y: 1 }, never) as { names: string[] };
    expect(names.filter((name) => name !== "y" && !SCRIPT_NAMES.includes(name))).toEqual([]);
    expect(await runScript("export const kinds = [typeof process, typeof require, typeof fetch, typeof Buffer, typeof console._stdout, typeof globalThis.constructor.constructor.process]", {}, never)).toEqual({ kinds: Array<string>(6).fill("undefined") });
  });

  it("meets no object of Node's own, through which it could get at the process: not in inputs, faults, traces, timers or helpers", async () => {
    const { kept } = await runScript(`
      const kept = {}, own = (value) => { let top = value; while (Object.getPrototypeOf(top) !== null) top = Object.getPrototypeOf(top); return top === Object.prototype; };
      kept.inputs = own(y) && own(y.values) && own(y.list);
      kept.globals = own(globalThis) && own(globalThis.constructor);
      kept.helpers = [console, console.log, setTimeout, structuredClone([1]), setTimeout(() => {}, 0)].every((one) => typeof one === "number" || own(one));
      try { setTimeout(() => {}, Symbol()); } catch (error) { kept.fault = own(error); }
      const deeper = (n) => { try { setTimeout(() => {}, 0); } catch (error) { kept.deepFault = own(error); return; } deeper(n + 1); };
      try { deeper(0); } catch (error) { kept.deepFault = own(error); }
      Error.prepareStackTrace = (error, sites) => { kept.trace = own(sites) && sites.every((site) => own(site) && site.getThis() === undefined && site.getFunction() === undefined); return ""; };
      void new Error("a").stack;
      await new Promise((done) => { setTimeout(() => { kept.timer = true; void new Error("b").stack; done(); }, 1); });
      Object.prototype.polluted = Array.prototype.polluted = 1;
      export { kept };`, { y: { values: Float64Array.of(1), list: [{ a: 1 }] } }, never) as { kept: Record<string, boolean> };
    expect(kept).toEqual({ inputs: true, globals: true, helpers: true, fault: true, deepFault: true, trace: true, timer: true });
    expect(Object.hasOwn(Object.prototype, "polluted")).toBe(false);
  });

  it("makes no code of texts", async () => {
    await expect(runScript("export const a = (function () {}).constructor('return 1')()", {}, never)).rejects.toThrow(/Code generation from strings disallowed/);
    await expect(runScript("export const a = eval('1')", {}, never)).rejects.toThrow();
  });

  it("is not handed Node's functions by an export that looks like a promise", async () => {
    await expect(runScript("export function then(resolve) { resolve({ taken: 1 }); }", {}, never)).rejects.toThrow(/`then` is a function/);
  });

  it("hears of faults that nobody waited for", async () => {
    await expect(runScript("setTimeout(() => { throw new Error('late'); }, 1); await new Promise(() => {});", {}, never)).rejects.toThrow("late");
    await expect(runScript("Promise.reject(new Error('lost')); await new Promise(() => {});", {}, never)).rejects.toThrow("lost");
    await expect(runScript("throw { get message() { throw 1; } }", {}, never)).rejects.toThrow("cannot be told");
  });

  it("ends at its limits of time and of memory, and says which", async () => {
    for (const endless of ["while (true) {}", "const f = async () => { while (true) await 0; }; await f();", "await new Promise(() => {});"]) {
      await expect(runScript(endless, {}, never, { ms: 1500, megabytes: 100 })).rejects.toThrow("still at work after 1.5 s and was ended");
    }
    await expect(runScript("const all = []; for (;;) all.push(new Array(1000).fill(1.5));", {}, never, { ms: 15_000, megabytes: 50 })).rejects.toThrow("more than 50 MB of memory");
    // Arrays of numbers lie beside the heap that V8 limits. Only Linux tells what a process holds.
    const numbers = runScript("const all = []; for (;;) all.push(new Float64Array(1e5).fill(1.5));", {}, never, { ms: 15_000, megabytes: 200 });
    await expect(numbers).rejects.toThrow(existsSync("/proc/self/status") ? "more than 200 MB of memory" : "was ended");
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
