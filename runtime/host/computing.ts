// What the thread of a computation runs (see within.ts): it computes one notebook, says which cell is at work, and has its
// scripts run outside.

import { parentPort, workerData } from "node:worker_threads";
import type { FromEngine } from "../engine/messages.ts";
import { compute } from "./headless.ts";
import type { Computed, Task } from "./headless.ts";
import { helperThreads } from "./helperThreads.ts";
import { CannotRun } from "./io.ts";

export type FromThread =
  /** The cell at work, in words; null: none that is known. */
  | { readonly said: "working"; readonly cell: string | null }
  | { readonly said: "script"; readonly id: number; readonly source: string; readonly inputs: Readonly<Record<string, unknown>> }
  /** A script's answer is no longer wanted. */
  | { readonly said: "overtaken"; readonly id: number }
  | { readonly said: "computed"; readonly computed: Computed }
  | { readonly said: "refused"; readonly message: string };

export type ToThread =
  | { readonly said: "exports"; readonly id: number; readonly exports: Readonly<Record<string, unknown>> }
  | { readonly said: "fault"; readonly id: number; readonly message: string };

const port = parentPort;
if (port === null) throw new Error("computing.ts runs in a thread of within.ts");
const say = (message: FromThread): void => port.postMessage(message);

let at: string | null = null, scripts = 0;

/** Told before a cell runs, for nothing can be said while it does. */
function heard(message: FromEngine): void {
  if (message.from !== "cell") return;
  const { id, kind, name, line, state } = message.cell;
  if (state === "working") { at = id; say({ said: "working", cell: `the ${kind}${name === null ? "" : ` ${name}`} in line ${line}` }); }
  else if (at === id) { at = null; say({ said: "working", cell: null }); }
}

function importCode(source: string, inputs: Readonly<Record<string, unknown>>, signal: AbortSignal): Promise<Readonly<Record<string, unknown>>> {
  const id = ++scripts;
  return new Promise((resolve, reject) => {
    const hear = (message: ToThread): void => {
      if (message.id !== id) return;
      port!.off("message", hear);
      if (message.said === "exports") resolve(message.exports); else reject(new Error(message.message));
    };
    port!.on("message", hear);
    signal.addEventListener("abort", () => say({ said: "overtaken", id }), { once: true });
    say({ said: "script", id, source, inputs });
  });
}

try {
  say({ said: "computed", computed: await compute(workerData as Task, { importCode, helpers: helperThreads, heard }) });
} catch (error) {
  if (!(error instanceof CannotRun)) throw error;
  say({ said: "refused", message: error.message });
}
