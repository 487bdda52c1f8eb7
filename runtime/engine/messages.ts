// What goes between the engine and whoever listens: the page, `verify`, the desk. Plain data, fit for structured cloning.

import type { Part } from "../../cells/parts/part.ts";
import type { Root } from "mdast";

export type CellState = "current" | "working" | "waiting" | "blocked" | "failed";

/** One number, text or truth of a cell's value, ready to be put into the prose: the expression and what it gives now. */
export interface Field { readonly expression: string; readonly value: number | string | boolean }

export interface CellReport {
  /** Stable for as long as the cell keeps its name (or, unnamed, its place among unnamed cells of its kind). */
  readonly id: string;
  readonly name: string | null;
  readonly kind: string;
  readonly line: number; readonly from: number; readonly to: number;
  readonly state: CellState;
  /** Why it failed, or what it is blocked by; a note beside a current one. */
  readonly message: string | null;
  /** Where in the text the fault is, when it has one place. */
  readonly at: { readonly line: number; readonly column: number; readonly from: number; readonly to: number } | null;
  /** Remarks: gaps found, rows dropped. */
  readonly notes: readonly string[];
  readonly show: readonly Part[] | null;
  readonly progress: { readonly done: number; readonly total: number; readonly what: string; /** Milliseconds, where the pace so far tells. */ readonly leftMs: number | null } | null;
  readonly fields: readonly Field[] | null;
  /** How many times it has run since the notebook was opened. */
  readonly runs: number;
  /** The reader ended it early, and it can be told to go on. */
  readonly stopped: boolean;
}

export interface NumberReport {
  readonly index: number;
  readonly line: number; readonly from: number; readonly to: number;
  readonly expression: string;
  readonly saved: string;
  /** The value printed in the saved text's own form; null when undecided. */
  readonly now: string | null;
  readonly value: number | string | boolean | null;
  readonly state: "agrees" | "moved" | "undecided";
  readonly message: string | null;
}

export interface ProblemReport { readonly code: string; readonly severity: "error" | "note"; readonly from: number; readonly to: number; readonly line: number; readonly column: number; readonly message: string }

/** A top-level block as the page needs it. `key` changes only when its content does; `node` comes once a key. */
export type BlockReport =
  | { readonly block: "prose"; readonly key: string; readonly from: number; readonly to: number; readonly node?: Root["children"][number]; /** Indexes of its live numbers, in order. */ readonly numbers: readonly number[] }
  | { readonly block: "cell"; readonly key: string; readonly from: number; readonly to: number; readonly cell: string };

/** To the engine. `version` counts texts; answers carry the version that they speak of. */
export type ToEngine =
  | { readonly to: "text"; readonly version: number; readonly text: string }
  | { readonly to: "set"; readonly name: string; readonly value: unknown }
  | { readonly to: "unset"; readonly name: string }
  /** A file that was asked for; null: not there, with the reason. Sent again when it changes on disk. */
  | { readonly to: "file"; readonly file: string; readonly bytes: Uint8Array | null; readonly reason?: string }
  | { readonly to: "width"; readonly width: number }
  | { readonly to: "allowCode"; readonly allow: boolean; readonly reason?: string }
  /** Do not run this cell: it was stopped by hand with its worker, and has failed until its own text changes. Sent before the text to a fresh worker. */
  | { readonly to: "hold"; readonly cell: string }
  /** End this cell's work early, keeping what is done where it can. */
  | { readonly to: "stop"; readonly cell: string }
  /** Run a stopped cell again: it takes up what it has kept. */
  | { readonly to: "goOn"; readonly cell: string }
  | { readonly to: "ping"; readonly beat: number };

export type FromEngine =
  | { readonly from: "outline"; readonly version: number; readonly title: string; readonly blocks: readonly BlockReport[]; readonly problems: readonly ProblemReport[]; /** Definition nodes for footnotes and references, whole. */ readonly definitions: readonly Root["children"][number][] }
  | { readonly from: "cell"; readonly cell: CellReport }
  | { readonly from: "number"; readonly number: NumberReport }
  /** Everything that a change touched has settled; settings that now differ from the text's. */
  | { readonly from: "settled"; readonly version: number; readonly moved: Readonly<Record<string, unknown>> }
  | { readonly from: "need"; readonly file: string }
  | { readonly from: "pong"; readonly beat: number; /** What is running, for "stop this cell". */ readonly running: string | null };
