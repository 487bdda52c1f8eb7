// Runs the code of a `script` cell for `verify --allow-code` and `page --allow-code`: in a process of its own, that may not
// write files, start programs or read anything, and there in a realm of its own, that holds nothing but ECMAScript itself.
// Node 20 has no wall against the network: what keeps a script from it is that no object of Node's ever comes within its reach.

import { spawn } from "node:child_process";
import { SCRIPT_NAMES } from "../engine/isolated.ts";
import { watchMemory } from "./memoryHeld.ts";

/** Prepares the realm, before the script: takes names away, adds a few helpers. Whatever is made in here belongs to the realm;
 *  of Node's objects only `later` comes in, and no name, no argument and no fault leads to it. */
const realm = `((later) => {
  const kept = new Set(${JSON.stringify(SCRIPT_NAMES)}), waiting = new Map(), { toString } = Object.prototype;
  for (const name of Object.getOwnPropertyNames(globalThis)) if (!kept.has(name)) delete globalThis[name];
  let last = 0;
  const copy = (given, known = new Map()) => {
    if (typeof given !== "object" || given === null) return typeof given === "function" ? undefined : given;
    if (known.has(given)) return known.get(given);
    const typed = ArrayBuffer.isView(given) ? globalThis[toString.call(given).slice(8, -1)] : undefined;
    const made = typed ? new typed(given) : Array.isArray(given) ? [] : {};
    known.set(given, made);
    if (!typed) for (const key of Object.keys(given)) Object.defineProperty(made, key, { value: copy(given[key], known), writable: true, enumerable: true, configurable: true });
    return made;
  };
  const helper = (name, value) => { Object.defineProperty(globalThis, name, { value, writable: true, configurable: true }); };
  helper("console", Object.fromEntries(["log", "info", "warn", "error", "debug", "table"].map((name) => [name, () => {}])));
  helper("queueMicrotask", (act) => { Promise.resolve().then(() => act()); });
  helper("structuredClone", (given) => copy(given));
  helper("clearTimeout", (id) => { waiting.delete(id); });
  helper("setTimeout", (act, ms = 0, ...given) => {
    const id = ++last;
    waiting.set(id, () => act(...given));
    try { later(id, Number(ms)); } catch { throw new RangeError("No more time can be waited for here"); }
    return id;
  });
  return {
    bind: (inputs) => { for (const [name, value] of Object.entries(copy(inputs))) Object.defineProperty(globalThis, name, { value, enumerable: true }); },
    due: (id) => { const act = waiting.get(id); waiting.delete(id); act?.(); },
    refuse: () => { throw new Error("A script cannot import"); },
  };
})`;

/** The program of that process. It gets one message and answers with one. The namespace of the script is never awaited, for it
 *  may have a \`then\` that would be handed functions of Node's. */
const runner = `
import { SourceTextModule, createContext, runInContext } from "node:vm";
import { serialize } from "node:v8";
const end = (answer) => { process.send(answer, () => process.exit()); };
const fail = (error) => {
  let message = "it ended with a fault that cannot be told", line;
  try { message = String(error?.message ?? error); line = /\\bscript:(\\d+)/.exec(String(error?.stack))?.[1]; } catch { /* a fault whose own words fail is told as such */ }
  end({ message: message + (line === undefined ? "" : " (line " + line + " of the script)") });
};
process.on("uncaughtException", fail).on("unhandledRejection", fail).on("disconnect", () => process.exit());
process.once("message", async ({ source, inputs, limitMs }) => {
  try {
    const context = createContext(Object.create(null), { codeGeneration: { strings: false, wasm: false } });
    const { bind, due, refuse } = runInContext(${JSON.stringify(realm)}, context)((id, ms) => { setTimeout(() => due(id), ms); });
    bind(inputs);
    const module = new SourceTextModule(source, { context, identifier: "script", importModuleDynamically: refuse });
    await module.link(refuse);
    await module.evaluate({ timeout: limitMs });
    const exports = {};
    for (const name of Object.keys(module.namespace)) {
      const value = module.namespace[name];
      try { serialize(value); } catch { throw new Error("The export \`" + name + "\` is " + (typeof value === "function" ? "a function" : "not plain data") + ": only plain data (numbers, texts, lists, objects) can leave a script"); }
      exports[name] = value;
    }
    end({ exports });
  } catch (error) {
    fail(error);
  }
});
`;

/** Node's flag for a process without permissions; it lost its "experimental" after version 20. */
const permission = process.allowedNodeEnvironmentFlags.has("--permission") ? "--permission" : "--experimental-permission";

export interface ScriptLimits { readonly ms: number; readonly megabytes: number }
/** What a script may take where nothing else is said. */
const scriptLimits: ScriptLimits = { ms: 60_000, megabytes: 1024 };

/** What Node itself takes in the script's process, beside the script. */
const ownMegabytes = 100;

/** @throws Error with the script's own message, or that of a process that was ended */
export function runScript(source: string, inputs: Readonly<Record<string, unknown>>, signal: AbortSignal, limits: ScriptLimits = scriptLimits): Promise<Readonly<Record<string, unknown>>> {
  const child = spawn(process.execPath, [
    permission, "--disallow-code-generation-from-strings", "--experimental-vm-modules", `--max-old-space-size=${limits.megabytes}`, "--no-warnings", "--input-type=module", "--eval", runner,
  ], { stdio: ["ignore", "ignore", "ignore", "ipc"], serialization: "advanced", env: {} });
  let timer: NodeJS.Timeout | undefined, overtaken = (): void => undefined, unwatch = (): void => undefined;
  const answer = new Promise<Readonly<Record<string, unknown>>>((resolve, reject) => {
    overtaken = () => reject(new Error("the script was ended before it gave an answer"));
    signal.addEventListener("abort", overtaken);
    timer = setTimeout(() => reject(new Error(`The script was still at work after ${limits.ms / 1000} s and was ended`)), limits.ms);
    child.once("error", reject);
    child.once("message", (said) => {
      const { exports, message } = said as { exports?: Readonly<Record<string, unknown>>; message?: string };
      if (exports) resolve(exports); else reject(new Error(message ?? "the script gave no answer"));
    });
    const tooLarge = `The script took more than ${limits.megabytes} MB of memory and was ended`;
    if (child.pid !== undefined) unwatch = watchMemory(child.pid, limits.megabytes + ownMegabytes, () => reject(new Error(tooLarge)));
    child.once("exit", (_code, by) => reject(new Error(by === "SIGABRT" ? tooLarge : "the script's process ended before it gave an answer")));
    child.send({ source, inputs, limitMs: limits.ms }, (error) => { if (error) reject(error); });
  });
  return answer.finally(() => { clearTimeout(timer); unwatch(); signal.removeEventListener("abort", overtaken); child.kill("SIGKILL"); });
}
