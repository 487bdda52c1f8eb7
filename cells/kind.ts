// The contract between a kind of cell and the notebook around it.

import type { Part } from "./parts/part.ts";

/** What an option takes. Checking, completion and help are read from it. */
export type OptionType =
  | "series" | "number" | "integer" | "boolean" | "text" | "time" | "level" | "any"
  /** A whole number of lags, or a list of lags. */
  | "lags"
  | "fit"
  /** A fit, a rule or a ranked row of `compare`. */
  | "forecaster"
  /** `{from, to}` or a window cell's value. */
  | "window"
  | "list" | "object" | "rows"
  | { readonly oneOf: readonly (string | number | boolean)[] }
  | { readonly anyOf: readonly OptionType[] }
  | { readonly listOf: OptionType };

export interface Option {
  readonly type: OptionType;
  readonly sentence: string;
  readonly required?: true;
  readonly default?: unknown;
  readonly min?: number;
  readonly max?: number;
  /** How the author's expression is taken. "value" (the default): evaluated. "name": the name of a cell, not its value
   *  (`sweep.over`). "expression": not evaluated; `context.expression` gives its source (`sweep.measure`). */
  readonly taken?: "value" | "name" | "expression";
  /** Example text that completion inserts after the colon. */
  readonly example?: string;
  /** What to write for a value that a common slip gives; null for any other. */
  readonly slip?: (value: unknown) => string | null;
}

export type OptionTable = Readonly<Record<string, Option>>;

/** What a running cell may ask of its surroundings. */
export interface RunContext {
  /** The cell's name; null where it has none. */
  readonly name: string | null;
  /** The setting a reader moved this control to; undefined when it stands where the text has it. */
  readonly setting: unknown;
  /** Source text of each given option's expression, for labels ("airline" of `models: [airline]`). */
  readonly source: Readonly<Record<string, string>>;
  /** Reads a file inside the notebook's folder. Rejects with a message for the reader. */
  read(file: string): Promise<Uint8Array>;
  /** Aborted when newer work has overtaken this. */
  readonly signal: AbortSignal;
  /** Says how far long work is; `total` may be unknown (0). */
  progress(done: number, total: number, what?: string): void;
  /** Lets newer messages in; rejects when this work has been overtaken. Call it between slices of a few milliseconds. */
  breathe(): Promise<void>;
  /** Whether the reader asked this work to end early. Work that asks keeps what it has done, and its result says how far it
   *  came; work that never asks is broken off, and has no result. */
  stopped(): boolean;
  /** What this cell computed from the same content in one of its last runs, or what `make` gives, which is then kept.
   *  The key must say all that the value hangs on. */
  recall<T>(key: string, make: () => T): T;
  /** Says what will be recalled, in the order of need, as plain data: other cores may make it before, where there are any and
   *  the work is long. @param task one of the language's `ahead` tasks */
  ahead(task: string, shared: unknown, items: readonly { readonly key: string }[]): void;
  /** A remark shown with the cell (rows dropped, gaps found). */
  note(text: string): void;
  /** Runs a `script` cell's source, isolated; gives its exports. Rejects where code is not allowed. */
  importCode(source: string, inputs: Readonly<Record<string, unknown>>): Promise<Readonly<Record<string, unknown>>>;
  /** Evaluates an expression off to the side with one control at another value (`sweep`). */
  recompute(control: string, value: unknown, expression: string): Promise<unknown>;
  /** The named control's list of values worth trying, and its present one (`sweep`). */
  control(name: string): { readonly kind: string; readonly values: readonly unknown[]; readonly at: unknown };
}

export interface ShowContext {
  readonly name: string | null;
  /** Pixels a figure may take across: thin long columns to it, extremes kept. */
  readonly width: number;
}

/** A fault in one option, in words for the notebook's author. */
export class OptionError extends Error {
  readonly option: string | null;
  constructor(option: string | null, message: string) { super(message); this.name = "OptionError"; this.option = option; }
}

export interface Kind<Options = never, Result = unknown> {
  readonly name: string;
  /** What it does, in one sentence. */
  readonly sentence: string;
  readonly options: OptionTable;
  /** What stands in the body: options; any names with expressions ("values", "chart"); claims in quotes; ECMAScript. */
  readonly body: "options" | "names" | "claims" | "code";
  /** A control: must have a name; `keeps` are the options that a kept setting rewrites. */
  readonly control?: { readonly keeps: readonly string[] };
  /** Also a function with the options as an object. */
  readonly callable?: true;
  /** A first body for completion to insert. */
  readonly example: string;
  run(options: Options, context: RunContext): Result | Promise<Result>;
  show(result: Result, context: ShowContext): readonly Part[];
  /** What expressions see of a result, where `show` needs more than that: a slider's bare number. Left out: the result itself. */
  value?(result: Result): unknown;
}

/** A library function, as the language sees it. */
export interface LibraryFunction {
  readonly name: string;            // "acf", "rule.naive"
  readonly signature: string;       // "acf(series, lags)"
  readonly sentence: string;
  readonly topic: string;
  readonly call: (...given: readonly unknown[]) => unknown;
}

/** What `run` is given, by `body`:
 *  - "options": the options after `checkOptions`: defaults filled in, null = left out.
 *  - "names": every named expression's value (the table's own options checked).
 *  - "claims": `Record<claim, ClaimOutcome>`, in the order of the text.
 *  - "code": a `CodeBody`; the kind calls `context.importCode(source, inputs)`. */
export interface ClaimOutcome { readonly holds: boolean | null; readonly message?: string }
export interface CodeBody { readonly source: string; readonly inputs: Readonly<Record<string, unknown>> }

/** All that the engine is told about the language: `cells/index.ts` exports one as `language`. */
export interface Language {
  readonly kinds: readonly Kind<never, unknown>[];
  readonly library: readonly LibraryFunction[];
  /** Names with a fixed value besides `NaN`, `Infinity` and `free` (which is the text "free"). */
  readonly constants: Readonly<Record<string, unknown>>;
  /** Tasks that may be done on another core: given what the items of one job share, the function that makes one item. */
  readonly ahead?: Readonly<Record<string, (shared: never) => (item: never) => unknown>>;
  /** `checkOptions` of cells/check.ts. `given` holds what the author wrote, null = not given.
   *  `sources` are the options' expressions, where there are any, for messages that say what to write.
   *  @throws OptionError */
  check(kind: { readonly name: string; readonly body: Kind["body"]; readonly options: OptionTable }, given: Readonly<Record<string, unknown>>, sources?: Readonly<Record<string, string>>): Readonly<Record<string, unknown>>;
}
