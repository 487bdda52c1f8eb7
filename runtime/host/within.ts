// Computes a notebook within limits of time and memory: in a thread of its own, which is ended whatever it is doing. A notebook
// may come from a stranger, or simply ask for more than anybody meant it to.
// oxlint-disable unicorn/require-post-message-target-origin -- a thread's postMessage takes no origin

import { join } from "node:path";
import { Worker } from "node:worker_threads";
import type { FromThread, ToThread } from "./computing.ts";
import type { Computed, Task } from "./headless.ts";
import { CannotRun } from "./io.ts";
import { partsFolder } from "./parts.ts";
import { runScript } from "./script.ts";

declare const LAGBOOK_BUNDLED: boolean | undefined;

export interface Limits { readonly seconds: number; readonly megabytes: number }
/** What a computation may take where nothing else is said: far more than any example needs. */
export const usualLimits: Limits = { seconds: 600, megabytes: 4096 };

/** How often the memory in use is looked at, in ms. */
const lookMs = 250;

/** @throws CannotRun where a limit is met, with the cell that was at work; what `compute` throws */
export async function computeWithin(task: Task, limits: Limits): Promise<Computed> {
  // The source itself runs only in tests, and a thread of Node's reads no TypeScript.
  if (typeof LAGBOOK_BUNDLED === "undefined") return (await import("./headless.ts")).compute(task);
  const worker = new Worker(join(partsFolder(), "computing.js"), { workerData: task, resourceLimits: { maxOldGenerationSizeMb: limits.megabytes } });
  const ended = new AbortController();
  let working: string | null = null, timer: NodeJS.Timeout | undefined, looking: NodeJS.Timeout | undefined;
  const computed = new Promise<Computed>((resolve, reject) => {
    const meet = (what: string, option: string): void => reject(new CannotRun(`${task.notebook ?? "The notebook"} ${what}${working === null ? "" : `; at work was ${working}`}. If it needs more, allow it with ${option}.`));
    const tooLarge = (): void => meet(`took more than ${limits.megabytes} MB of memory and was stopped`, "--megabytes NUMBER");
    timer = setTimeout(() => meet(`was not computed after ${limits.seconds} s and was stopped`, "--seconds NUMBER"), limits.seconds * 1000);
    // The thread's own limit counts objects, and not the arrays of numbers beside them.
    looking = setInterval(() => { if (process.memoryUsage.rss() > limits.megabytes * 1048576) tooLarge(); }, lookMs);
    worker.on("error", (error: Error & { readonly code?: string }) => { if (error.code === "ERR_WORKER_OUT_OF_MEMORY") tooLarge(); else reject(error); });
    worker.on("message", (message: FromThread) => {
      switch (message.said) {
        case "working": working = message.cell; return;
        case "computed": resolve(message.computed); return;
        case "refused": reject(new CannotRun(message.message)); return;
        case "script": void answerScript(worker, message, limits, ended.signal); return;
      }
    });
  });
  return computed.finally(() => { clearTimeout(timer); clearInterval(looking); ended.abort(); void worker.terminate(); });
}

/** Scripts are run from here, so that they end with the computation, however that ends. */
async function answerScript(worker: Worker, { id, source, inputs }: Extract<FromThread, { said: "script" }>, limits: Limits, ended: AbortSignal): Promise<void> {
  const overtaken = new AbortController();
  const hear = (message: FromThread): void => { if (message.said === "overtaken" && message.id === id) overtaken.abort(); };
  worker.on("message", hear);
  const answer: ToThread = await runScript(source, inputs, AbortSignal.any([ended, overtaken.signal]), { ms: limits.seconds * 1000, megabytes: limits.megabytes })
    .then((exports) => ({ said: "exports", id, exports }) as const, (error: unknown) => ({ said: "fault", id, message: error instanceof Error ? error.message : String(error) }) as const);
  worker.off("message", hear);
  worker.postMessage(answer);
}
