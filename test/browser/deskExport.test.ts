import { execFileSync } from "node:child_process";
import { mkdtempSync, readFileSync, rmSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { dirname, join } from "node:path";
import { pathToFileURL } from "node:url";
import axe from "axe-core";
import type { Browser } from "playwright-core";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { command, data, launch, notebook } from "./deskOpen.ts";
import { live, openExported } from "./exported.ts";
import type { Opened } from "./exported.ts";

// An exported page, opened from disk with the network off.

let browser: Browser, folder = "", file = "";
beforeAll(async () => {
  browser = await launch();
  folder = mkdtempSync(join(tmpdir(), "lagbook-export-"));
  writeFileSync(join(folder, "n.md"), `${notebook}\n\`\`\`chart: drawn\nmark: "line"\ndata: sold\nencoding: {x: {field: "time", type: "temporal"}, y: {field: "value", type: "quantitative"}}\n\`\`\`\n`);
  writeFileSync(join(folder, "sold.csv"), data);
  execFileSync(process.execPath, [command, "page", "n.md"], { cwd: folder });
  file = join(folder, "n.html");
});
afterAll(async () => { await browser.close(); rmSync(folder, { recursive: true, force: true }); });

const open = (javaScriptEnabled = true, width = 1280): Promise<Opened> => openExported(browser, file, { javaScriptEnabled, viewport: { width, height: 800 } });

describe("the exported page", () => {
  it("reads without JavaScript: prose, numbers, tables and charts", async () => {
    const { page } = await open(false);
    expect(await page.locator("#still h1").innerText()).toBe("Sales");
    expect(await page.locator("#still").innerText()).toContain("A number of months: 60");
    expect(await page.locator("#still svg").count()).toBeGreaterThanOrEqual(2);
    expect(await page.locator("#still table").count()).toBeGreaterThan(0);
    await page.context().close();
  });

  it("says what it was made of", async () => {
    const { page } = await open(false);
    await page.locator("#made summary").click();
    const said = await page.locator("#made").innerText();
    expect(said).toMatch(/sold\.csv\s+60 rows\s+2018-01 to 2022-12\s+[0-9a-f]{64}/);
    expect(said).toMatch(/Made \d{4}-\d\d-\d\d \d\d:\d\d UTC with Lagbook \d+\.\d+\.\d+ from n\.md/);
    await page.context().close();
  });

  it("comes alive offline, asks for nothing, and recomputes everything when its slider moves", async () => {
    const { page, asked, faults } = await open();
    const frame = await live(page);
    expect(await page.locator("#still").isVisible()).toBe(false);
    await frame.locator("#cell-q input[type=range]").focus();
    await page.keyboard.press("ArrowRight");
    await expect.poll(() => frame.locator(".live.moved").first().innerText()).toContain("4");
    expect(await frame.evaluate(() => self.origin)).toBe("null");
    expect(asked).toEqual([]);
    expect(faults).toEqual([]);
    await page.context().close();
  });

  it("prints as it stands now", async () => {
    const { page } = await open();
    const frame = await live(page);
    await frame.locator("#cell-q input[type=range]").focus();
    await page.keyboard.press("ArrowRight");
    await expect.poll(() => page.evaluate(() => document.querySelector("#still")?.textContent), { timeout: 5000 }).toMatch(/twice the order is\D*2\D*4/);
    await page.emulateMedia({ media: "print" });
    expect(await page.locator("#still").isVisible()).toBe(true);
    expect(await page.locator("#live-place").isVisible()).toBe(false);
    expect(await page.locator("#still svg").count()).toBeGreaterThanOrEqual(2);
    await page.context().close();
  });

  it("cannot reach the network from within, whatever runs in it", async () => {
    const { page } = await open();
    const frame = await live(page);
    expect(await frame.evaluate(() => fetch("https://a.example/").then(() => "reached", () => "refused"))).toBe("refused");
    expect(await frame.evaluate(() => { const picture = new Image(); return new Promise((done) => { picture.addEventListener("load", () => done("reached")); picture.addEventListener("error", () => done("refused")); picture.src = "https://a.example/x.png"; }); })).toBe("refused");
    await page.context().close();
  });

  it("shows the still page at once, then the live one in its place", async () => {
    const { page } = await open();
    expect(await page.locator("#still h1").innerText()).toBe("Sales");
    await live(page);
    expect(await page.locator("#still").isVisible()).toBe(false);
    await page.context().close();
  });

  it("has no serious fault of accessibility, still or live, and fits a phone", async () => {
    for (const [script, width] of [[false, 1280], [true, 390]] as const) {
      const { page } = await open(true, width);
      if (script) await live(page);
      expect(await page.evaluate(() => document.documentElement.scrollWidth)).toBeLessThanOrEqual(width);
      await page.evaluate(axe.source);
      const found = await page.evaluate(async () => {
        const { axe: run } = window as unknown as { axe: { run(context: object, options: object): Promise<{ violations: { id: string; impact: string; nodes: { target: string[] }[] }[] }> } };
        const { violations } = await run.run({ include: [["body"]] }, { iframes: false });
        return violations.filter(({ impact }) => impact === "serious" || impact === "critical").map(({ id, nodes }) => `${id}: ${nodes.map(({ target }) => target.join(" ")).join("; ")}`);
      });
      expect(found).toEqual([]);
      await page.context().close();
    }
  });

  it("comes alive whatever its headings are called", async () => {
    writeFileSync(join(folder, "named.md"), "# Live\n\n## Carried\n\n## Still\n\n```slider: q\nfrom: 0\nto: 4\nat: 1\n```\n\nTwice q is [2](<=2 * q>).\n");
    execFileSync(process.execPath, [command, "page", "named.md"], { cwd: folder });
    const context = await browser.newContext({ offline: true }), page = await context.newPage();
    await page.goto(pathToFileURL(join(folder, "named.html")).href);
    const frame = await live(page);
    await frame.locator("#strip-q").fill("3");
    await expect.poll(() => frame.locator(".live.moved").first().innerText()).toContain("6");
    await context.close();
  });

  it("is under a megabyte plus its data, without what its charts never ask for", () => {
    const size = readFileSync(file).length - 2 * data.length;
    expect(size).toBeLessThan(1_000_000);
    const page = readFileSync(join(dirname(command), "frame.html"), "utf8");
    expect(page).toContain("vega-embed");
    for (const unasked of ["fivethirtyeight", "vg-tooltip", ".vega-embed details", "SEQUENCE_NOT_AN_ARRAY"]) expect(page, unasked).not.toContain(unasked);
  });
});
