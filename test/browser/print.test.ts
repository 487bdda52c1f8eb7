import { execFileSync } from "node:child_process";
import { cpSync, mkdtempSync, rmSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { join, resolve } from "node:path";
import { pathToFileURL } from "node:url";
import type { Browser, Page } from "playwright-core";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { command, launch } from "./deskOpen.ts";

// An exported page as it is printed: on A4 with the page's own margins, and a long equation among its cells.

/** A4 less 16 mm on each side, in CSS pixels. */
const paper = 672;

let browser: Browser, folder = "", page: Page;
beforeAll(async () => {
  browser = await launch();
  folder = mkdtempSync(join(tmpdir(), "lagbook-print-"));
  cpSync(resolve(import.meta.dirname, "../../examples/data"), join(folder, "data"), { recursive: true });
  writeFileSync(join(folder, "n.md"), `# Heat\n
\`\`\`load: heat\nfile: "data/heat.csv"\n\`\`\`\n
\`\`\`load: coldness\nfile: "data/coldness.csv"\n\`\`\`\n
\`\`\`load: ahead\nfile: "data/coldness-ahead.csv"\nvalue: ["usual", "cold"]\n\`\`\`\n
\`\`\`slider: p\nfrom: 0\nto: 4\nat: 1\n\`\`\`\n
\`\`\`fit: model\nseries: heat\nar: p\nregressors: {coldness: coldness, days: tradingDays(), wave: harmonics(12, 3)}\n\`\`\`\n
\`\`\`forecast: year\nmodel: model\nhorizon: 12\nscenarios: {"as usual": {coldness: ahead.usual}, "a fifth colder": {coldness: ahead.cold}, "usual again": {coldness: ahead.usual}}\ntotals: "year"\n\`\`\`\n`);
  execFileSync(process.execPath, [command, "page", "n.md"], { cwd: folder });
  page = await browser.newPage({ viewport: { width: paper, height: 984 }, javaScriptEnabled: false });
  await page.emulateMedia({ media: "print", colorScheme: "dark" });
  await page.goto(pathToFileURL(join(folder, "n.html")).href);
}, 60_000);
afterAll(async () => { await browser.close(); rmSync(folder, { recursive: true, force: true }); });

describe("on paper", () => {
  it("nothing is wider than the paper: no chart, table or equation is cut", async () => {
    const wide = await page.evaluate(`[...document.querySelectorAll("#still svg, #still table, #still math, #made table")].filter((one) => one.getBoundingClientRect().right > ${paper} + 1).map((one) => one.tagName + " " + Math.round(one.getBoundingClientRect().right) + " " + one.textContent.slice(0, 40))`);
    expect(wide).toEqual([]);
    expect(await page.locator("#still math").count()).toBeGreaterThan(0);
  });
  it("blocks follow one another without overlapping, and none is set in a grid, which breaks over pages badly", async () => {
    const found = await page.evaluate(`(() => {
      const boxes = [...document.querySelector("#still .page").children].map((one) => one.getBoundingClientRect()).filter((box) => box.height > 0);
      return { overlaps: boxes.filter((box, i) => i > 0 && box.top < boxes[i - 1].bottom - 1).length, boxes: boxes.length, grids: [...document.querySelectorAll("#still .page, #still .cell")].filter((one) => getComputedStyle(one).display === "grid").length };
    })()`);
    expect(found).toMatchObject({ overlaps: 0, grids: 0 });
  });
  it("no control or menu is shown, and what the slider stands at is", async () => {
    for (const what of ["input", ".menu", ".table-menu", ".fields summary", ".rest"]) expect(await page.locator(`#still ${what}`).filter({ visible: true }).count(), what).toBe(0);
    expect(await page.locator("#cell-p").innerText()).toMatch(/p\s+1/);
  });
  it("times and hashes' neighbours stay on one line, and rows and charts on one page", async () => {
    const high = await page.evaluate(`[...document.querySelectorAll("td.time, #made td:not(.hash)")].filter((one) => one.getClientRects().length > 1 || one.getBoundingClientRect().height > 60).length`);
    expect(high).toBe(0);
    expect(await page.evaluate(`[...document.querySelectorAll("#still tr, #still .part-chart")].every((one) => getComputedStyle(one).breakInside === "avoid")`)).toBe(true);
  });
  it("is black on white, whatever the screen is", async () => {
    expect(await page.evaluate(`[getComputedStyle(document.documentElement).backgroundColor, getComputedStyle(document.querySelector("#still h1")).color]`)).toEqual(["rgb(255, 255, 255)", "rgb(0, 0, 0)"]);
  });
});
