// The document of an exported page: the still page, what it was made of, and packed inside it the live page and its files.

import { gzipSync } from "node:zlib";
import type { Carried } from "../desk/shell.ts";
import { dense } from "../desk/dense.ts";
import { scriptsOf } from "./frame.ts";
import { inlineSafe, pagePolicy } from "./policy.ts";

export interface Provenance {
  readonly notebook: string; readonly notebookHash: string;
  readonly version: string; readonly made: Date;
  readonly data: readonly { readonly file: string; readonly rows: number | null; readonly span: string | null; readonly hash: string }[];
  /** Settings given with `--set`. */
  readonly settings: readonly { readonly name: string; readonly value: unknown }[];
}

export interface ExportParts {
  /** The live page's document, and the same as it is packed. */
  readonly frame: string; readonly live: string;
  readonly shell: string; readonly pageCss: string;
}

export interface Export {
  readonly title: string;
  /** HTML of the still page. */
  readonly still: string;
  readonly carried: Carried;
  readonly provenance: Provenance;
}

export function exportDocument({ title, still, carried, provenance }: Export, { frame, live, shell, pageCss }: ExportParts): string {
  const script = inlineSafe(shell);
  return `<!doctype html>
<html lang="en">
<head>
<meta charset="utf-8">
<meta http-equiv="Content-Security-Policy" content="${pagePolicy([script, ...scriptsOf(frame)])}">
<meta name="viewport" content="width=device-width, initial-scale=1">
<meta name="generator" content="Lagbook ${escape(provenance.version)}">
<title>${escape(title)}</title>
<style>${pageCss.replace(/<\//g, "<\\/")}
${shellCss}</style>
</head>
<body>
<main id="still">${still}</main>
<div id="live-place"></div>
<footer id="made">${madeOf(provenance)}<p id="still-note"></p></footer>
<script type="application/json" id="carried">${JSON.stringify(carried).replaceAll("<", "\\u003c")}</script>
<script type="text/plain" id="live">${live}</script>
<script>${script}</script>
</body>
</html>
`;
}

/** Bytes as dense text of gzip. */
export function pack(content: string | Uint8Array): string {
  return dense(gzipSync(content, { level: 9 }));
}

function madeOf({ notebook, notebookHash, version, made, data, settings }: Provenance): string {
  const time = `${made.toISOString().slice(0, 16).replace("T", " ")} UTC`;
  const list = data.map(({ file, rows, span, hash }) => `<tr><th scope="row">${escape(file)}</th><td>${rows === null ? "" : `${rows.toLocaleString("en")} rows`}</td><td>${escape(span ?? "")}</td><td class="hash">${hash}</td></tr>`).join("");
  const set = settings.length === 0 ? "as the notebook has them" : settings.map(({ name, value }) => `${escape(name)} = ${escape(JSON.stringify(value))}`).join(", ");
  return `<details><summary>Made ${time} with Lagbook ${escape(version)} from ${escape(notebook)}</summary>
<table><thead><tr><th scope="col">Data</th><th scope="col">Rows</th><th scope="col">Span</th><th scope="col">SHA-256</th></tr></thead><tbody>${list}<tr><th scope="row">${escape(notebook)}</th><td></td><td></td><td class="hash">${notebookHash}</td></tr></tbody></table>
<p>Settings when made: ${set}.</p></details>`;
}

/** The live page fills the window above a narrow line that says what it was made of. Until it has drawn what is in view it lies
 *  unseen over the still page: a browser draws nothing in a frame that is out of the window. Print always shows the still page,
 *  which is kept in step with the live one. */
const shellCss = `
#live-place, #live-place iframe { display: none; }
#made { font: 13px/1.5 "Source Sans 3", "Noto Sans", "Segoe UI", Roboto, "Helvetica Neue", Arial, sans-serif; color: var(--ink-soft, #555); border-top: 1px solid var(--rule, #ccc); padding: 8px 20px; margin-top: 24px; }
#made summary { cursor: pointer; }
#made table { border-collapse: collapse; margin: 8px 0; }
#made th, #made td { text-align: left; font-weight: normal; padding: 1px 16px 1px 0; vertical-align: top; }
#made thead th { font-size: 12px; }
#made td:not(.hash), #made tbody th { white-space: nowrap; }
#made .hash { font-family: "DejaVu Sans Mono", "Liberation Mono", Menlo, Consolas, monospace; font-size: 11px; overflow-wrap: anywhere; }
#made p { margin: 2px 0; }
@media screen {
  html.live, html.live body { height: 100%; margin: 0; overflow: hidden; }
  html.live body { display: flex; flex-direction: column; }
  html.live #still { display: none; }
  html.live #live-place { display: block; flex: 1; min-height: 0; }
  html.live #live-place iframe { display: block; width: 100%; height: 100%; border: 0; }
  html.live #made { margin: 0; padding: 3px 20px; max-height: 45vh; overflow: auto; }
}
html:not(.live) #live-place { position: fixed; left: 0; top: 0; width: 100vw; height: 100vh; display: block; visibility: hidden; }
html:not(.live) #live-place iframe { display: block; width: 100%; height: 100%; border: 0; }
@media print {
  #live-place { display: none !important; }
  #made details > * { display: block; }
  #made details::details-content { content-visibility: visible; display: block; height: auto; }
}
`;

function escape(text: string): string {
  return text.replace(/[&<>"']/g, (sign) => `&#${sign.charCodeAt(0)};`);
}
