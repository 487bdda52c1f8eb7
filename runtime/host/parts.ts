// The prebuilt browser parts that stand beside the bundled command: the desk, the page's frame, the list of kinds.

import { existsSync } from "node:fs";
import { readFile } from "node:fs/promises";
import { dirname, join } from "node:path";
import { fileURLToPath } from "node:url";
import { CannotRun } from "./io.ts";

export type BrowserPart = "desk.html" | "desk.js" | "desk.css" | "frame.html" | "live.txt" | "shell.js" | "page.css" | "catalogue.json";

/** Folder of the prebuilt parts: that of the bundled command, or `.build` when the source itself runs (in tests). */
export function partsFolder(here = dirname(fileURLToPath(import.meta.url))): string {
  const folder = [here, join(here, "../../.build")].find((candidate) => existsSync(join(candidate, "frame.html")));
  if (!folder) throw new CannotRun("Lagbook's browser parts are not built. In a checkout run: npm ci && npm run build");
  return folder;
}

export async function readPart(name: BrowserPart): Promise<string> {
  return readFile(join(partsFolder(), name), "utf8");
}
