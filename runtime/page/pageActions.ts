// What the page does when the reader acts.

import type { Actions } from "./actions.ts";
import { chartCsv, tableCsv } from "./chartData.ts";
import type { Charts } from "./charts.ts";
import { copyText } from "./copyText.ts";
import type { PageState } from "./pageState.ts";
import type { Paces } from "./paces.ts";
import type { FromPage } from "./protocol.ts";
import { fileName, pngOf, standaloneSvg } from "./savePicture.ts";
import { controlOf } from "./settings.ts";
import type { Settings } from "./settings.ts";
import { moveSpan, typedTime } from "./windowControl.ts";
import type { Span, WindowPart } from "./windowControl.ts";
import type { ControlPart, Part } from "../../cells/parts/part.ts";

export interface PageUi {
  canEdit: boolean;
  stripOpen: boolean;
  /** Keys of charts whose data are shown as a table. */
  readonly tables: Set<string>;
  /** Ids of cells whose fields are unfolded. */
  readonly fields: Set<string>;
  /** Where the reader moved the picks of charts, by the chart's key. */
  readonly picks: Map<string, number>;
  /** What is wrong with a typed date, by control. */
  readonly faults: Map<string, string>;
  /** Why the worker stopped; null while it stands. */
  broken: string | null;
}

export interface PageHands {
  readonly root: HTMLElement; readonly state: PageState; readonly ui: PageUi; readonly settings: Settings; readonly charts: Charts;
  post(message: FromPage): void; readonly pace: Paces; announce(words: string): void;
  readonly alone: boolean;
  stop(cell: string): void; goOn(cell: string): void; startAgain(): void;
}

/** Keys with Ctrl or Command that belong to the window around the page. */
const parentKeys = new Set(["s", "z", "y", "e", "b", "o", "p", "\\", "1", "2", "3", "/"]);

export function pageActions(hands: PageHands): Actions & { reveal(position: number): void } {
  const { root, state, ui, settings, charts, post, pace, announce } = hands;

  const control = (name: string): ControlPart | null => controlOf([...state.cells.values()].find((cell) => cell.name === name));
  const windowOf = (name: string): { part: WindowPart; span: Span } | null => {
    const part = control(name);
    return part?.control === "window" ? { part, span: (settings.pending(name) as Span | undefined) ?? part.at } : null;
  };
  const set = (name: string, value: unknown): void => { ui.faults.delete(name); settings.set(name, value); pace.rest(); };
  const partAt = (key: string): Part | null => {
    const cut = key.lastIndexOf("/");
    return state.cells.get(key.slice(0, cut))?.show?.[Number(key.slice(cut + 1))] ?? null;
  };
  const saveBytes = (name: string, type: string, bytes: Uint8Array): void => {
    if (hands.alone) download(name, type, bytes); else post({ page: "saveFile", name, type, bytes });
    announce(`${name} saved`);
  };
  async function save(key: string, as: "svg" | "png" | "csv"): Promise<void> {
    const part = partAt(key);
    if (!part || (part.part !== "chart" && part.part !== "table")) return;
    const words = part.title ?? "table";
    if (as === "csv") { saveBytes(fileName(words, "csv"), "text/csv", new TextEncoder().encode(part.part === "chart" ? chartCsv(part) : tableCsv(part))); return; }
    if (part.part !== "chart") return;
    const drawn = await charts.svg(key);
    if (drawn === null) { announce("The picture is not drawn yet."); return; }
    const svg = standaloneSvg(drawn, part, root);
    if (as === "svg") saveBytes(fileName(words, "svg"), "image/svg+xml", new TextEncoder().encode(svg));
    else saveBytes(fileName(words, "png"), "image/png", await pngOf(svg, 2));
  }

  return {
    source(from, to) { if (ui.canEdit) post({ page: "goToSource", from, to, focus: true }); },
    sourceOfBlock(key) { const block = state.blocks.find((one) => one.key === key); if (block && ui.canEdit) post({ page: "goToSource", from: block.from, to: block.to, focus: true }); },
    accept(index) { const number = state.numbers.get(index); if (number?.now) post({ page: "accept", version: state.version, numbers: [{ index, now: number.now }] }); },
    input(name, given) {
      const part = control(name);
      if (part?.control === "choice") { const value = part.among[given as number]; if (value !== undefined) set(name, value); } else if (part) set(name, given);
    },
    windowTyped(name, end, text) {
      const found = windowOf(name);
      if (!found) return;
      const { times } = found.part;
      const time = typedTime(times, text, end);
      const span = time === null ? null : { ...found.span, [end]: time };
      if (span === null || times.indexOf(span.from) > times.indexOf(span.to)) {
        ui.faults.set(name, span === null ? `The series has no period ${text}; it runs from ${times[0]} to ${times[times.length - 1]}.` : `The window would end before it starts: ${span.from} to ${span.to}.`);
        pace.frame();
      } else set(name, span);
    },
    windowMoved(name, grip, steps, start) { const found = windowOf(name); if (found) set(name, moveSpan(found.part.times, start, grip, steps)); },
    windowAt(name) { const found = windowOf(name); return found ? { span: found.span, periods: found.part.times.length, season: seasonOf(found.part.every) } : null; },
    back(name) { ui.faults.delete(name); settings.unset(name); pace.frame(); },
    allBack() { for (const name of Object.keys(state.moved)) settings.unset(name); ui.faults.clear(); pace.frame(); },
    keep(name) { const part = control(name); if (part) post({ page: "keep", name, value: settings.pending(name) ?? part.at }); },
    strip() { ui.stripOpen = !ui.stripOpen; pace.frame(); },
    copy(text, button) {
      void copyText(text).then((done) => {
        announce(done ? "copied" : "Could not copy; select the text and copy it by hand.");
        const words = button.textContent; button.textContent = done ? "copied" : "select it by hand";
        setTimeout(() => { button.textContent = words; }, 1500);
      });
    },
    stop: hands.stop, goOn: hands.goOn, startAgain: hands.startAgain,
    save(key, as) { save(key, as).catch((error: unknown) => announce(`The picture could not be saved: ${error instanceof Error ? error.message : String(error)}`)); },
    asTable(key) { if (!ui.tables.delete(key)) ui.tables.add(key); pace.frame(); },
    pick(key, at) { ui.picks.set(key, at); pace.frame(); },
    fields(cell, open) { if (open) ui.fields.add(cell); else ui.fields.delete(cell); pace.frame(); },
    link(href) { if (hands.alone) return false; post({ page: "openLink", href }); return true; },
    key(event) {
      const forward = ((event.ctrlKey || event.metaKey) && parentKeys.has(event.key.toLowerCase())) || event.key === "F6";
      if (!forward || hands.alone) return false;
      post({ page: "key", key: event.key, ctrl: event.ctrlKey, meta: event.metaKey, shift: event.shiftKey, alt: event.altKey });
      return true;
    },
    reveal(position) {
      const block = state.blocks.find((one) => one.from <= position && position <= one.to);
      if (!block) return;
      const id = block.block === "cell" ? block.cell : block.key;
      const element = root.querySelector<HTMLElement>(`[data-block="${CSS.escape(id)}"]`);
      if (!element) return;
      const box = element.getBoundingClientRect();
      if (box.top < 0 || box.bottom > window.innerHeight) element.scrollIntoView({ block: box.height > window.innerHeight ? "start" : "center" });
      element.classList.remove("revealed");
      void element.offsetWidth;
      element.classList.add("revealed");
    },
  };
}

/** Periods that a longer step of a window's handle takes. */
function seasonOf(every: string | null): number {
  return ({ P1M: 12, P3M: 4, P1W: 52, P1D: 7, PT1H: 24, P1Y: 10 } as Record<string, number>)[every ?? ""] ?? 10;
}

function download(name: string, type: string, bytes: Uint8Array): void {
  const address = URL.createObjectURL(new Blob([bytes as BlobPart], { type }));
  const link = Object.assign(document.createElement("a"), { href: address, download: name });
  link.click();
  setTimeout(() => URL.revokeObjectURL(address), 10_000);
}
