import { cpSync, mkdtempSync, readFileSync, rmSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { join, resolve } from "node:path";
import type { Browser, BrowserContext, Frame, Page } from "playwright-core";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { launch, openDesk, pageOf, serve } from "./deskOpen.ts";
import type { Served } from "./deskOpen.ts";
import { seriousFaults } from "./seriousFaults.ts";

// The main example as its reader meets it: one slider moved, and everything that hangs on it follows.

const examples = resolve(import.meta.dirname, "../../examples");
let browser: Browser, context: BrowserContext, served: Served, page: Page, frame: Frame, faults: readonly string[];
const asked: string[] = [];

beforeAll(async () => {
  browser = await launch();
  context = await browser.newContext({ viewport: { width: 1400, height: 900 } });
  context.on("request", (request) => { asked.push(request.url()); });
  const folder = mkdtempSync(join(tmpdir(), "lagbook-product-"));
  cpSync(join(examples, "data"), join(folder, "data"), { recursive: true });
  served = await serve(readFileSync(join(examples, "ferry.md"), "utf8"), {}, undefined, folder);
  ({ page, frame, faults } = await openDesk(context, served.url));
}, 90_000);
afterAll(async () => { await browser.close(); await served.stop(); rmSync(served.folder, { recursive: true, force: true }); });

/** Waits until all has settled, then gives a cell's text. */
const said = async (cell: string): Promise<string> => {
  frame = await pageOf(page);
  return (await frame.locator(`#cell-${cell}`).textContent()) ?? "";
};
/** The fit's criterion: a figure that changes with every order. Pictures in sight are part of a cell's text, so whole texts are not compared twice. */
const criterion = async (): Promise<string> => /AICc[^A]*/.exec(await said("model"))?.[0] ?? "";
const claims = async (): Promise<string> => (await frame.locator("[data-kind=claims]").textContent()) ?? "";
const live = (text: string): Promise<number> => frame.locator(".live.moved").filter({ hasText: text }).count();
const move = async (value: string): Promise<void> => {
  await frame.locator("#strip-q").fill(value);
  await frame.waitForSelector("#page[data-drawn=yes]", { state: "attached" });
};

describe("the main example", () => {
  it("stands: every cell current, every claim held, no number moved", async () => {
    await said("model");
    expect(await frame.locator(".cell:not([data-state=current])").count()).toBe(0);
    expect(await frame.locator(".live.moved").count()).toBe(0);
    expect(await claims()).toMatch(/holds/);
    expect(await claims()).not.toMatch(/broken|undecided/);
  });

  it("moves as one when its order slider does: fit, residuals, comparison, forecast, prose and claims", async () => {
    const fit = await criterion();
    const before = { model: await said("model"), leftover: await said("leftover"), contest: await said("contest"), nextYear: await said("nextYear"), orders: await said("orders") };
    await move("0");
    expect(await said("model")).not.toBe(before.model);
    expect(await said("leftover")).not.toBe(before.leftover);
    expect(await said("contest")).not.toBe(before.contest);
    expect(await said("nextYear")).not.toBe(before.nextYear);
    // The grid of orders does not hang on the slider.
    expect(/Of 15 models[^;]*/.exec(await said("orders"))?.[0]).toBe(/Of 15 models[^;]*/.exec(before.orders)?.[0]);
    expect(await claims()).toMatch(/broken/);
    // A share of last month's surprise is not there to be read in a model without one: its number is undecided, others have moved.
    expect(await frame.locator(".live.undecided").count()).toBeGreaterThan(0);
    expect(await live("0.89")).toBeGreaterThan(0);
    await move("1");
    expect(await criterion()).toBe(fit);
    expect(await frame.locator(".live.moved, .live.undecided").count()).toBe(0);
    expect(await claims()).not.toMatch(/broken/);
  });

  it("follows an edit of the text as it follows the slider", async () => {
    const before = await criterion();
    const line = page.locator(".cm-line").filter({ hasText: /^ma: q$/ });
    await frame.locator("#cell-model .cell-name").click();
    await line.click();
    await page.keyboard.press("End");
    await page.keyboard.press("Backspace");
    await page.keyboard.type("2");
    await expect.poll(criterion, { timeout: 15_000 }).not.toBe(before);
    expect(await said("model")).toContain("MA lag 2");
    await page.keyboard.press("ControlOrMeta+z");
    await expect.poll(criterion, { timeout: 15_000 }).toBe(before);
  });

  it("keeps the rest alive when one cell is broken, and says in place what is wrong", async () => {
    await frame.locator("#cell-model .cell-name").click();
    await page.locator(".cm-line").filter({ hasText: /^ma: q$/ }).click();
    await page.keyboard.press("End");
    await page.keyboard.type("q");
    await expect.poll(async () => { await said("model"); return frame.locator("#cell-model").getAttribute("data-state"); }, { timeout: 15_000 }).toBe("failed");
    expect(await said("model")).toContain("There is no `qq`");
    expect(await frame.locator("#cell-leftover").getAttribute("data-state")).toBe("blocked");
    expect(await said("leftover")).toContain("model");
    await expect.poll(() => page.locator(".cm-lintRange-error").count()).toBe(1);
    expect(await page.locator(".cm-lintRange-error").innerText()).toBe("qq");
    for (const sound of ["crossings", "steady", "shape", "orders"]) expect(await frame.locator(`#cell-${sound}`).getAttribute("data-state")).toBe("current");
    await page.keyboard.press("Backspace");
    await expect.poll(async () => { await said("model"); return frame.locator("#cell-model").getAttribute("data-state"); }, { timeout: 15_000 }).toBe("current");
    await expect.poll(() => page.locator(".cm-lintRange-error").count()).toBe(0);
  });

  it("stops a script that never ends, and leaves the rest alone", async () => {
    await page.locator(".cm-content").focus();
    await page.keyboard.press("ControlOrMeta+End");
    await page.keyboard.insertText("\n\n```script: stuck\nexport const never = (() => { while (true); })();\n```\n");
    frame = await (await page.waitForSelector("#frame")).contentFrame() as Frame;
    await frame.locator("#cell-stuck").getByRole("button", { name: "stop this cell" }).click();
    await expect.poll(() => frame.locator("#cell-stuck").getAttribute("data-state")).toBe("failed");
    expect(await said("stuck")).toContain("Stopped by hand");
    expect(await frame.locator("#cell-model").getAttribute("data-state")).toBe("current");
    await page.locator(".cm-content").focus();
    await page.keyboard.press("ControlOrMeta+z");
    await expect.poll(() => frame.locator("#cell-stuck").count()).toBe(0);
  });

  it("computes again when its data change on disk", async () => {
    const path = join(served.folder, "data/ferry.csv"), data = readFileSync(path, "utf8"), before = await criterion();
    writeFileSync(path, data.trimEnd().split("\n").slice(0, -1).join("\n"));
    await expect.poll(criterion, { timeout: 30_000 }).not.toBe(before);
    writeFileSync(path, data);
    await expect.poll(criterion, { timeout: 30_000 }).toBe(before);
  });

  it("has no serious fault of accessibility, desk and page, light and dark", async () => {
    for (const colorScheme of ["light", "dark"] as const) {
      await page.emulateMedia({ colorScheme });
      expect(await seriousFaults(page)).toEqual([]);
      expect(await seriousFaults(await pageOf(page))).toEqual([]);
    }
  });

  it("is left as it was on disk until it is saved, and asks nothing of anybody else", async () => {
    expect(readFileSync(served.path, "utf8")).toBe(readFileSync(join(examples, "ferry.md"), "utf8"));
    const own = new URL(served.url).origin;
    expect(asked.filter((url) => !url.startsWith(own) && !/^(blob|data|about):/.test(url))).toEqual([]);
    expect(faults).toEqual([]);
  });

  it("saves an edit by keyboard, and nothing but the edit", async () => {
    const before = readFileSync(served.path, "utf8");
    await page.locator(".cm-content").focus();
    await page.keyboard.press("ControlOrMeta+End");
    await page.keyboard.insertText("One more line.");
    await page.keyboard.press("ControlOrMeta+s");
    await expect.poll(() => readFileSync(served.path, "utf8")).toBe(`${before}One more line.`);
    await page.keyboard.press("ControlOrMeta+z");
    await page.keyboard.press("ControlOrMeta+s");
    await expect.poll(() => readFileSync(served.path, "utf8")).toBe(before);
  });
});
