import { build } from "esbuild";
import { join } from "node:path";
import { chromium } from "playwright-core";
import type { Browser, Page } from "playwright-core";
import { afterAll, beforeAll, describe, expect, it } from "vitest";

// The drawing of trees against the plainest witness: after any sequence of trees the document is what one fresh drawing gives.

let browser: Browser; let page: Page;
beforeAll(async () => {
  const top = join(import.meta.dirname, "../..");
  const made = await build({
    stdin: { contents: `import { drawing } from "./runtime/page/dom.ts"; import { h } from "./runtime/page/tree.ts"; import { html } from "./runtime/page/html.ts"; Object.assign(window, { drawing, h, html });`, resolveDir: top, loader: "ts" },
    bundle: true, write: false, format: "iife", logLevel: "error",
  });
  browser = await chromium.launch({ executablePath: process.env.CHROMIUM ?? "/usr/bin/chromium", args: ["--no-sandbox", "--disable-gpu", "--no-first-run"] });
  page = await browser.newPage();
  await page.setContent("<!doctype html><body></body>");
  await page.addScriptTag({ content: made.outputFiles[0].text });
}, 60_000);
afterAll(async () => { await browser.close(); });

describe("drawing", () => {
  it("ends where a fresh drawing would, whatever came before", async () => {
    const wrong = await page.evaluate(() => {
      const { drawing, h } = window as unknown as { drawing: typeof import("../../runtime/page/dom.ts").drawing; h: typeof import("../../runtime/page/tree.ts").h };
      const owner = { mounted: () => undefined, unmounted: () => undefined };
      let seed = 20260711;
      const random = (below: number): number => { seed = (seed * 1103515245 + 12345) % 2147483648; return Math.floor(seed / 65536) % below; };
      type Tree = ReturnType<typeof h>;
      const tree = (depth: number): Tree | string => {
        if (depth === 0 || random(5) === 0) return ["a", "b", "", "c d"][random(4)];
        const keys = new Set<string>();
        const inside = Array.from({ length: random(6) }, () => {
          const child = tree(depth - 1);
          const key = `k${random(9)}`;
          if (typeof child === "string" || random(2) === 0 || keys.has(key)) return child;
          keys.add(key);
          return { ...child, key };
        });
        return h(["p", "div", "span", "svg", "math"][random(5)], { class: ["x", "y", null][random(3)], title: random(2) === 0 ? `t${random(3)}` : null }, inside);
      };
      const list = (): (Tree | string)[] => h("div", {}, Array.from({ length: random(5) }, () => tree(4))).children as (Tree | string)[];
      const failures: string[] = [];
      for (let run = 0; run < 200; run++) {
        const kept = document.createElement("div"); const draw = drawing(kept, owner);
        for (let step = 0; step < 6; step++) {
          const next = list();
          draw(next);
          const fresh = document.createElement("div"); drawing(fresh, owner)(next);
          if (!kept.isEqualNode(fresh)) failures.push(`run ${run}, step ${step}: ${kept.innerHTML} is not ${fresh.innerHTML}`);
        }
      }
      return failures;
    });
    expect(wrong.slice(0, 3)).toEqual([]);
  });

  it("keeps keyed elements, their focus and what is typed, when others come and go", async () => {
    const kept = await page.evaluate(() => {
      const { drawing, h } = window as unknown as { drawing: typeof import("../../runtime/page/dom.ts").drawing; h: typeof import("../../runtime/page/tree.ts").h };
      const place = document.body.appendChild(document.createElement("div"));
      const draw = drawing(place, { mounted: () => undefined, unmounted: () => undefined });
      const row = (key: string): ReturnType<typeof h> => h("p", { key }, h("input", { type: "text", id: key, "data-typing": "yes", value: "old" }));
      draw([row("a"), row("b"), row("c")]);
      const input = document.getElementById("b") as HTMLInputElement;
      input.focus(); input.value = "typed";
      draw([row("z"), row("b"), row("y")]);
      const same = document.getElementById("b") === input && document.activeElement === input && input.value === "typed";
      const before = document.getElementById("z");
      draw([row("y"), row("b"), row("z")]);
      return { same, moved: document.getElementById("z") === before, order: [...place.querySelectorAll("input")].map(({ id }) => id) };
    });
    expect(kept).toEqual({ same: true, moved: true, order: ["y", "b", "z"] });
  });

  it("tells an owner when its element comes and goes, and leaves the inside to it", async () => {
    const said = await page.evaluate(() => {
      const { drawing, h } = window as unknown as { drawing: typeof import("../../runtime/page/dom.ts").drawing; h: typeof import("../../runtime/page/tree.ts").h };
      const heard: string[] = [];
      const place = document.body.appendChild(document.createElement("div"));
      const draw = drawing(place, { mounted: (own, element) => { heard.push(`+${own}`); element.textContent = "own"; }, unmounted: (own) => heard.push(`-${own}`) });
      draw([h("section", { key: "s" }, h("div", { own: "c1", class: "a" }))]);
      draw([h("section", { key: "s" }, h("div", { own: "c1", class: "b" }))]);
      const inside = place.innerHTML;
      draw([h("section", { key: "s" }, h("div", { own: "c2" }))]);
      draw([]);
      return { heard, inside };
    });
    expect(said).toEqual({ heard: ["+c1", "-c1", "+c2", "-c2"], inside: '<section><div class="b">own</div></section>' });
  });
});
