// The whole result of a settled notebook, as `verify --json` prints it.

import type { Engine } from "./engine.ts";

export interface VerifyResult {
  /** Version of the notebook language. */
  readonly language: string;
  readonly notebook: string;
  /** All stands: nothing failed, broke, moved or is undecided. */
  readonly ok: boolean;
  readonly cells: readonly { readonly name: string | null; readonly kind: string; readonly line: number; readonly state: string; readonly message: string | null }[];
  readonly numbers: readonly { readonly line: number; readonly expression: string; readonly saved: string; readonly now: string | null; readonly value: number | string | boolean | null; readonly agrees: boolean | null }[];
  readonly claims: readonly { readonly line: number; readonly claim: string; readonly holds: boolean | null; readonly message: string | null }[];
  /** Faults of the text that belong to no cell. */
  readonly problems: readonly { readonly line: number; readonly column: number; readonly code: string; readonly message: string }[];
}

export const LANGUAGE_VERSION = "1";

/** @param notebook the file's name. @param engine settled */
export function resultOf(engine: Engine, notebook: string): VerifyResult {
  const cells = engine.cells().map(({ name, kind, line, state, message }) => ({ name, kind, line, state, message }));
  const numbers = engine.numbers().map(({ line, expression, saved, now, value, state }) => ({ line, expression, saved, now, value, agrees: state === "undecided" ? null : state === "agrees" }));
  const claims = engine.claims().map(({ line, claim, holds, message }) => ({ line, claim, holds, message }));
  const problems = (engine.notebook()?.problems ?? []).filter((each) => each.severity === "error" && each.cell === null).map(({ line, column, code, message }) => ({ line, column, code, message }));
  const ok = problems.length === 0 && cells.every((each) => each.state === "current") && numbers.every((each) => each.agrees === true) && claims.every((each) => each.holds === true);
  return { language: LANGUAGE_VERSION, notebook, ok, cells, numbers, claims, problems };
}
