// Runs the code of a `script` cell for `verify --allow-code` and `page --allow-code`: in a process of its own, that may not
// write files, start programs or read anything but itself. Node 20 cannot keep it from the network; that is why the user is asked.

import { spawn } from "node:child_process";

/** The program of that process. It gets one message and answers with one. */
const runner = `
process.once("message", async ({ source, inputs }) => {
  try {
    globalThis.lagbookInputs = inputs;
    const names = Object.keys(inputs);
    const head = names.length > 0 ? "const {" + names.join(",") + "} = globalThis.lagbookInputs; delete globalThis.lagbookInputs; " : "delete globalThis.lagbookInputs; ";
    const own = await import("data:text/javascript;charset=utf-8," + encodeURIComponent(head + source));
    const exports = {};
    for (const name of Object.keys(own)) {
      if (typeof own[name] === "function") throw new Error("the export \`" + name + "\` is a function; outside the browser a script can only give data");
      exports[name] = own[name];
    }
    process.send({ exports }, () => process.exit(0));
  } catch (error) {
    process.send({ message: error instanceof Error ? error.message : String(error) }, () => process.exit(0));
  }
});
`;

/** @throws Error with the script's own message, or that of a process that ended without an answer */
export function runScript(source: string, inputs: Readonly<Record<string, unknown>>, signal: AbortSignal): Promise<Readonly<Record<string, unknown>>> {
  return new Promise((resolve, reject) => {
    const child = spawn(process.execPath, ["--experimental-permission", "--no-warnings", "--input-type=module", "--eval", runner], { stdio: ["ignore", "ignore", "ignore", "ipc"], serialization: "advanced", env: {} });
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
