// One run of one cell: its options evaluated and checked, its kind run, its faults put into words and places.

import type { ClaimOutcome, Language, RunContext } from "../../cells/kind.ts";
import type { CellText } from "../text/notebook.ts";
import { evaluate } from "./evaluation.ts";
import type { EvaluationScope, NameSources } from "./evaluation.ts";
import type { LibraryScope } from "./library.ts";
import type { Outcome, PlaceInCell } from "./outcome.ts";
import { EvaluationError, Overtaken, Undecided, whatIs } from "./values.ts";

/** What a cell is, apart from where it stands. */
export interface Definition {
  readonly id: string;
  readonly kind: Language["kinds"][number];
  readonly text: CellText;
  /** The body as it stands in the text. */
  readonly body: string;
  readonly names: NameSources;
  /** Ids of the cells that it reads. */
  readonly reads: readonly string[];
  /** Those without which it cannot run. */
  readonly needs: readonly string[];
}

export interface CellSurroundings {
  readonly language: Language;
  readonly library: LibraryScope;
  readonly outcomes: ReadonlyMap<string, Outcome>;
  label(id: string): string;
  readonly context: RunContext;
  /** Remarks made so far; `context.note` adds to it. */
  readonly notes: readonly string[];
}

/** Runs a cell. Gives an outcome whatever happens. @throws Overtaken only */
export async function runCell(cell: Definition, around: CellSurroundings): Promise<Outcome> {
  const scope: EvaluationScope = { ...around, names: cell.names };
  try {
    if (cell.kind.body === "claims") return await runClaims(cell, scope, around);
    for (const id of cell.needs) {
      const outcome = around.outcomes.get(id);
      if (outcome !== undefined && !outcome.ok) return { ok: false, state: "blocked", root: outcome.root, message: "", at: null, notes: [] };
    }
    const options = cell.kind.body === "code" ? { source: cell.body, inputs: inputsOf(cell, around) } : await optionsOf(cell, scope);
    return done(cell, await cell.kind.run(options as never, around.context), around, null);
  } catch (error) {
    if (error instanceof Overtaken || around.context.signal.aborted) throw new Overtaken("overtaken by newer work");
    return failure(cell, error, around.notes);
  }
}

async function optionsOf(cell: Definition, scope: EvaluationScope): Promise<Readonly<Record<string, unknown>>> {
  const given: Record<string, unknown> = {};
  for (const option of cell.text.options) {
    const taken = Object.hasOwn(cell.kind.options, option.name) ? cell.kind.options[option.name].taken ?? "value" : "value";
    if (taken === "value") given[option.name] = (await inOption(option.name, () => evaluate(option.source, scope))) ?? null;
    else given[option.name] = taken === "name" ? option.source.replace(/^["'`]|["'`]$/g, "") : option.source;
  }
  return scope.language.check(cell.kind, given, Object.fromEntries(cell.text.options.map((option) => [option.name, option.source])));
}

/** Claims are decided one by one: what one of them reads may have failed. */
async function runClaims(cell: Definition, scope: EvaluationScope, around: CellSurroundings): Promise<Outcome> {
  const claims: (ClaimOutcome & { readonly claim: string })[] = [];
  for (const option of cell.text.options) claims.push({ claim: option.name, ...await decide(option.source, { ...scope, claim: true, whole: true }) });
  const given = Object.fromEntries(claims.map(({ claim, ...outcome }) => [claim, outcome]));
  return done(cell, await cell.kind.run(given as never, around.context), around, claims);
}

async function decide(source: string, scope: EvaluationScope): Promise<ClaimOutcome> {
  try {
    const value = await evaluate(source, scope);
    if (typeof value === "boolean") return { holds: value };
    if (typeof value === "number" && Number.isNaN(value)) return { holds: null, message: "Undecided: the condition is missing (NaN)" };
    return { holds: null, message: `Undecided: a claim is true or false, and this gives ${whatIs(value)}` };
  } catch (error) {
    if (error instanceof Overtaken || scope.context.signal.aborted) throw error;
    return { holds: null, message: `Undecided: ${messageOf(error)}` };
  }
}

function inputsOf(cell: Definition, around: CellSurroundings): Record<string, unknown> {
  const inputs: Record<string, unknown> = {};
  for (const [name, source] of cell.names) {
    const outcome = around.outcomes.get(source.id);
    if (outcome?.ok) inputs[name] = source.part === null ? outcome.value : Reflect.get(Object(outcome.value) as object, source.part);
  }
  return inputs;
}

function done(cell: Definition, result: unknown, around: CellSurroundings, claims: (ClaimOutcome & { readonly claim: string })[] | null): Outcome {
  const { kind } = cell;
  return { ok: true, result, value: kind.value === undefined ? result : kind.value(result as never), notes: [...around.notes], claims, cutShort: null };
}

/** A fault met while an option was evaluated: it remembers which. */
class InOption extends Error {
  readonly option: string;
  constructor(option: string, error: unknown) { super(messageOf(error), { cause: error }); this.option = option; }
}

async function inOption<T>(option: string, work: () => Promise<T>): Promise<T> {
  try {
    return await work();
  } catch (error) {
    if (error instanceof Overtaken) throw error;
    throw new InOption(option, error);
  }
}

function failure(cell: Definition, error: unknown, notes: readonly string[]): Outcome {
  const fault = error instanceof InOption ? error.cause : error;
  return { ok: false, state: "failed", root: cell.id, message: words(cell, fault), at: placeOf(cell, error), notes: [...notes] };
}

function placeOf(cell: Definition, error: unknown): PlaceInCell | null {
  if (error instanceof InOption) {
    const place = error.cause instanceof EvaluationError ? error.cause.place : null;
    return { option: error.option, from: place?.from ?? 0, to: place?.to ?? null };
  }
  // OptionError is known by its shape: the class itself belongs to another room.
  if (error instanceof Error && error.name === "OptionError" && "option" in error && typeof error.option === "string" && cell.text.options.some((each) => each.name === error.option)) {
    return { option: error.option, from: 0, to: null };
  }
  // The numbers know no options, but name what they were given: "hold.phi gives 0.2 for lag 1".
  const [first] = /^\w+/.exec(messageOf(error)) ?? [];
  return first !== undefined && cell.kind.body === "options" && cell.text.options.some((each) => each.name === first) ? { option: first, from: 0, to: null } : null;
}

/** A fault of the program, not of the notebook, is said to be one. */
function words(cell: Definition, error: unknown): string {
  const message = messageOf(error);
  const cause = error instanceof EvaluationError ? error.cause : error;
  if (cause instanceof TypeError || cause instanceof ReferenceError) return `A fault inside \`${cell.kind.name}\`, not in your notebook: ${message}`;
  return message;
}

/** The message of whatever was thrown. */
export function messageOf(error: unknown): string {
  if (error instanceof Undecided || error instanceof Error) return error.message === "" ? error.name : error.message;
  return String(error);
}
