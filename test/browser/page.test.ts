import { readFileSync } from "node:fs";
import { createRequire } from "node:module";
import type { Frame, Page } from "playwright-core";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { stand } from "../runtime/page/pageBench.ts";
import type { Stand } from "../runtime/page/pageBench.ts";
import type { FromPage, ToPage } from "../../runtime/page/protocol.ts";

// The page in real Chromium, in its sandbox and under its policy, against a made-up engine.

let bench: Stand;
beforeAll(async () => { bench = await stand(); }, 60_000);
afterAll(async () => { await bench.close(); });

interface Open { readonly page: Page; readonly frame: Frame; readonly faults: string[]; heard<K extends FromPage["page"]>(kind: K): Promise<Extract<FromPage, { page: K }>[]>; say(message: ToPage): Promise<void> }

async function open(options: Parameters<Stand["open"]>[0] = {}): Promise<Open> {
  const page = await bench.open(options);
  const faults: string[] = [];
  page.on("console", (message) => { if (message.type() === "error") faults.push(message.text()); });
  page.on("pageerror", (error) => faults.push(error.message));
  const frame = page.frames()[1];
  await frame.waitForSelector(".part-chart svg", { timeout: 20_000 });
  return {
    page, frame, faults,
    heard: (kind) => page.evaluate((wanted) => (window as unknown as { heard: FromPage[] }).heard.filter((message) => message.page === wanted), kind) as never,
    say: (message) => page.evaluate((said) => { (window as unknown as { say(message: ToPage): void }).say(said); }, message),
  };
}

describe("the page", () => {
  it("draws prose, cells, states and charts without a fault under its policy", async () => {
    const { page, frame, faults } = await open();
    expect(await frame.textContent("h1")).toBe("Vehicle crossings on the Skerry line");
    expect(await frame.locator(".math-block math").count()).toBe(1);
    expect(await frame.locator(".cell[data-state=failed] .cell-fault").innerText()).toContain("There is no cell or function named nothing.");
    expect(await frame.locator("#cell-later .cell-state").innerText()).toBe("blocked");
    expect(await frame.locator("b").count()).toBe(0);
    expect(await frame.locator(".notes li").count()).toBe(1);
    for (const box of await frame.locator(".chart-box").all()) { await box.scrollIntoViewIfNeeded(); await expect.poll(() => box.locator(".vega-embed svg").count()).toBe(1); }
    expect(await frame.locator(".chart-fault").count()).toBe(0);
    expect(faults).toEqual([]);
    await page.close();
  });

  it("fits every chart to the figure's width, wide and narrow, and never scrolls sideways", async () => {
    for (const width of [1280, 390]) {
      const { page, frame } = await open({ width });
      for (const box of await frame.locator(".chart-box").all()) {
        await box.scrollIntoViewIfNeeded();
        await expect.poll(() => box.evaluate((element) => Math.abs((element.querySelector("svg")?.getBoundingClientRect().width ?? 0) - element.clientWidth))).toBeLessThan(3);
      }
      expect(await frame.evaluate(() => document.documentElement.scrollWidth - innerWidth)).toBeLessThanOrEqual(0);
      await page.close();
    }
  });

  it("a moved slider updates charts in place, marks what moved, and keeps the focus", async () => {
    const { page, frame } = await open();
    await frame.locator("#cell-ahead .chart-box").scrollIntoViewIfNeeded();
    await frame.waitForSelector("#cell-ahead svg");
    await frame.evaluate(() => { (document.querySelector("#cell-ahead svg") as Element & { mark?: string }).mark = "same"; });
    const path = (): Promise<string | null> => frame.evaluate(() => document.querySelector("#cell-ahead svg .mark-area path")?.getAttribute("d") ?? null);
    const before = await path();
    await frame.focus("#strip-maOrder");
    await page.keyboard.press("ArrowRight");
    await expect.poll(path).not.toBe(before);
    expect(await frame.evaluate(() => (document.querySelector("#cell-ahead svg") as Element & { mark?: string }).mark)).toBe("same");
    expect(await frame.evaluate(() => document.activeElement?.id)).toBe("strip-maOrder");
    expect(await frame.locator("#place-maOrder").inputValue()).toBe("2");
    expect(await frame.locator(".live.moved").first().innerText()).toContain("-479.8");
    // At moved settings nothing may be written into the text.
    expect(await frame.locator(".accept").count()).toBe(0);
    await frame.click(".strip .control-slider [data-act=keep]");
    expect(await page.evaluate(() => (window as unknown as { heard: FromPage[] }).heard.findLast((message) => message.page === "keep"))).toEqual({ page: "keep", name: "maOrder", value: 2 });
    await frame.click(".strip .control-slider [data-act=back]");
    await expect.poll(() => frame.locator("#strip-maOrder").inputValue()).toBe("1");
    expect(await frame.evaluate(() => document.activeElement?.id)).toBe("strip-maOrder");
    await page.close();
  });

  it("offers to accept a moved number, and tells where outputs come from", async () => {
    const { page, frame, heard } = await open();
    await frame.click(".accept");
    expect((await heard("accept"))[0].numbers).toEqual([{ index: 2, now: "11,391" }]);
    await frame.click("#cell-crossings .chart-box");
    const [went] = await heard("goToSource");
    expect(went.focus).toBe(true);
    expect(went.to).toBeGreaterThan(went.from);
    await frame.click("#cell-airline .cell-name");
    expect((await heard("goToSource")).length).toBe(2);
    await page.close();
  });

  it("shows a reader without a text neither accept nor keep", async () => {
    const { page, frame } = await open({ read: true });
    await frame.focus("#strip-maOrder");
    await page.keyboard.press("ArrowRight");
    await frame.waitForSelector(".strip [data-act=back]");
    expect(await frame.locator(".accept, [data-act=keep], [data-act=source]").count()).toBe(0);
    await page.close();
  });

  it("hands picture and data over as files, the numbers to the last bit", async () => {
    const { page, frame } = await open();
    for (const act of ["save-csv", "save-svg", "save-png"]) {
      await frame.click("#cell-crossings .menu summary");
      await frame.click(`#cell-crossings [data-act=${act}]`);
    }
    const files = (): Promise<{ name: string; text: string; first: number }[]> => page.evaluate(() => (window as unknown as { heard: FromPage[] }).heard.flatMap((message) => message.page === "saveFile" ? [{ name: message.name, text: new TextDecoder().decode(message.bytes), first: message.bytes[0] }] : []));
    await expect.poll(async () => (await files()).length).toBe(3);
    const [csv, svg, png] = (await files()).sort((a, b) => ["csv", "svg", "png"].indexOf(a.name.slice(-3)) - ["csv", "svg", "png"].indexOf(b.name.slice(-3)));
    const rows = csv.text.trim().split("\r\n");
    expect(rows[0]).toBe("time,crossings");
    expect(rows.length).toBe(201);
    const level = (i: number): number => (5200 + 14 * i) * (1 + 0.38 * Math.sin((i - 3) / 12 * 2 * Math.PI) + 0.02 * Math.sin(i * 12.9898) * 3);
    expect(rows[7]).toBe(`2009-07,${level(6)}`);
    expect(svg.text).toMatch(/^<svg[^>]*><title>Vehicle crossings a month<\/title><desc>Crossings rise from[^<]*<\/desc><rect[^>]*fill="#fbfaf7"\/><text[^>]*>Vehicle crossings a month<\/text><svg /);
    expect(svg.text).not.toContain("var(--");
    expect(png.first).toBe(0x89);
    await frame.click("#cell-crossings .menu summary");
    await frame.click("#cell-crossings [data-act=as-table]");
    await expect.poll(() => frame.locator("#cell-crossings .chart-data tbody tr").count()).toBe(200);
    await page.close();
  });

  it("reads a chart's points with the arrow keys", async () => {
    const { page, frame } = await open();
    await frame.focus("#cell-crossings .chart-box");
    await page.keyboard.press("Home");
    await page.keyboard.press("ArrowRight");
    expect(await frame.locator(".chart-label").innerText()).toContain("2009-02");
    expect(await frame.locator("[aria-live=polite]").innerText()).toMatch(/time 2009-02, vehicles [\d,.]+\. 2 of 200\./);
    await page.close();
  });

  it("the sample window moves by keys, by dragging and by typed dates, and says what it cannot take", async () => {
    const { page, frame } = await open();
    const dates = async (): Promise<string[]> => [await frame.locator("#strip-sample").inputValue(), await frame.locator("#strip-sample-to").inputValue()];
    await frame.focus(".strip [data-grip=from]");
    await page.keyboard.press("ArrowRight");
    await expect.poll(dates).toEqual(["2010-02", "2025-08"]);
    await page.keyboard.press("Shift+ArrowRight");
    await expect.poll(dates).toEqual(["2011-02", "2025-08"]);
    const box = await frame.locator(".strip [data-grip=to]").boundingBox();
    if (!box) throw new Error("no handle");
    await page.mouse.move(box.x + box.width / 2, box.y + 20);
    await page.mouse.down(); await page.mouse.move(box.x - 60, box.y + 20, { steps: 6 }); await page.mouse.up();
    await expect.poll(async () => (await dates())[1] < "2025-08").toBe(true);
    await frame.fill("#strip-sample", "2015");
    await page.keyboard.press("Enter");
    await expect.poll(async () => (await dates())[0]).toBe("2015-01");
    await frame.fill("#strip-sample", "1980");
    await page.keyboard.press("Enter");
    await expect.poll(() => frame.locator(".strip .fault").innerText()).toBe("The series has no period 1980; it runs from 2009-01 to 2025-08.");
    await page.close();
  });

  it("stays alive while a cell loops, and offers to stop it", async () => {
    const { page, frame, say } = await open();
    await say({ to: "set", name: "loop", value: 1 });
    await frame.waitForSelector(".notice [data-act=stop]", { timeout: 6000 });
    expect(await frame.locator(".notice").innerText()).toContain("airline has been at work");
    const frames = await frame.evaluate(() => new Promise<number>((resolve) => { let count = 0; const from = performance.now(); const tick = (): void => { count += 1; if (performance.now() - from > 500) resolve(count); else requestAnimationFrame(tick); }; tick(); }));
    expect(frames).toBeGreaterThan(10);
    await say({ to: "unset", name: "loop" });
    await frame.click(".notice [data-act=stop]");
    await expect.poll(() => frame.locator(".notice").count(), { timeout: 6000 }).toBe(0);
    await expect.poll(() => frame.locator("#cell-airline").getAttribute("data-state"), { timeout: 6000 }).toBe("current");
    await page.close();
  });

  it("sends links out to the window around it and follows its own", async () => {
    const { page, frame, heard } = await open();
    await frame.click(".contents a >> nth=2");
    await expect.poll(() => frame.evaluate(() => document.activeElement?.id)).toBe("part-what-is-forecast");
    await frame.click(".notes a[href^=http]");
    expect((await heard("openLink"))[0].href).toBe("https://example.org/season");
    await page.close();
  });

  it("shows the block at a place of the text", async () => {
    const { page, frame, say } = await open();
    const at = await page.evaluate(() => (window as unknown as { heard: FromPage[] }).heard.flatMap((message) => message.page === "states" ? message.cells : []).find((cell) => cell.name === "contest")?.from ?? 0);
    await say({ to: "reveal", position: at + 5 });
    await expect.poll(() => frame.locator("#cell-contest.revealed").count()).toBe(1);
    expect(await frame.locator("#cell-contest").evaluate((element) => { const box = element.getBoundingClientRect(); return box.top >= 0 && box.top < innerHeight; })).toBe(true);
    await page.close();
  });

  it("axe finds nothing serious, light and dark, wide and narrow", async () => {
    const axe = readFileSync(createRequire(import.meta.url).resolve("axe-core/axe.min.js"), "utf8");
    for (const options of [{ width: 1280 }, { width: 390, dark: true }, { width: 1280, dark: true }]) {
      const { page, frame } = await open(options);
      await frame.evaluate(axe);
      const found = await frame.evaluate(async () => (await (window as unknown as { axe: { run(what: unknown, how: unknown): Promise<{ violations: { id: string; impact: string; nodes: { html: string; failureSummary: string }[] }[] }> } }).axe.run(document, { resultTypes: ["violations"] })).violations
        .filter(({ impact }) => impact === "serious" || impact === "critical").map(({ id, nodes }) => `${id}: ${nodes.map((node) => `${node.html.slice(0, 160)} ${node.failureSummary.slice(0, 200)}`).join(" | ")}`));
      expect(found).toEqual([]);
      await page.close();
    }
  });
});
