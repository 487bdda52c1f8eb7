import { execFileSync } from "node:child_process";
import { mkdtempSync, rmSync, writeFileSync } from "node:fs";
import { availableParallelism, tmpdir } from "node:os";
import { join } from "node:path";
import { pathToFileURL } from "node:url";
import type { Browser, Frame } from "playwright-core";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { helperThreads } from "../../runtime/host/helperThreads.ts";
import { firstIndex } from "../../stdlib/forecast/reach.ts";
import { estimateAhead, makeSeries, rule } from "../../stdlib/index.ts";
import { command, data, launch, openDesk, pageOf, serve } from "./deskOpen.ts";

// A comparison at held-out origins as its reader meets it: on the desk, and in an exported file without a network.

const load = "# Proof\n\n```load: sold\nfile: \"sold.csv\"\nunit: \"t\"\n```\n\n";
const proof = `${load}\`\`\`compare: contest\nmodels: [rule.naive(sold), rule.seasonalNaive(sold)]\norigins: 12\nhorizon: 6\n\`\`\`\n`;
/** Twenty years, so that the searches are long enough to be met at work on any machine. */
const years = ["month,sold", ...Array.from({ length: 480 }, (_, i) => `${1980 + Math.floor(i / 12)}-${String((i % 12) + 1).padStart(2, "0")},${(200 + i + 30 * Math.sin((i * Math.PI) / 6) + ((i * 7919) % 17)).toFixed(1)}`)].join("\n");
const long = `${load}\`\`\`compare: contest\nmodels: {damped: rule.smoothing(sold, {trend: "additive", season: "additive", damped: true}), multiplied: rule.smoothing(sold, {trend: "multiplicative", season: "multiplicative"})}\norigins: 180\nhorizon: 4\n\`\`\`\n
The best is [neither](=contest.best.label).\n\n\`\`\`claims:\n"one of the two is best": contest.best.label === "damped" || contest.best.label === "multiplied"\n\`\`\`\n`;

let browser: Browser;
beforeAll(async () => { browser = await launch(); });
afterAll(async () => { await browser.close(); });

/** Moves the picked origin by keys and by pointer; the words follow, and nothing is computed. */
async function moveOrigin(frame: Frame): Promise<void> {
  const scale = frame.locator(".live-page #cell-contest .pick input"), words = frame.locator(".live-page #cell-contest .pick-words"), drawn = frame.locator(".live-page #cell-contest figure:has(.pick) svg");
  await scale.scrollIntoViewIfNeeded();
  await drawn.waitFor();
  await expect.poll(() => words.innerText()).toMatch(/^From 2022-06 the forecasts missed by .+ t on average, more than from \d+ of the other 11 origins\. Of 6 values that came, \d lay in the 50% band and \d lay in the 90% band\.$/);
  const before = await drawn.innerHTML();
  await scale.focus();
  await frame.page().keyboard.press("ArrowLeft");
  await expect.poll(() => words.innerText()).toMatch(/^From 2022-05 the forecasts missed by /);
  expect(await scale.getAttribute("aria-valuetext")).toMatch(/^2022-05\. From 2022-05 /);
  await expect.poll(() => drawn.innerHTML()).not.toBe(before);
  await frame.page().keyboard.press("Home");
  await expect.poll(() => words.innerText()).toMatch(/^From 2021-07 /);
  const box = (await scale.boundingBox())!;
  await frame.page().mouse.click(box.x + box.width - 3, box.y + box.height / 2);
  await expect.poll(() => words.innerText()).toMatch(/^From 2022-06 /);
  await expect.poll(() => drawn.innerHTML()).toBe(before);
  // It is a view of what is there: no cell was at work, and no setting has moved.
  expect(await frame.locator(".live-page #cell-contest").getAttribute("data-state")).toBe("current");
  expect(await frame.locator(".strip-moved").count()).toBe(0);
}

describe("the origin in the picture of forecasts is the reader's to move", () => {
  it("on the desk", async () => {
    const served = await serve(proof, { "sold.csv": data }), context = await browser.newContext({ viewport: { width: 1280, height: 900 } });
    const { frame, faults } = await openDesk(context, served.url);
    await moveOrigin(frame);
    expect(faults).toEqual([]);
    await context.close();
    await served.stop();
  });

  it("in an exported file, whose still page says what its picture shows", async () => {
    const folder = mkdtempSync(join(tmpdir(), "lagbook-proof-"));
    writeFileSync(join(folder, "n.md"), proof);
    writeFileSync(join(folder, "sold.csv"), data);
    execFileSync(process.execPath, [command, "page", "n.md"], { cwd: folder });
    const context = await browser.newContext({ offline: true, viewport: { width: 1280, height: 900 } }), page = await context.newPage();
    await page.goto(pathToFileURL(join(folder, "n.html")).href);
    expect(await page.locator("#still .pick-words").first().innerText()).toMatch(/^From 2022-06 the forecasts missed by /);
    await page.waitForSelector("html.live");
    await moveOrigin((await (await page.waitForSelector("#live-place iframe")).contentFrame())!);
    await context.close();
    rmSync(folder, { recursive: true, force: true });
  });
});

describe("long work", () => {
  it("is helped by threads on the command line, which give what would be made where it is needed", async () => {
    const series = makeSeries({ name: "sold", every: "P1M", start: "2000-01", values: Float64Array.from({ length: 60 }, (_, t) => 100 + t + 9 * Math.sin(t)) });
    const shared = { models: [{ model: rule.smoothing(series, { trend: "additive" }), earliest: firstIndex(series) }], slides: false }, item = { key: "k", model: 0, seen: { from: firstIndex(series), to: firstIndex(series) + 40 } };
    const [helper] = helperThreads(1);
    const answer = await new Promise((resolve) => { helper.listen(resolve); helper.post({ to: "help", task: "estimates", shared, item }); });
    helper.end();
    expect(answer).toEqual({ from: "helped", key: "k", made: { value: structuredClone(estimateAhead(shared)(item)) } });
  });

  it("tells how far it is, ends early when told to, decides nothing then, and goes on from where it was", async () => {
    const served = await serve(long, { "sold.csv": years }), context = await browser.newContext({ viewport: { width: 1280, height: 900 } }), page = await context.newPage();
    const faults: string[] = [];
    page.on("console", (message) => { if (message.type() === "error") faults.push(message.text()); });
    await page.goto(served.url);
    const frame = page.frameLocator("#frame"), cell = frame.locator("#cell-contest");
    await expect.poll(() => cell.locator(".cell-progress").innerText(), { timeout: 60_000 }).toMatch(/\d+ of 720 \w+, (about \d+ s left|about \d+ min left|nearly done)/);
    // Other cores help with what takes long: the engine's worker has started others of its own program.
    if (availableParallelism() > 1) await expect.poll(() => page.workers().length, { timeout: 60_000 }).toBeGreaterThan(1);
    await cell.locator("button.stop").click();
    await cell.getByRole("button", { name: "go on" }).waitFor();
    expect(await cell.locator(".cell-remark").innerText()).toMatch(/^Ended early by hand, after \d+ of 720\. Claims and live numbers that read it are undecided\./);
    expect(await cell.locator(".tone-caution").first().innerText()).toMatch(/Stopped early: scored on the first \d+ of 180 origins/);
    expect(await frame.locator(".claim").innerText()).toMatch(/undecided[\s\S]*`contest` was ended early, after \d+ of 720/);
    expect(await frame.locator(".live.undecided").count()).toBe(1);
    await cell.getByRole("button", { name: "go on" }).click();
    await expect.poll(() => frame.locator(".claim").innerText(), { timeout: 120_000 }).toMatch(/^holds/);
    expect(await cell.locator(".cell-remark").count()).toBe(0);
    await pageOf(page);
    await expect.poll(() => page.workers().length).toBe(1);
    expect(faults).toEqual([]);
    await context.close();
    await served.stop();
  });
});
