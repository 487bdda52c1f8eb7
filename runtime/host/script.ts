// Runs the code of a `script` cell for `verify --allow-code` and `page --allow-code`: in a process of its own, that may not
// write files, start programs or read anything, makes no code from texts, and finds no name that leads to the network.
// Node 20 has no wall against the network itself; that is why the user is asked.

import { spawn } from "node:child_process";

/** The program of that process. It gets one message and answers with one. Of the global names it leaves those of ECMAScript
 *  itself (those that a bare context has) and a few harmless helpers; what the notebook's text may not do at all, such as
 *  importing, is refused before it comes here. */
const runner = `
import { runInNewContext } from "node:vm";
const { send: sendBound, exit } = process, send = sendBound.bind(process), leave = exit.bind(process);
const kept = new Set([...runInNewContext("Object.getOwnPropertyNames(globalThis)"), "structuredClone", "console", "setTimeout", "clearTimeout", "queueMicrotask", "performance", "TextEncoder", "TextDecoder"]);
process.once("message", async ({ source, inputs }) => {
  try {
    for (const name of Object.getOwnPropertyNames(globalThis)) if (!kept.has(name)) delete globalThis[name];
    for (const [name, value] of Object.entries(inputs)) Object.defineProperty(globalThis, name, { value, enumerable: true });
    const own = await import("data:text/javascript;charset=utf-8," + encodeURIComponent(source));
    const exports = {};
    for (const name of Object.keys(own)) {
      if (typeof own[name] === "function") throw new Error("The export \`" + name + "\` is a function: only plain data (numbers, texts, lists, objects) can leave a script");
      exports[name] = own[name];
    }
    send({ exports }, () => leave(0));
  } catch (error) {
    const line = /data:text\\S*?:(\\d+):\\d+/.exec(error?.stack ?? "");
    send({ message: (error instanceof Error ? error.message : String(error)) + (line === null ? "" : " (line " + line[1] + " of the script)") }, () => leave(0));
  }
});
`;

/** Node's flag for a process without permissions; it lost its "experimental" after version 20. */
const permission = process.allowedNodeEnvironmentFlags.has("--permission") ? "--permission" : "--experimental-permission";

/** @throws Error with the script's own message, or that of a process that ended without an answer */
export function runScript(source: string, inputs: Readonly<Record<string, unknown>>, signal: AbortSignal): Promise<Readonly<Record<string, unknown>>> {
  return new Promise((resolve, reject) => {
    const child = spawn(process.execPath, [permission, "--disallow-code-generation-from-strings", "--no-warnings", "--input-type=module", "--eval", runner], { stdio: ["ignore", "ignore", "ignore", "ipc"], serialization: "advanced", env: {} });
    const end = (): void => { child.kill("SIGKILL"); };
    signal.addEventListener("abort", end, { once: true });
    child.once("error", reject);
    child.once("message", (answer) => {
      const { exports, message } = answer as { exports?: Readonly<Record<string, unknown>>; message?: string };
      if (exports) resolve(exports); else reject(new Error(message ?? "the script gave no answer"));
    });
    child.once("exit", () => { signal.removeEventListener("abort", end); reject(new Error("the script's process ended before it gave an answer")); });
    child.send({ source, inputs }, (error) => { if (error) reject(error); });
  });
}
