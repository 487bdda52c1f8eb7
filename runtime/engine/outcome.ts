// What a run of a cell gives: a value, or why there is none.

import type { ClaimOutcome } from "../../cells/kind.ts";

/** A place inside a cell that stays true when the cell moves: in an option's expression, or (option null) in the cell's body. */
export interface PlaceInCell { readonly option: string | null; readonly from: number; readonly to: number | null }

export interface Done {
  readonly ok: true;
  /** What `show` gets. */
  readonly result: unknown;
  /** What expressions see. */
  readonly value: unknown;
  readonly notes: readonly string[];
  /** A `claims` cell's conclusions, in the order of the text. */
  readonly claims: readonly (ClaimOutcome & { readonly claim: string })[] | null;
  /** Set where it rests on work that the reader ended early: no claim or number is decided by it. */
  readonly cutShort: CutShort | null;
}

/** The cell whose work was ended early, and how far it had come. */
export interface CutShort { readonly root: string; readonly done: number; readonly total: number }

export interface NotDone {
  readonly ok: false;
  /** "blocked": by the cell `root`, which failed. */
  readonly state: "failed" | "blocked";
  readonly root: string;
  readonly message: string;
  readonly at: PlaceInCell | null;
  readonly notes: readonly string[];
}

export type Outcome = Done | NotDone;

/** Whether two plain values are the same to any reader: used for controls, so that a move to where they stand changes nothing. */
export function sameData(a: unknown, b: unknown): boolean {
  if (Object.is(a, b)) return true;
  if (typeof a !== "object" || typeof b !== "object" || a === null || b === null) return false;
  const keys = Object.keys(a);
  return Array.isArray(a) === Array.isArray(b) && keys.length === Object.keys(b).length && keys.every((key) => Object.hasOwn(b, key) && sameData(Reflect.get(a, key), Reflect.get(b, key)));
}

/** What rests on work that was cut short is cut short too. */
export function withCut(outcome: Outcome, own: CutShort | null, inputs: readonly Outcome[]): Outcome {
  if (!outcome.ok) return outcome;
  const cutShort = own ?? inputs.reduce<CutShort | null>((found, input) => found ?? (input.ok ? input.cutShort : null), null);
  return cutShort === null ? outcome : { ...outcome, cutShort };
}
