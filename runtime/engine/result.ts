// The whole result of a settled notebook, as `verify --json` prints it.

import type { Problem } from "../text/notebook.ts";
import type { Engine } from "./engine.ts";

export interface VerifyResult {
  /** Version of the notebook language. */
  readonly language: string;
  readonly notebook: string;
  /** All stands: nothing failed, broke, moved or is undecided. */
  readonly ok: boolean;
  /** `line` is that of the cell's fence; `at` is where the fault is, when it has one place. */
  readonly cells: readonly { readonly name: string | null; readonly kind: string; readonly line: number; readonly state: string; readonly message: string | null; readonly at: Spot | null }[];
  /** `message` says why a number is undecided. */
  readonly numbers: readonly { readonly line: number; readonly expression: string; readonly saved: string; readonly now: string | null; readonly value: number | string | boolean | null; readonly agrees: boolean | null; readonly message: string | null }[];
  readonly claims: readonly { readonly line: number; readonly claim: string; readonly holds: boolean | null; readonly message: string | null }[];
  /** Faults of the text that belong to no cell. */
  readonly problems: readonly Remark[];
  /** What an author may have meant otherwise; all may stand for all that. */
  readonly notes: readonly Remark[];
}

/** Counted from 1. */
interface Spot { readonly line: number; readonly column: number }
interface Remark extends Spot { readonly code: string; readonly message: string }

const LANGUAGE_VERSION = "1";

/** @param notebook the file's name. @param engine settled */
export function resultOf(engine: Engine, notebook: string): VerifyResult {
  const cells = engine.cells().map(({ name, kind, line, state, message, at }) => ({ name, kind, line, state, message, at: at === null ? null : { line: at.line, column: at.column } }));
  const numbers = engine.numbers().map(({ line, expression, saved, now, value, state, message }) => ({ line, expression, saved, now, value, agrees: state === "undecided" ? null : state === "agrees", message }));
  const claims = engine.claims().map(({ line, claim, holds, message }) => ({ line, claim, holds, message }));
  const found = engine.notebook()?.problems ?? [];
  const problems = found.filter((each) => each.severity === "error" && each.cell === null).map(remark);
  const notes = found.filter((each) => each.severity === "note").map(remark);
  const ok = problems.length === 0 && cells.every((each) => each.state === "current") && numbers.every((each) => each.agrees === true) && claims.every((each) => each.holds === true);
  return { language: LANGUAGE_VERSION, notebook, ok, cells, numbers, claims, problems, notes };
}

function remark({ line, column, code, message }: Problem): Remark {
  return { line, column, code, message };
}
