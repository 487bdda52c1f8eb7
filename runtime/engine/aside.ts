// Recomputes off to the side what hangs on a control, with the control at another value; the rest is shared.

import type { LibraryScope } from "./library.ts";
import type { Language, RunContext } from "../../cells/kind.ts";
import { parseExpression } from "../text/expression.ts";
import { evaluate } from "./evaluation.ts";
import type { NameSource } from "./evaluation.ts";
import type { Outcome } from "./outcome.ts";
import { runCell } from "./runCell.ts";
import type { Definition } from "./runCell.ts";
import { Overtaken } from "./values.ts";

export interface AsideSurroundings {
  readonly language: Language;
  readonly library: LibraryScope;
  /** Present outcomes of everything that the expression hangs on. */
  readonly outcomes: ReadonlyMap<string, Outcome>;
  definition(id: string): Definition | null;
  /** Changes when the cell's text does. */
  mark(id: string): string;
  resolve(name: string): NameSource | null;
  label(id: string): string;
  /** A quiet context for the run of a cell with its control's setting. */
  contextFor(cell: Definition, setting: unknown): RunContext;
  /** A cell's present setting. */
  setting(id: string): unknown;
}

export type Aside = (control: string, value: unknown, expression: string) => Promise<unknown>;

/** What earlier runs of the same cell found, by control: good for as long as all that does not hang on the control stays the same. */
export type Swept = Map<string, { readonly frame: readonly unknown[]; readonly results: Map<string, { readonly value: unknown } | { readonly error: unknown }> }>;

/** One place to the side, for one run of one cell: what was computed for a value of the control is kept for the next expression.
 *  @param swept  kept with the cell from run to run: a run that only its own control brought about finds everything there */
export function createAside(around: AsideSurroundings, swept: Swept): Aside {
  const worlds = new Map<string, Map<string, Promise<Outcome>>>();
  return async (control, value, expression) => {
    const source = around.resolve(control), self = source === null ? null : around.definition(source.id);
    if (source === null || self === null) throw new Error(`There is no control \`${control}\``);
    const results = resultsFor(source.id, around, swept), key = JSON.stringify([value, expression]);
    const known = results.get(key);
    if (known !== undefined) {
      if ("error" in known) throw known.error;
      return known.value;
    }
    const place = `${source.id}\n${JSON.stringify(value)}`, world = worlds.get(place) ?? new Map<string, Promise<Outcome>>();
    worlds.set(place, world);
    const parsed = parseExpression(expression);
    const names = new Map(parsed.reads.flatMap((name) => { const from = around.resolve(name); return from === null ? [] : [[name, from] as const]; }));
    const outcomes = new Map<string, Outcome>();
    for (const { id } of names.values()) outcomes.set(id, await outcomeIn(world, id, source.id, value, around));
    try {
      const found = await evaluate(expression, { ...around, names, outcomes, context: around.contextFor(self, undefined) });
      results.set(key, { value: found });
      return found;
    } catch (error) {
      if (!(error instanceof Overtaken)) results.set(key, { error });
      throw error;
    }
  };
}

/** Results found in the same surroundings, as far as the control does not reach; what was found in others is dropped. */
function resultsFor(control: string, around: AsideSurroundings, swept: Swept): Map<string, { readonly value: unknown } | { readonly error: unknown }> {
  const frame = [...around.outcomes].flatMap(([id, outcome]): readonly unknown[] => {
    if (id === control) return [around.mark(id)];
    if (hangsOn(id, control, around, new Set())) return [around.mark(id), around.setting(id)];
    return [outcome.ok ? outcome.value : outcome];
  });
  const known = swept.get(control);
  if (known?.frame.length === frame.length && known.frame.every((item, i) => Object.is(item, frame[i]))) return known.results;
  const fresh = { frame, results: new Map<string, { readonly value: unknown } | { readonly error: unknown }>() };
  swept.set(control, fresh);
  return fresh.results;
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
