// Recomputes off to the side what hangs on a control, with the control at another value; the rest is shared.

import type { LibraryScope } from "./library.ts";
import type { Language, RunContext } from "../../cells/kind.ts";
import { parseExpression } from "../text/expression.ts";
import { evaluate } from "./evaluation.ts";
import type { NameSource } from "./evaluation.ts";
import type { Outcome } from "./outcome.ts";
import { runCell } from "./runCell.ts";
import type { Definition } from "./runCell.ts";

export interface AsideSurroundings {
  readonly language: Language;
  readonly library: LibraryScope;
  /** Present outcomes of everything that the expression hangs on. */
  readonly outcomes: ReadonlyMap<string, Outcome>;
  definition(id: string): Definition | null;
  resolve(name: string): NameSource | null;
  label(id: string): string;
  /** A quiet context for the run of a cell with its control's setting. */
  contextFor(cell: Definition, setting: unknown): RunContext;
  /** A cell's present setting. */
  setting(id: string): unknown;
}

export type Aside = (control: string, value: unknown, expression: string) => Promise<unknown>;

/** One place to the side, for one run of one cell: what was computed for a value of the control is kept for the next expression. */
export function createAside(around: AsideSurroundings): Aside {
  const worlds = new Map<string, Map<string, Promise<Outcome>>>();
  return async (control, value, expression) => {
    const source = around.resolve(control);
    if (source === null) throw new Error(`There is no control \`${control}\``);
    const key = `${source.id}\n${JSON.stringify(value)}`;
    const world = worlds.get(key) ?? new Map<string, Promise<Outcome>>();
    worlds.set(key, world);
    const parsed = parseExpression(expression);
    const names = new Map(parsed.reads.flatMap((name) => { const from = around.resolve(name); return from === null ? [] : [[name, from] as const]; }));
    const outcomes = new Map<string, Outcome>();
    for (const { id } of names.values()) outcomes.set(id, await outcomeIn(world, id, source.id, value, around));
    const self = around.definition(source.id);
    if (self === null) throw new Error(`There is no control \`${control}\``);
    return evaluate(expression, { ...around, names, outcomes, context: around.contextFor(self, undefined) });
  };
}

function outcomeIn(world: Map<string, Promise<Outcome>>, id: string, control: string, value: unknown, around: AsideSurroundings): Promise<Outcome> {
  const known = world.get(id);
  if (known !== undefined) return known;
  const outcome = computeIn(world, id, control, value, around);
  world.set(id, outcome);
  return outcome;
}

async function computeIn(world: Map<string, Promise<Outcome>>, id: string, control: string, value: unknown, around: AsideSurroundings): Promise<Outcome> {
  const present = around.outcomes.get(id);
  const cell = around.definition(id);
  if (cell === null || (id !== control && !hangsOn(id, control, around, new Set()))) {
    if (present === undefined) throw new Error(`${around.label(id)} is not available here`);
    return present;
  }
  const outcomes = new Map<string, Outcome>();
  for (const read of cell.reads) outcomes.set(read, await outcomeIn(world, read, control, value, around));
  const setting = id === control ? value : around.setting(id);
  return runCell(cell, { ...around, outcomes, context: around.contextFor(cell, setting), notes: [] });
}

function hangsOn(id: string, control: string, around: AsideSurroundings, seen: Set<string>): boolean {
  if (seen.has(id)) return false;
  seen.add(id);
  return (around.definition(id)?.reads ?? []).some((read) => read === control || hangsOn(read, control, around, seen));
}
