// What the engine's worker runs: the engine with the language. The bundler makes one text of it, which the page carries.

import { language } from "../../cells/index.ts";
import { warmUp } from "../../stdlib/index.ts";
import { serveEngine } from "../engine/worker.ts";
import type { WorkerScope } from "../engine/worker.ts";

serveEngine(language, self as unknown as WorkerScope);

// In the pauses of its first moments the worker runs the estimation's kernels, so that the first fit a reader waits for meets
// compiled code.
const slices = warmUp(), next = (): void => { if (!slices.next().done) setTimeout(next); };
setTimeout(next);
