// Where the page's bundle starts. The bundler puts the engine's worker in place of LAGBOOK_ENGINE (a text).

import { startPage } from "./page.ts";
import { parentWindow } from "./parentWindow.ts";

declare const LAGBOOK_ENGINE: string;

const root = document.getElementById("page") ?? document.body.appendChild(Object.assign(document.createElement("main"), { id: "page" }));
startPage({ root, workerSource: LAGBOOK_ENGINE, parent: parentWindow() });
