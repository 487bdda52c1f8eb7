import { readFileSync, renameSync, rmSync, writeFileSync } from "node:fs";
import { join } from "node:path";
import axe from "axe-core";
import type { Browser, BrowserContext } from "playwright-core";
import { afterAll, afterEach, beforeAll, beforeEach, describe, expect, it } from "vitest";
import { data, launch, notebook, openDesk, pageOf, serve, textOf, typeAfter } from "./deskOpen.ts";
import type { Served } from "./deskOpen.ts";

// The desk in real Chromium, with the built command behind it and a real file on disk.

let browser: Browser, context: BrowserContext, served: Served;
beforeAll(async () => { browser = await launch(); });
afterAll(async () => { await browser.close(); });
beforeEach(async () => { context = await browser.newContext({ viewport: { width: 1280, height: 800 } }); served = await serve(); });
afterEach(async () => { await context.close(); await served.stop(); });

const onDisk = (): string => readFileSync(served.path, "utf8");

describe("the desk", () => {
  it("shows text and page side by side without a fault under its policy", async () => {
    const { page, frame, faults } = await openDesk(context, served.url);
    expect(await page.locator("#name").innerText()).toBe("n.md");
    expect(await textOf(page)).toContain("# Sales");
    expect(await frame.locator("h1").innerText()).toBe("Sales");
    expect(await frame.locator(".live.agrees").count()).toBe(2);
    expect(faults).toEqual([]);
  });

  it("follows an edit of the text, marks it unsaved, and saves by keyboard to the byte", async () => {
    const { page, frame } = await openDesk(context, served.url);
    await typeAfter(page, "The last line.", " And one more.");
    await expect.poll(() => frame.locator("body").innerText()).toContain("And one more.");
    await expect.poll(() => page.locator("#dirty").isVisible()).toBe(true);
    expect(onDisk()).toBe(notebook);
    await page.keyboard.press("Control+s");
    await expect.poll(() => page.locator("#said").innerText()).toMatch(/^Saved /);
    expect(onDisk()).toBe(notebook.replace("The last line.", "The last line. And one more."));
    expect(await page.locator("#dirty").isVisible()).toBe(false);
  });

  it("recomputes what an edited option changes", async () => {
    const { page, frame } = await openDesk(context, served.url);
    await page.locator(".cm-line").filter({ hasText: "at: 1" }).click();
    await page.keyboard.press("End");
    await page.keyboard.press("Backspace");
    await page.keyboard.type("3");
    await expect.poll(() => frame.locator(".live.moved").first().innerText()).toContain("6");
  });

  it("keeps a moved setting as one change of the text that undo takes back", async () => {
    const { page, frame } = await openDesk(context, served.url);
    const slider = frame.locator("#cell-q input[type=range]");
    await slider.focus();
    await page.keyboard.press("ArrowRight");
    await expect.poll(() => frame.locator(".live.moved").first().innerText()).toContain("4");
    expect(await page.locator("#dirty").isVisible()).toBe(false);
    await frame.locator("#cell-q").getByRole("button", { name: /keep/i }).click();
    await expect.poll(() => textOf(page)).toContain("at: 2");
    await expect.poll(() => page.locator("#dirty").isVisible()).toBe(true);
    await frame.locator("body").press("Control+z");
    await expect.poll(() => textOf(page)).toContain("at: 1");
    await expect.poll(() => page.locator("#dirty").isVisible()).toBe(false);
  });

  it("accepts a moved number into the text", async () => {
    writeFileSync(served.path, notebook.replace("[60]", "[59]"));
    const { page, frame } = await openDesk(context, served.url);
    await frame.locator(".live.moved").getByRole("button").first().click();
    await expect.poll(() => textOf(page)).toContain("[60](=sold.n)");
    await page.keyboard.press("Control+s");
    await expect.poll(onDisk).toBe(notebook);
  });

  it("goes from an output to its source and back", async () => {
    const { page, frame } = await openDesk(context, served.url);
    await frame.locator("#cell-model .cell-name").click();
    await expect.poll(() => page.evaluate(() => document.querySelector(".cm-activeLine")?.textContent)).toBe("```fit: model");
    await page.setViewportSize({ width: 1280, height: 420 });
    await frame.evaluate(() => { scrollTo(0, 0); });
    await page.locator(".cm-line").filter({ hasText: "The last line." }).click();
    await expect.poll(() => frame.evaluate(() => scrollY)).toBeGreaterThan(200);
  });

  it("underlines a problem as it is typed, says it, counts it, and lets the rest live", async () => {
    const { page, frame } = await openDesk(context, served.url);
    await page.locator(".cm-line").filter({ hasText: "ma: q" }).click();
    await page.keyboard.press("End");
    await page.keyboard.type("q");
    await expect.poll(() => page.locator(".cm-lintRange-error").count()).toBe(1);
    expect(await page.locator("#troubles").innerText()).toBe("1 problem");
    await expect.poll(() => frame.locator("#cell-model").getAttribute("data-state")).toBe("failed");
    expect(await frame.locator("#cell-twice").getAttribute("data-state")).toBe("current");
    await page.keyboard.press("Backspace");
    await expect.poll(() => page.locator(".cm-lintRange-error").count()).toBe(0);
    expect(await page.locator("#troubles").isVisible()).toBe(false);
  });

  it("completes kinds, options and names, and explains them", async () => {
    const { page } = await openDesk(context, served.url);
    await typeAfter(page, "The last line.", "\n\n```forec");
    await page.waitForSelector(".cm-tooltip-autocomplete");
    expect(await page.locator(".cm-completionLabel").first().innerText()).toBe("forecast");
    await page.waitForTimeout(120);
    await page.keyboard.press("Enter");
    await expect.poll(() => textOf(page)).toMatch(/```forecast: forecast1\n/);
    await page.locator(".cm-line").filter({ hasText: "ma: q" }).click();
    await page.keyboard.press("End");
    await page.keyboard.type("\nmeth");
    await page.waitForSelector(".cm-tooltip-autocomplete");
    expect(await page.locator(".cm-completionLabel").first().innerText()).toBe("method");
    await page.keyboard.press("Escape");
    await page.locator(".cm-line").filter({ hasText: "series: sold" }).first().getByText("series").hover();
    await expect.poll(() => page.locator(".cm-help").count()).toBe(1);
    expect(await page.locator(".cm-help").innerText()).toMatch(/series/);
  });

  it("brings unsaved text back after a reload, and after the tab is gone", async () => {
    const first = await openDesk(context, served.url);
    await typeAfter(first.page, "The last line.", " Unsaved.");
    await expect.poll(() => first.page.locator("#dirty").isVisible()).toBe(true);
    first.page.on("dialog", (dialog) => { void dialog.accept(); });
    await first.page.reload();
    await expect.poll(() => textOf(first.page)).toContain("The last line. Unsaved.");
    expect(await first.page.locator("[data-notice=draft]").innerText()).toMatch(/Unsaved text .* is back/);
    await first.page.close({ runBeforeUnload: false });
    const second = await openDesk(context, served.url);
    await expect.poll(() => textOf(second.page)).toContain("The last line. Unsaved.");
    expect(onDisk()).toBe(notebook);
    await second.page.locator("[data-notice=draft]").getByRole("button", { name: "Use the file" }).click();
    await expect.poll(() => textOf(second.page)).not.toContain("Unsaved.");
    await second.page.locator(".cm-content").focus();
    await second.page.keyboard.press("Control+z");
    await expect.poll(() => textOf(second.page)).toContain("Unsaved.");
  });

  it("reads the file again when another editor replaces it, and follows its data", async () => {
    const { page, frame } = await openDesk(context, served.url);
    writeFileSync(join(served.folder, "other"), notebook.replace("# Sales", "# Sales of wood"));
    renameSync(join(served.folder, "other"), served.path);
    await expect.poll(() => frame.locator("h1").innerText(), { timeout: 5000 }).toBe("Sales of wood");
    expect(await page.locator("#dirty").isVisible()).toBe(false);
    writeFileSync(join(served.folder, "sold.csv"), `${data}\n2023-01,300\n`);
    await expect.poll(() => frame.locator(".live.moved").first().innerText(), { timeout: 5000 }).toContain("61");
  });

  it("merges a change on disk into unsaved text where they do not conflict", async () => {
    const { page } = await openDesk(context, served.url);
    await typeAfter(page, "The last line.", " Mine.");
    writeFileSync(served.path, notebook.replace("# Sales", "# Theirs"));
    await expect.poll(() => textOf(page), { timeout: 5000 }).toContain("# Theirs");
    expect(await textOf(page)).toContain("The last line. Mine.");
    await page.keyboard.press("Control+s");
    await expect.poll(onDisk).toBe(notebook.replace("# Sales", "# Theirs").replace("The last line.", "The last line. Mine."));
  });

  it("shows both texts where they conflict, and writes nothing until the author has chosen", async () => {
    const { page } = await openDesk(context, served.url);
    await typeAfter(page, "The last line.", " Mine.");
    const theirs = notebook.replace("The last line.", "The last line. Theirs.");
    writeFileSync(served.path, theirs);
    await page.waitForSelector("#choices[open]", { timeout: 5000 });
    expect(await page.locator("#choices pre").allInnerTexts()).toEqual(["The last line. Mine.\n", "The last line. Theirs.\n"]);
    await page.getByRole("button", { name: "Decide later" }).click();
    await page.locator(".cm-content").focus();
    await page.keyboard.press("Control+s");
    await page.waitForSelector("#choices[open]");
    expect(onDisk()).toBe(theirs);
    await page.getByLabel("Both, yours first").check();
    await page.getByRole("button", { name: "Use this text" }).click();
    await expect.poll(onDisk).toBe(notebook.replace("The last line.", "The last line. Mine.\nThe last line. Theirs."));
  });

  it("writes a file again that went away", async () => {
    const { page } = await openDesk(context, served.url);
    rmSync(served.path);
    await page.waitForSelector("[data-notice=gone]", { timeout: 5000 });
    await page.getByRole("button", { name: "Write it again" }).click();
    await expect.poll(() => { try { return onDisk(); } catch { return ""; } }).toBe(notebook);
  });

  it("keeps line ends and a missing last line end as they are", async () => {
    const crlf = notebook.replaceAll("\n", "\r\n").trimEnd();
    writeFileSync(served.path, crlf);
    const { page } = await openDesk(context, served.url);
    await typeAfter(page, "The last line.", "\nNew.");
    await page.keyboard.press("Control+s");
    await expect.poll(onDisk).toBe(`${crlf}\r\nNew.`);
  });

  it("hides either side, moves the divider by keys, and remembers both", async () => {
    const { page } = await openDesk(context, served.url);
    await page.keyboard.press("Alt+Shift+T");
    expect(await page.locator("#text").isVisible()).toBe(false);
    await page.keyboard.press("Alt+Shift+P");
    expect(await page.locator("#frame").isVisible()).toBe(true);
    await page.locator("#showText").click();
    const width = async (): Promise<number> => (await page.locator("#text").boundingBox())?.width ?? 0;
    const before = await width();
    await page.locator("#divider").focus();
    await page.keyboard.press("ArrowRight");
    expect(await width()).toBeGreaterThan(before + 10);
    // The browser learns a frame later that the page's frame has made room for the divider, and until then gives the pointer to it.
    await expect.poll(async () => {
      const box = (await page.locator("#divider").boundingBox())!;
      await page.mouse.move(box.x + 3, 300);
      await page.mouse.down();
      await page.mouse.move(420, 300, { steps: 4 });
      await page.mouse.up();
      return Math.abs(await width() - 420);
    }).toBeLessThan(8);
    await page.reload();
    await page.waitForSelector(".cm-content");
    expect(Math.abs(await width() - 420)).toBeLessThan(8);
  });

  it("shows the page alone at the width of a phone", async () => {
    const { page } = await openDesk(context, served.url);
    await page.setViewportSize({ width: 390, height: 844 });
    expect(await page.locator("#text").isVisible()).toBe(false);
    expect(await page.locator("#frame").isVisible()).toBe(true);
    expect(await page.evaluate(() => document.documentElement.scrollWidth)).toBeLessThanOrEqual(390);
  });

  it("says that the server is gone and keeps the text", async () => {
    const { page } = await openDesk(context, served.url);
    await typeAfter(page, "The last line.", " Kept.");
    await served.stop();
    await page.waitForSelector("[data-notice=lost]", { timeout: 8000 });
    await expect.poll(() => page.evaluate(() => Object.keys(localStorage).filter((key) => key.startsWith("lagbook draft")).map((key) => localStorage.getItem(key)).join())).toContain("Kept.");
    served = await serve();
  });

  it("keeps the editor quick while a script never ends", async () => {
    const { page } = await openDesk(context, served.url);
    await typeAfter(page, "The last line.", "\n\n```script: stuck\nexport const a = (() => { while (true); })();\n```\n\nStill here ");
    await page.keyboard.type("abcdefghij");
    await page.keyboard.press("Control+s");
    await expect.poll(onDisk).toContain("Still here abcdefghij");
  });

  it("has no serious fault of accessibility, light and dark", async () => {
    for (const colorScheme of ["light", "dark"] as const) {
      const { page } = await openDesk(context, served.url);
      await page.emulateMedia({ colorScheme });
      await page.evaluate(axe.source);
      const found = await page.evaluate(async () => {
        const { axe: run } = window as unknown as { axe: { run(context: object, options: object): Promise<{ violations: { id: string; impact: string; nodes: { target: string[]; failureSummary: string }[] }[] }> } };
        const { violations } = await run.run({ include: [["body"]] }, { iframes: false });
        return violations.filter(({ impact }) => impact === "serious" || impact === "critical").map(({ id, nodes }) => `${id}: ${nodes.map(({ target, failureSummary }) => `${target.join(" ")} ${failureSummary}`).join("; ")}`);
      });
      expect(found).toEqual([]);
      await page.close();
    }
  });

  it("answers the frame only inside the desk and nothing without the key", async () => {
    const page = await context.newPage();
    await page.goto(new URL("/", served.url).href);
    expect(await page.locator("body").innerText()).toMatch(/Open the whole address/);
    expect(await pageOf((await openDesk(context, served.url)).page).then((frame) => frame.evaluate(() => self.origin))).toBe("null");
  });
});
