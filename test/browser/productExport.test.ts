import { execFileSync } from "node:child_process";
import { cpSync, mkdtempSync, rmSync, statSync } from "node:fs";
import { tmpdir } from "node:os";
import { join, resolve } from "node:path";
import type { Browser, BrowserContextOptions } from "playwright-core";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { command, launch } from "./deskOpen.ts";
import { live, openExported } from "./exported.ts";
import type { Opened } from "./exported.ts";
import { seriousFaults } from "./seriousFaults.ts";

// The main example as one file, as whoever it was sent to meets it: from disk, without a network, with and without JavaScript.

const examples = resolve(import.meta.dirname, "../../examples");
let browser: Browser, folder = "", file = "";
beforeAll(async () => {
  browser = await launch();
  folder = mkdtempSync(join(tmpdir(), "lagbook-product-"));
  cpSync(join(examples, "data"), join(folder, "data"), { recursive: true });
  cpSync(join(examples, "ferry.md"), join(folder, "ferry.md"));
  execFileSync(process.execPath, [command, "page", "ferry.md"], { cwd: folder, stdio: "pipe" });
  file = join(folder, "ferry.html");
}, 90_000);
afterAll(async () => { await browser.close(); rmSync(folder, { recursive: true, force: true }); });

const open = (options: BrowserContextOptions = {}): Promise<Opened> => openExported(browser, file, options);

describe("the main example as one file", () => {
  it("is under a megabyte plus its data", () => {
    // The data are in it packed, and once more as what is drawn of them.
    expect(statSync(file).size).toBeLessThan(1_000_000 + 2 * statSync(join(folder, "data/ferry.csv")).size);
  });

  it("is complete without JavaScript: every chart, table and claim, and nothing undecided", async () => {
    const { page, faults } = await open({ javaScriptEnabled: false });
    expect(await page.locator("#still .cell:not([data-state=current])").count()).toBe(0);
    expect(await page.locator("#still figure.part-chart").count()).toBe(await page.locator("#still figure.part-chart svg").count());
    expect(await page.locator("#still svg").count()).toBeGreaterThan(10);
    expect(await page.locator("#still .claim").count()).toBe(await page.locator("#still .claim.holds").count());
    expect(await page.locator("#still .chart-fault, #still .live.moved, #still .live.undecided").count()).toBe(0);
    expect(await page.evaluate(() => document.documentElement.scrollWidth)).toBeLessThanOrEqual(1280);
    expect(faults).toEqual([]);
    await page.context().close();
  });

  it("comes alive with its charts drawn, follows its slider, and asks nobody", async () => {
    const { page, asked, faults } = await open();
    const frame = await live(page);
    expect(await frame.locator("#page").getAttribute("data-drawn")).toBe("yes");
    const model = frame.locator("#cell-model"), before = await model.textContent();
    await frame.locator("#strip-q").fill("2");
    await frame.waitForSelector("#page[data-drawn=yes]", { state: "attached" });
    expect(await model.textContent()).not.toBe(before);
    expect(await model.textContent()).toContain("MA lag 2");
    expect(asked).toEqual([]);
    expect(faults).toEqual([]);
    await page.context().close();
  });

  it("has no serious fault of accessibility, still or live, light or dark", async () => {
    for (const colorScheme of ["light", "dark"] as const) {
      const still = await open({ colorScheme });
      expect(await seriousFaults(still.page)).toEqual([]);
      expect(await seriousFaults(await live(still.page))).toEqual([]);
      await still.page.context().close();
    }
  });
});
