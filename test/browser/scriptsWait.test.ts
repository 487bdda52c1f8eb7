import type { Browser, BrowserContext, Page } from "playwright-core";
import { afterAll, afterEach, beforeAll, beforeEach, describe, expect, it } from "vitest";
import { launch, openDesk, serve } from "./deskOpen.ts";
import type { Served } from "./deskOpen.ts";

// A script that ends its page, as one that takes all memory does. The end is brought about by the browser's own means.

const text = "# S\n\n```script: s\nwhile (true) {}\nexport const a = 1;\n```\n\nTwice two is [4](<=2 * 2>).\n";

let browser: Browser, context: BrowserContext, served: Served;
beforeAll(async () => { browser = await launch(); });
afterAll(async () => { await browser.close(); });
beforeEach(async () => { context = await browser.newContext({ viewport: { width: 1280, height: 800 } }); served = await serve(text, {}); });
afterEach(async () => { await context.close(); await served.stop(); });

/** Opens the desk and waits until the script is at work and the desk has heard of it. */
async function atWork(): Promise<Page> {
  const page = await context.newPage();
  await page.goto(served.url);
  await expect.poll(() => page.evaluate(() => Object.keys(localStorage).some((key) => key.startsWith("lagbook scripts ")))).toBe(true);
  return page;
}

/** Ends the process of a page or frame. The browser gives no answer to that. */
async function crash(page: Page, of: Page | ReturnType<Page["mainFrame"]>): Promise<void> {
  const crashed = page.waitForEvent("crash"), session = await context.newCDPSession(of);
  void session.send("Page.crash").catch(() => undefined);
  await crashed;
}

describe("scripts of a page that ended", () => {
  it("wait when the notebook is opened again, until the reader runs them", async () => {
    const first = await atWork();
    await crash(first, first);
    await first.close();
    const { page, frame } = await openDesk(context, served.url);
    expect(await page.locator("[data-notice=scripts]").innerText()).toMatch(/The page ended while scripts were at work, so they wait now/);
    expect(await frame.locator("#cell-s").getAttribute("data-state")).toBe("failed");
    expect(await frame.locator("#cell-s").innerText()).toContain("This script waits");
    expect(await frame.locator(".live.agrees").count()).toBe(1);
    await page.locator("[data-notice=scripts]").getByRole("button", { name: "Run the scripts" }).click();
    await expect.poll(() => frame.locator("#cell-s").getAttribute("data-state")).toBe("working");
    expect(await page.locator("[data-notice=scripts]").count()).toBe(0);
  });

  it("wait also where the browser ended the page's frame alone, and the reader loads the desk again", async () => {
    const first = await atWork(), desk = await context.newCDPSession(first);
    await crash(first, (await (await first.waitForSelector("#frame", { state: "attached" })).contentFrame())!);
    await new Promise((done) => { setTimeout(done, 5000); });
    void desk.send("Page.reload");
    const notice = "document.querySelector('[data-notice=scripts]')?.textContent";
    await expect.poll(async () => (await desk.send("Runtime.evaluate", { expression: notice })).result.value).toMatch(/so they wait now/);
  });

  it("run again where the reader left a page that was well", async () => {
    const page = await atWork();
    await page.goto("about:blank");
    await page.goto(served.url);
    await expect.poll(() => page.evaluate(() => Object.keys(localStorage).some((key) => key.startsWith("lagbook scripts ")))).toBe(true);
    expect(await page.locator("[data-notice=scripts]").count()).toBe(0);
  });

  it("wait after a page whose frame ended was opened again from the desk, which lives on", async () => {
    const page = await atWork(), desk = await context.newCDPSession(page);
    const seen = async (expression: string): Promise<unknown> => (await desk.send("Runtime.evaluate", { expression })).result.value;
    const silent = "document.querySelector('[data-notice=silent]')";
    await crash(page, (await (await page.waitForSelector("#frame", { state: "attached" })).contentFrame())!);
    await expect.poll(() => seen(`${silent}?.textContent`), { timeout: 20_000 }).toMatch(/The page no longer answers while a script is at work/);
    await seen(`${silent}.querySelector("button").click()`);
    await expect.poll(() => seen("document.getElementById('troubles').title")).toMatch(/This script waits/);
    expect(await seen("document.querySelector('[data-notice=scripts]')?.textContent")).toMatch(/so they wait now/);
    expect(await seen(silent)).toBeNull();
  });
});
