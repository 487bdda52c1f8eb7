// A desk in a real Chromium: the built command serves a notebook of its own folder.

import { spawn } from "node:child_process";
import type { ChildProcess } from "node:child_process";
import { mkdtempSync, rmSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { join, resolve } from "node:path";
import { chromium } from "playwright-core";
import type { Browser, BrowserContext, Frame, Page } from "playwright-core";

export const command = resolve(import.meta.dirname, "../../.build/lagbook.js");

export function launch(): Promise<Browser> {
  return chromium.launch({ executablePath: "/usr/bin/chromium", args: ["--no-sandbox", "--disable-gpu", "--disable-quic", "--no-first-run", "--disable-background-networking", "--disable-component-update", "--disable-sync"] });
}

/** Sixty months around a season, the same on every machine. */
export const data = ["month,sold", ...Array.from({ length: 60 }, (_, i) => `${2018 + Math.floor(i / 12)}-${String((i % 12) + 1).padStart(2, "0")},${(200 + i + 30 * Math.sin((i * Math.PI) / 6) + ((i * 7919) % 17)).toFixed(1)}`)].join("\n");

export const notebook = `# Sales

A number of months: [60](=sold.n), twice the order is [2](=twice.value).

\`\`\`load: sold
file: "sold.csv"
\`\`\`

\`\`\`slider: q
from: 0
to: 4
at: 1
\`\`\`

\`\`\`values: twice
value: 2 * q
\`\`\`

\`\`\`fit: model
series: sold
ma: q
\`\`\`

The last line.
`;

export interface Served { readonly folder: string; readonly path: string; readonly url: string; stop(): Promise<void> }

/** `lagbook open` on a notebook in a folder of its own. */
export async function serve(text = notebook, files: Readonly<Record<string, string>> = { "sold.csv": data }, port?: number, folder = mkdtempSync(join(tmpdir(), "lagbook-desk-"))): Promise<Served> {
  const path = join(folder, "n.md");
  writeFileSync(path, text);
  for (const [name, content] of Object.entries(files)) writeFileSync(join(folder, name), content);
  const child = spawn(process.execPath, [command, "open", "n.md", ...(port === undefined ? [] : ["--port", String(port)])], { cwd: folder, stdio: ["ignore", "pipe", "pipe"] });
  const url = await address(child);
  return { folder, path, url, stop: async () => { await ended(child); rmSync(folder, { recursive: true, force: true }); } };
}

function address(child: ChildProcess): Promise<string> {
  return new Promise((done, failed) => {
    let said = "";
    const hear = (bytes: Buffer): void => {
      said += bytes.toString();
      const found = /http:\/\/127\.0\.0\.1:\d+\/\?key=\S+/.exec(said);
      if (found) done(found[0]);
    };
    child.stdout?.on("data", hear);
    child.stderr?.on("data", hear);
    child.once("exit", (code) => failed(new Error(`lagbook open ended with ${code}: ${said}`)));
  });
}

export function ended(child: ChildProcess): Promise<void> {
  return new Promise((done) => {
    if (child.exitCode !== null) { done(); return; }
    child.once("exit", () => done());
    child.kill("SIGTERM");
  });
}

export interface Desk { readonly page: Page; readonly frame: Frame; readonly faults: readonly string[] }

/** Opens the desk and waits until its page has computed everything. */
export async function openDesk(context: BrowserContext, url: string): Promise<Desk> {
  const page = await context.newPage(), faults: string[] = [];
  page.on("pageerror", (error) => faults.push(error.message));
  page.on("console", (message) => { if (message.type() === "error") faults.push(message.text()); });
  await page.goto(url);
  await page.waitForSelector(".cm-content", { state: "attached" });
  return { page, frame: await pageOf(page), faults };
}

/** The page's frame, once it has drawn all that the text and the controls say. */
export async function pageOf(page: Page): Promise<Frame> {
  const handle = await page.waitForSelector("#frame", { state: "attached" });
  for (;;) {
    const frame = await handle.contentFrame();
    if (frame && frame.url() !== "about:blank") {
      await frame.waitForSelector("#page[data-drawn=yes]", { state: "attached" });
      return frame;
    }
    await page.waitForTimeout(20);
  }
}

/** Puts the cursor at the end of a line of the text that is in sight, and types. */
export async function typeAfter(page: Page, line: string, text: string): Promise<void> {
  await page.locator(".cm-line").filter({ hasText: line }).first().click();
  await page.keyboard.press("End");
  await page.keyboard.type(text);
}

/** The lines of the editor in sight. */
export async function textOf(page: Page): Promise<string> {
  return (await page.locator(".cm-line").allInnerTexts()).map((line) => line.replace(/\n$/, "")).join("\n");
}
