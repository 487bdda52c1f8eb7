// What the engine's worker runs: the engine with the language. The bundler makes one text of it, which the page carries.

import { language } from "../../cells/index.ts";
import { serveEngine } from "../engine/worker.ts";
import type { WorkerScope } from "../engine/worker.ts";

serveEngine(language, self as unknown as WorkerScope);
