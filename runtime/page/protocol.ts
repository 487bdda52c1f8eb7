// What goes between the page and the window around it: the desk, or the shell of an exported file.
// Plain data for `postMessage`. The page sits in a sandboxed frame of opaque origin, so neither side checks origins:
// each listens only to the other's window.

import type { CellState, NumberReport, ProblemReport } from "../engine/messages.ts";

export type Theme = "light" | "dark" | "auto";

/** To the page. */
export type ToPage =
  /** The whole text. `version` counts texts; the page's answers carry the version that they speak of. */
  | { readonly to: "text"; readonly version: number; readonly text: string }
  /** A file that the page asked for, or a newer one; null: not there, with the reason. */
  | { readonly to: "file"; readonly file: string; readonly bytes: Uint8Array | null; readonly reason?: string }
  /** Whether `script` cells may run, and what they say where they may not. */
  | { readonly to: "allowCode"; readonly allow: boolean; readonly reason?: string }
  /** A setting, as if the reader had moved the control. */
  | { readonly to: "set"; readonly name: string; readonly value: unknown }
  | { readonly to: "unset"; readonly name: string }
  | { readonly to: "theme"; readonly theme: Theme }
  /** Bring the block at this place of the text into view and mark it for a moment. */
  | { readonly to: "reveal"; readonly position: number }
  /** Whether there is a text to edit: "keep this setting", "accept" and going to the source appear only then. */
  | { readonly to: "canEdit"; readonly canEdit: boolean }
  /** Send the drawn page as HTML from now on, after each time that all has settled: an exported file prints it. */
  | { readonly to: "sendStills" }
  /** Asks for a sign of life. */
  | { readonly to: "alive" }
  /** Start the engine anew (after `script` cells were allowed, say). */
  | { readonly to: "restart" };

/** What the desk needs to know of a cell. */
export interface CellNote {
  readonly id: string; readonly name: string | null; readonly kind: string;
  readonly line: number; readonly from: number; readonly to: number;
  readonly state: CellState; readonly message: string | null;
  readonly at: { readonly line: number; readonly column: number; readonly from: number; readonly to: number } | null;
}

/** From the page. */
export type FromPage =
  /** Ready for messages; send the text now. */
  | { readonly page: "ready" }
  /** The answer to that question. */
  | { readonly page: "alive" }
  | { readonly page: "needFile"; readonly file: string }
  /** Show this place of the text; `focus`: the reader asked for it, so the editor may take the focus. */
  | { readonly page: "goToSource"; readonly from: number; readonly to: number; readonly focus: boolean }
  /** Write this setting into the control's options. */
  | { readonly page: "keep"; readonly name: string; readonly value: unknown }
  /** Write these values into the live numbers of this version of the text. */
  | { readonly page: "accept"; readonly version: number; readonly numbers: readonly { readonly index: number; readonly now: string }[] }
  /** The text as understood: for underlining problems. */
  | { readonly page: "outline"; readonly version: number; readonly title: string; readonly problems: readonly ProblemReport[] }
  /** States of cells, and of live numbers those that are undecided or no longer are; only what changed since the last such message, except that `all` starts afresh. */
  | { readonly page: "states"; readonly version: number; readonly all: boolean; readonly cells: readonly CellNote[]; readonly numbers: readonly NumberReport[] }
  | { readonly page: "settled"; readonly version: number; readonly moved: Readonly<Record<string, unknown>> }
  /** All that the text and the controls say has been computed and drawn. */
  | { readonly page: "drawn" }
  /** Save these bytes as a file (a sandboxed frame cannot). */
  | { readonly page: "saveFile"; readonly name: string; readonly type: string; readonly bytes: Uint8Array }
  /** The reader clicked a link to the outside (http, https or mailto only): open it in a new tab, without opener or referrer. */
  | { readonly page: "openLink"; readonly href: string }
  /** The reader pressed one of the desk's keys (save, undo, …) while the page had the focus. */
  | { readonly page: "key"; readonly key: string; readonly ctrl: boolean; readonly meta: boolean; readonly shift: boolean; readonly alt: boolean }
  /** The page as it stands now, as HTML, for the shell of an exported file to print: sent after it has been asked for (`sendStills`), whenever all has settled and been drawn. */
  | { readonly page: "still"; readonly html: string };

/** The window around the page, as the page sees it. */
export interface ParentLink {
  post(message: FromPage, transfer?: readonly Transferable[]): void;
  /** Calls back for every message from the window around the page. */
  listen(hear: (message: ToPage) => void): void;
}
