// Where the page's script starts. The frame's document holds the engine's program and has started it already.

import { startPage } from "./page.ts";
import { parentWindow } from "./parentWindow.ts";

declare const lagbookEngine: Worker;

const root = document.getElementById("page") ?? document.body.appendChild(Object.assign(document.createElement("main"), { id: "page" }));
startPage({ root, workerSource: document.getElementById("engine")?.textContent ?? "", worker: lagbookEngine, parent: parentWindow() });
