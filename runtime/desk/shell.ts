// The script of an exported file. The file shows a still page, printed when it was made; this puts the live page in its
// place as soon as that has computed everything, and keeps the still in step with it for printing.

import type { FromPage, ToPage } from "../page/protocol.ts";
import { cleanStill } from "./cleanStill.ts";
import { fromDense } from "./dense.ts";
import { saveFile } from "./saveFile.ts";
import { openLink } from "./openLink.ts";

/** What an exported file carries beside its still page. Bytes are dense text of gzip. */
export interface Carried {
  readonly text: string;
  readonly settings: readonly { readonly name: string; readonly value: unknown }[];
  readonly allowCode: boolean;
  readonly files: Readonly<Record<string, { readonly bytes: string } | { readonly reason: string }>>;
}

async function start(): Promise<void> {
  const carried = JSON.parse(contentOf("carried")) as Carried;
  const still = document.getElementById("still"), place = document.getElementById("live-place");
  if (!still || !place) return;
  const frame = document.createElement("iframe");
  frame.setAttribute("sandbox", "allow-scripts");
  frame.title = document.title;
  frame.srcdoc = new TextDecoder().decode(await unpacked(contentOf("live")));
  const post = (message: ToPage): void => { frame.contentWindow?.postMessage(message, "*"); };
  let shown = false;
  window.addEventListener("message", (event: MessageEvent<unknown>) => {
    if (event.source !== frame.contentWindow || typeof event.data !== "object" || event.data === null || !("page" in event.data)) return;
    hear(event.data as FromPage);
  });
  place.append(frame);

  function hear(message: FromPage): void {
    switch (message.page) {
      case "ready": greet(); return;
      case "needFile": void send(message.file); return;
      case "drawn": show(); return;
      case "still": still?.replaceChildren(cleanStill(message.html)); return;
      case "saveFile": saveFile(message); return;
      case "openLink": openLink(message.href); return;
    }
  }

  function greet(): void {
    post({ to: "canEdit", canEdit: false });
    post({ to: "sendStills" });
    post({ to: "allowCode", allow: carried.allowCode });
    for (const { name, value } of carried.settings) post({ to: "set", name, value });
    post({ to: "text", version: 1, text: carried.text });
  }

  async function send(file: string): Promise<void> {
    const found = Object.hasOwn(carried.files, file) ? carried.files[file] : { reason: `"${file}" is not in this page: it was not read when the page was made.` };
    post("bytes" in found ? { to: "file", file, bytes: await unpacked(found.bytes) } : { to: "file", file, bytes: null, reason: found.reason });
  }

  /** The live page takes the still one's place, at the same place of the text. */
  function show(): void {
    if (shown) return;
    shown = true;
    const block = blockInView();
    document.documentElement.classList.add("live");
    if (block !== null) post({ to: "reveal", position: block });
  }
}

/** Place in the text of the block at the top of the view; null at the top of the page. */
function blockInView(): number | null {
  if (window.scrollY < 80) return null;
  for (const block of document.querySelectorAll<HTMLElement>("#still [data-from]")) {
    if (block.getBoundingClientRect().bottom > 80) return Number(block.dataset.from);
  }
  return null;
}

function contentOf(id: string): string { return document.getElementById(id)?.textContent ?? ""; }

async function unpacked(text: string): Promise<Uint8Array> {
  const stream = new Blob([fromDense(text)]).stream().pipeThrough(new DecompressionStream("gzip"));
  return new Uint8Array(await new Response(stream).arrayBuffer());
}

// A browser without what the live page needs keeps the still one, which is complete.
start().catch((error: unknown) => {
  const note = document.getElementById("still-note");
  if (note) note.textContent = `The controls of this page could not be started in this browser (${error instanceof Error ? error.message : String(error)}); everything else is here.`;
});
