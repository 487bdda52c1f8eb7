// What a reader waits for, in Chromium: a moved slider, an opened page, a key in a long text. Against the budgets, and beside
// what the browser needs for a page that does nothing.

import { execFileSync, spawnSync } from "node:child_process";
import { cpSync, mkdtempSync, readFileSync, rmSync, statSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { performance } from "node:perf_hooks";
import { pathToFileURL } from "node:url";
import type { Browser, Frame } from "playwright-core";
import { command, launch, openDesk, serve } from "../browser/deskOpen.ts";
import type { Desk } from "../browser/deskOpen.ts";

type Print = (line: string) => void;

export async function bench(print: Print): Promise<void> {
  const browser = await launch();
  try {
    await sliders(browser, print);
    await exported(browser, print);
    await keys(browser, print);
    verifying(print);
  } finally { await browser.close(); }
}

const examples = join(process.cwd(), "examples");

/** An autoregression of n numbered values, the same on every machine. */
function series(n: number): string {
  let seed = 7, last = 0;
  const noise = (): number => { let sum = -6; for (let i = 0; i < 12; i++) { seed = (Math.imul(seed, 1664525) + 1013904223) >>> 0; sum += seed / 4294967296; } return sum; };
  return ["t,y", ...Array.from({ length: n }, (_, i) => { last = 0.7 * last + noise(); return `${i + 1},${last.toFixed(4)}`; })].join("\n");
}

const modelled = `# Slider

\`\`\`slider: q
from: 0
to: 4
at: 1
\`\`\`

\`\`\`load: y
file: "y.csv"
\`\`\`

\`\`\`fit: model
series: y
ma: q
\`\`\`

\`\`\`forecast: ahead
model: model
horizon: 12
\`\`\`

\`\`\`diagnostics: leftover
model: model
\`\`\`
`;

async function sliders(browser: Browser, print: Print): Promise<void> {
  const cases: readonly { readonly name: string; readonly text: string; readonly files: Readonly<Record<string, string>>; readonly look: string; readonly budget: number }[] = [
    { name: "the browser alone: a slider and its printed value", text: "# S\n\n```slider: q\nfrom: 0\nto: 4\nat: 1\n```\n", files: {}, look: "q", budget: 16 },
    { name: "200 points: fit, forecast, residuals", text: modelled, files: { "y.csv": series(200) }, look: "ahead", budget: 16 },
    { name: "5,000 points: the same", text: modelled, files: { "y.csv": series(5000) }, look: "ahead", budget: 33 },
    { name: "main example, at its forecast", text: readFileSync(join(examples, "ferry.md"), "utf8"), files: {}, look: "nextYear", budget: 16 },
  ];
  print("slider moved to drawn, 50 moves: the last change of the page after a move (ms, median and worst; until the cell in view has changed, and until all has settled)");
  for (const { name, text, files, look, budget } of cases) {
    const folder = mkdtempSync(join(tmpdir(), "lagbook-bench-"));
    cpSync(join(examples, "data"), join(folder, "data"), { recursive: true });
    await withDesk(browser, text, files, folder, async ({ frame }) => {
      await frame.locator(`#cell-${look}`).scrollIntoViewIfNeeded();
      await frame.waitForTimeout(800);
      const times = await moves(frame, look, 50);
      const memory = await frame.evaluate(() => (performance as unknown as { memory?: { usedJSHeapSize: number } }).memory?.usedJSHeapSize ?? NaN);
      print(`  ${name}: in view ${middle(times.seen)} and ${worst(times.seen)}; all settled ${middle(times.all)} and ${worst(times.all)} (budget ${budget}); page heap ${(memory / 1e6).toFixed(0)} MB`);
    });
  }
}

/** A desk for the time of a measurement: however that ends, neither the desk nor its server stays. */
async function withDesk(browser: Browser, text: string, files: Readonly<Record<string, string>>, folder: string, measure: (desk: Desk) => Promise<void>): Promise<void> {
  const served = await serve(text, files, undefined, folder);
  try {
    const context = await browser.newContext({ viewport: { width: 1400, height: 900 } });
    try { await measure(await openDesk(context, served.url)); } finally { await context.close(); }
  } finally {
    await served.stop();
  }
}

/** Moves the slider in the strip and waits, inside the page, for the frame after the changes. */
async function moves(frame: Frame, look: string, count: number): Promise<{ readonly seen: readonly number[]; readonly all: readonly number[] }> {
  return frame.evaluate(async ([cell, times]) => {
    const input = document.querySelector<HTMLInputElement>("#strip-q")!, target = document.querySelector(`#cell-${cell}`)!;
    const settled = (): boolean => document.querySelector("#page[data-drawn=yes]") !== null;
    const frameAfter = (): Promise<number> => new Promise((done) => { requestAnimationFrame(() => { const port = new MessageChannel(); port.port1.addEventListener("message", () => done(performance.now())); port.port1.start(); port.port2.postMessage(0); }); });
    const seen: number[] = [], all: number[] = [];
    for (let i = 0; i < times; i++) {
      let first = 0, last = 0;
      const watch = new MutationObserver((records) => {
        last = performance.now();
        if (first === 0 && records.some((record) => target.contains(record.target))) first = last;
      });
      watch.observe(document.body, { subtree: true, childList: true, characterData: true, attributes: true });
      const start = performance.now();
      input.value = String(1 + (i % 3));
      input.dispatchEvent(new Event("input", { bubbles: true }));
      // A quiet tenth of a second with nothing at work ends a move.
      for (;;) { const now = await frameAfter(); if (now - start > 5000 || (settled() && now - Math.max(last, start) > 100)) break; }
      watch.disconnect();
      if (first > 0) seen.push(first - start);
      all.push(Math.max(last, start) - start);
    }
    return { seen, all };
  }, [look, count] as const);
}

async function exported(browser: Browser, print: Print): Promise<void> {
  const folder = mkdtempSync(join(tmpdir(), "lagbook-bench-"));
  cpSync(examples, folder, { recursive: true });
  execFileSync(process.execPath, [command, "page", "ferry.md"], { cwd: folder, stdio: "pipe" });
  const file = join(folder, "ferry.html"), first: number[] = [], live: number[] = [];
  for (let i = 0; i < 7; i++) {
    const context = await browser.newContext({ offline: true, viewport: { width: 1280, height: 900 } });
    const page = await context.newPage(), start = performance.now();
    await page.goto(pathToFileURL(file).href, { waitUntil: "commit" });
    await page.waitForSelector("#still h1");
    first.push(performance.now() - start);
    await page.waitForSelector("html.live", { timeout: 20_000 });
    live.push(performance.now() - start);
    await context.close();
  }
  print(`exported main example: ${(statSync(file).size / 1e3).toFixed(0)} kB; opened cold from disk, first content ${middle(first)}, live ${middle(live)} (budget 1,000)`);
  rmSync(folder, { recursive: true, force: true });
}

async function keys(browser: Browser, print: Print): Promise<void> {
  const lines = Array.from({ length: 2500 }, (_, i) => (i % 50 === 0 ? `## Part ${i}\n` : `A line of prose with a [number](<=2 * ${i}>) in it.\n`)).join("\n");
  const text = `# Long\n\n\`\`\`slider: q\nfrom: 0\nto: 4\n\`\`\`\n\n${lines}`;
  await withDesk(browser, text, {}, mkdtempSync(join(tmpdir(), "lagbook-bench-")), async ({ page }) => {
    await page.locator(".cm-line").nth(8).click();
    await page.evaluate(() => { (window as unknown as { keys: number[] }).keys = []; document.addEventListener("keydown", () => { const start = performance.now(); requestAnimationFrame(() => { const port = new MessageChannel(); port.port1.addEventListener("message", () => { (window as unknown as { keys: number[] }).keys.push(performance.now() - start); }); port.port1.start(); port.port2.postMessage(0); }); }, true); });
    for (let i = 0; i < 60; i++) { await page.keyboard.type("a"); await page.waitForTimeout(30); }
    const times = await page.evaluate(() => (window as unknown as { keys: number[] }).keys);
    print(`a key in a 5,000-line notebook, to its frame: ${middle(times)} and ${worst(times)} (budget 16, waiting for the display's next frame included)`);
  });
}

function verifying(print: Print): void {
  const times = Array.from({ length: 7 }, () => { const start = performance.now(); spawnSync(process.execPath, [command, "verify", join(examples, "ferry.md")]); return performance.now() - start; });
  const node = Array.from({ length: 7 }, () => { const start = performance.now(); spawnSync(process.execPath, ["-e", "0"]); return performance.now() - start; });
  print(`lagbook verify of the main example, whole process: ${middle(times)} (budget 1,500; an empty Node process ${middle(node)})`);
}

const sorted = (list: readonly number[]): readonly number[] => [...list].sort((a, b) => a - b);
const middle = (list: readonly number[]): string => `${(sorted(list)[Math.floor(list.length / 2)] ?? NaN).toFixed(1)} ms`;
const worst = (list: readonly number[]): string => `${Math.max(...list).toFixed(1)} ms`;
