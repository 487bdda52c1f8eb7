// What the text of a notebook says: cells, options, live numbers and problems, each with its place.

import type { Root } from "mdast";

/** Half open, counted from 0, in UTF-16 units of the text. */
export interface Place { readonly from: number; readonly to: number }

/** What was found, where, and what to try. Line and column count from 1. */
export interface Problem extends Place {
  readonly code: string;
  readonly severity: "error" | "note";
  readonly line: number; readonly column: number;
  /** Index of the cell concerned in `cells`; null for prose. */
  readonly cell: number | null;
  readonly message: string;
}

/** The part of a kind that the text needs to know. */
export interface Shape {
  readonly name: string;
  readonly body: "options" | "names" | "claims" | "code";
  /** Of an option's `type` only this is read: whether a text may stand there. */
  readonly options: Readonly<Record<string, { readonly required?: true; readonly taken?: "value" | "name" | "expression"; readonly type?: unknown }>>;
  readonly control?: { readonly keeps: readonly string[] };
}

/** One option, one named expression, or one claim. */
export interface OptionText extends Place {
  readonly name: string;
  readonly namePlace: Place;
  /** The expression's source and place (comments around it left out). */
  readonly source: string;
  readonly expression: Place;
  /** Identifiers that the expression reads and does not bind itself. Empty when it does not parse. */
  readonly reads: readonly string[];
  readonly line: number;
}

export interface CellText extends Place {
  readonly index: number;
  readonly kind: string;
  readonly name: string | null;
  readonly namePlace: Place | null;
  /** 1-based line of the opening fence. */
  readonly line: number;
  readonly body: Place;
  readonly options: readonly OptionText[];
  /** `script`: names it exports, and free names that it reads. */
  readonly exports: readonly string[];
  readonly reads: readonly string[];
  /** Its own problems that keep it from running. */
  readonly broken: boolean;
}

export interface LiveNumber extends Place {
  readonly index: number;
  /** The decoded text after the `=`. */
  readonly expression: string;
  readonly reads: readonly string[];
  /** The text as last accepted, and its place. */
  readonly saved: string; readonly savedPlace: Place;
  /** d3-format pattern from the link's title; null where the text's own form is the pattern. */
  readonly pattern: string | null;
  readonly line: number; readonly column: number;
}

/** A top-level block in the order of the text: prose or a cell. */
export type Block =
  | { readonly block: "prose"; readonly from: number; readonly to: number; readonly node: Root["children"][number]; readonly numbers: readonly number[] }
  | { readonly block: "cell"; readonly from: number; readonly to: number; readonly cell: number };

export interface Notebook {
  readonly text: string;
  readonly tree: Root;
  readonly title: string;
  readonly blocks: readonly Block[];
  readonly cells: readonly CellText[];
  readonly numbers: readonly LiveNumber[];
  readonly problems: readonly Problem[];
}

/** Replace `from..to` by `insert`. */
export interface Edit extends Place { readonly insert: string }
