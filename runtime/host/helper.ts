// What a helper's thread runs (see helperThreads.ts): it makes what it is sent, one item after the other.
// oxlint-disable unicorn/require-post-message-target-origin -- a thread's postMessage takes no origin

import { parentPort } from "node:worker_threads";
import { language } from "../../cells/index.ts";
import { createHelped } from "../engine/helpers.ts";
import type { ToHelper } from "../engine/helpers.ts";

const port = parentPort;
if (port === null) throw new Error("helper.ts runs in a thread of helperThreads.ts");
const helped = createHelped(language);
port.on("message", (message: ToHelper) => port.postMessage(helped(message)));
