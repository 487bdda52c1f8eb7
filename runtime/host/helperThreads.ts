// Threads that make ahead what long work needs, one for each other core.
// oxlint-disable unicorn/require-post-message-target-origin -- a thread's postMessage takes no origin

import { availableParallelism } from "node:os";
import { join } from "node:path";
import { Worker } from "node:worker_threads";
import type { Helper } from "../engine/helpers.ts";
import { partsFolder } from "./parts.ts";

/** Each holds a copy of the data and its own compiled program. */
const mostHelpers = 6;

/** They end with the thread that started them, and count in the process's memory. */
export function helperThreads(count = Math.min(mostHelpers, availableParallelism() - 1)): readonly Helper[] {
  const program = join(partsFolder(), "helper.js");
  return Array.from({ length: count }, () => {
    const thread = new Worker(program);
    return {
      post: (message) => thread.postMessage(message),
      listen(hear) {
        thread.on("message", hear);
        thread.once("error", () => hear(null));
      },
      end: () => { void thread.terminate(); },
    } satisfies Helper;
  });
}
