// Serves the page with a made-up engine to real Chromium: shared by the browser tests of the page.

import { build } from "esbuild";
import { chromium } from "playwright-core";
import type { Browser, Page } from "playwright-core";
import { join } from "node:path";
import { frameDocument } from "../../../runtime/host/frame.ts";
import { fakeText } from "./fakeNotebook.ts";

const here = import.meta.dirname;
const top = join(here, "../../..");

/** A worker has no document: some packages bring another file for that ("worker" condition). */
async function bundle(entry: string, define: Record<string, string> = {}, conditions: string[] = [], inject: string[] = []): Promise<string> {
  const made = await build({ entryPoints: [entry], bundle: true, write: false, format: "iife", target: "es2022", minify: true, loader: { ".css": "text" }, define, conditions, inject, logLevel: "error" });
  return made.outputFiles[0].text;
}

export interface Served {
  /** The worker's entry; the made-up engine by default. */
  readonly engine?: string;
  readonly inject?: string[];
  readonly define?: Record<string, string>;
  readonly text?: string;
  /** Contents of files that the notebook may read. */
  readonly files?: Readonly<Record<string, string>>;
}

/** The desk's part is played by this outer document: it keeps every message from the page in `heard`. */
export async function outerDocument({ engine: entry = join(here, "fakeEngine.ts"), inject = [], define = {}, text = fakeText, files = {} }: Served = {}): Promise<string> {
  const engine = await bundle(entry, define, ["worker"], inject);
  const inner = frameDocument(await bundle(join(top, "runtime/page/entry.ts")), engine);
  const script = `const frame = document.querySelector("iframe"); window.heard = []; const files = ${JSON.stringify(files).replaceAll("</script", "<\\/script")}; const canEdit = !location.hash.includes("read");
    addEventListener("message", (event) => { if (event.source !== frame.contentWindow) return; heard.push(event.data);
      if (event.data.page === "needFile") { const found = files[event.data.file]; say({ to: "file", file: event.data.file, bytes: found === undefined ? null : new TextEncoder().encode(found) }); }
      if (event.data.page === "ready") { say({ to: "canEdit", canEdit }); say({ to: "text", version: 1, text: ${JSON.stringify(text).replaceAll("</script", "<\\/script")} }); } });
    window.say = (message) => frame.contentWindow.postMessage(message, "*");
    frame.srcdoc = ${JSON.stringify(inner).replaceAll("</script", "<\\/script").replaceAll("<!--", "<\\!--")};`;
  return `<!doctype html><html lang="en"><head><meta charset="utf-8"><meta name="viewport" content="width=device-width"><title>Outer</title><style>html,body,iframe{margin:0;padding:0;border:0;width:100%;height:100%;display:block}</style></head><body><iframe title="page" sandbox="allow-scripts"></iframe><script>${script}</script></body></html>`;
}

export interface Stand { readonly browser: Browser; open(options?: { width?: number; height?: number; dark?: boolean; read?: boolean }): Promise<Page>; close(): Promise<void> }

export async function stand(served: Served = {}): Promise<Stand> {
  const body = await outerDocument(served);
  const browser = await chromium.launch({ executablePath: process.env.CHROMIUM ?? "/usr/bin/chromium", args: ["--no-sandbox", "--disable-gpu", "--disable-quic", "--no-first-run", "--disable-background-networking", "--disable-component-update", "--disable-sync"] });
  return {
    browser,
    async open({ width = 1280, height = 900, dark = false, read = false } = {}) {
      const page = await browser.newPage({ viewport: { width, height }, colorScheme: dark ? "dark" : "light" });
      await page.route("**/*", (route) => route.request().url().startsWith("http://page.test/") ? route.fulfill({ contentType: "text/html", body }) : route.abort());
      await page.goto(`http://page.test/${read ? "#read" : ""}`);
      return page;
    },
    async close() { await browser.close(); },
  };
}
