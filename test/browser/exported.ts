// An exported page, opened from disk with the network off.

import { pathToFileURL } from "node:url";
import type { Browser, BrowserContextOptions, Frame, Page } from "playwright-core";

/** `asked`: addresses outside the file that were asked for. `faults`: what the console told. */
export interface Opened { readonly page: Page; readonly asked: readonly string[]; readonly faults: readonly string[] }

export async function openExported(browser: Browser, file: string, options: BrowserContextOptions = {}): Promise<Opened> {
  const context = await browser.newContext({ offline: true, viewport: { width: 1280, height: 900 }, ...options });
  const page = await context.newPage(), asked: string[] = [], faults: string[] = [];
  page.on("request", (request) => { if (!/^(file|blob|data|about):/.test(request.url())) asked.push(request.url()); });
  page.on("console", (message) => { if (message.type() === "error") faults.push(message.text()); });
  page.on("pageerror", (error) => faults.push(error.message));
  await page.goto(pathToFileURL(file).href);
  return { page, asked, faults };
}

/** The live page's frame, once it has taken the still one's place. */
export async function live(page: Page): Promise<Frame> {
  await page.waitForSelector("html.live", { timeout: 50_000 });
  return (await (await page.waitForSelector("#live-place iframe")).contentFrame())!;
}
