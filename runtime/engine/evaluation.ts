// Evaluates one expression among the values of cells and the library; function forms of kinds may answer later.

import type { Language, RunContext } from "../../cells/kind.ts";
import { parseExpression } from "../text/expression.ts";
import type { Compiled } from "./evaluate.ts";
import { compile } from "./evaluate.ts";
import type { LibraryScope } from "./library.ts";
import type { CutShort, Outcome } from "./outcome.ts";
import { EvaluationError, Missing, Pending, Undecided } from "./values.ts";

/** Where a name comes from: a cell, or one of a script's exports. */
export interface NameSource { readonly id: string; readonly part: string | null }
export type NameSources = ReadonlyMap<string, NameSource>;

export interface EvaluationScope {
  readonly language: Language;
  readonly library: LibraryScope;
  readonly names: NameSources;
  readonly outcomes: ReadonlyMap<string, Outcome>;
  /** Words for a cell, as messages use them. */
  label(id: string): string;
  /** What a kind called as a function gets. */
  readonly context: RunContext;
  readonly claim?: boolean;
  /** Values of work that was ended early decide nothing: reading one leaves the whole undecided. */
  readonly whole?: boolean;
  /** Told why a figure that was read is missing, where its holder says so in its `note`. */
  missing?(why: string): void;
}

/** An input that failed: a claim or a live number is then undecided. */
class InputFailed extends Undecided {
  readonly root: string;
  constructor(root: string, message: string) { super(message); this.root = root; }
}

/** The value of an expression.
 *  @throws EvaluationError with its place; InputFailed, Undecided; Overtaken from the context */
export async function evaluate(source: string, scope: EvaluationScope): Promise<unknown> {
  const compiled = compiledFrom(source, scope.library.compiled);
  const callables = new WeakSet(scope.library.functions);
  // An expression always takes the same way, so the n-th call of a kind is the same call when it is evaluated again.
  const answers: Answer[] = [];
  let why = "";
  const missing = (holder: unknown): void => {
    const note: unknown = typeof holder === "object" && holder !== null && Object.hasOwn(holder, "note") ? Reflect.get(holder, "note") : null;
    if (typeof note === "string" && note !== "") { why = `: ${note}`; scope.missing?.(note); }
  };
  for (;;) {
    let calls = 0;
    const callKind = (kind: Language["kinds"][number], given: unknown): unknown => {
      const at = calls;
      calls += 1;
      answers[at] ??= new Answer(() => runAsFunction(kind, given, scope));
      return answers[at].take();
    };
    try {
      return compiled({ callables, claim: scope.claim, missing, lookup: (name) => lookup(name, scope, callables, callKind) });
    } catch (error) {
      if (error instanceof Missing) throw new Undecided(`\`${source.slice(error.place.from, error.place.to)}\` is missing (NaN)${why}`);
      if (!(error instanceof Pending)) throw error;
      await error.answer;
    }
  }
}

/** A moved control evaluates the same texts again and again: each is parsed once. */
function compiledFrom(source: string, known: Map<string, Compiled>): Compiled {
  const found = known.get(source);
  if (found !== undefined) return found;
  const parsed = parseExpression(source);
  if (parsed.tree === null) {
    const fault = parsed.faults[0];
    throw new EvaluationError(fault.message, { from: fault.from, to: fault.to });
  }
  const made = compile(parsed.tree);
  // Typing leaves its half-written texts behind.
  if (known.size >= 2000) known.clear();
  known.set(source, made);
  return made;
}

/** What a call of a kind gave, or will give. */
class Answer {
  #settled: { readonly value: unknown } | { readonly error: unknown } | null = null;
  #later: Promise<void> | null = null;

  constructor(run: () => unknown) {
    const given = run();
    if (!(given instanceof Promise)) { this.#settled = { value: given }; return; }
    this.#later = given.then((value: unknown) => { this.#settled = { value }; }, (error: unknown) => { this.#settled = { error }; });
  }

  /** @throws Pending while it is not there; the call's own error */
  take(): unknown {
    if (this.#settled === null) throw new Pending(this.#later ?? Promise.resolve());
    if ("error" in this.#settled) throw this.#settled.error;
    return this.#settled.value;
  }
}

function runAsFunction(kind: Language["kinds"][number], given: unknown, scope: EvaluationScope): unknown {
  if (typeof given !== "object" || given === null || Array.isArray(given) || ArrayBuffer.isView(given) || "times" in given) {
    const first = Object.entries(kind.options).find(([, option]) => option.required)?.[0] ?? Object.keys(kind.options)[0];
    throw new EvaluationError(`\`${kind.name}\` takes its options as an object: \`${kind.name}({${first === undefined ? "" : `${first}: …`}})\``);
  }
  const options = scope.language.check(kind, given as Readonly<Record<string, unknown>>);
  const seen = (result: unknown): unknown => (kind.value === undefined ? result : kind.value(result as never));
  const result: unknown = kind.run(options as never, scope.context);
  return result instanceof Promise ? result.then(seen) : seen(result);
}

function lookup(name: string, scope: EvaluationScope, callables: WeakSet<object>, callKind: (kind: Language["kinds"][number], given: unknown) => unknown): unknown {
  const source = scope.names.get(name);
  if (source !== undefined) {
    const outcome = scope.outcomes.get(source.id);
    if (outcome === undefined) throw new EvaluationError(`\`${name}\` is not available here`);
    if (!outcome.ok) throw new InputFailed(outcome.root, `${scope.label(outcome.root)} failed`);
    if (scope.whole === true && outcome.cutShort !== null) throw new Undecided(`${scope.label(outcome.cutShort.root)} was ended early, ${farOf(outcome.cutShort)}`);
    return source.part === null ? outcome.value : exported(outcome.value, source.part, name);
  }
  const kind = scope.library.callableKinds.get(name);
  if (kind !== undefined) {
    const asFunction = (given: unknown): unknown => callKind(kind, given);
    callables.add(asFunction);
    return asFunction;
  }
  if (scope.library.values.has(name)) return scope.library.values.get(name);
  throw new EvaluationError(`There is no \`${name}\`: no cell and no library function has this name`);
}

/** "after 12 of 40". */
export function farOf({ done, total }: CutShort): string {
  return total > 0 ? `after ${done} of ${total}` : `after ${done}`;
}

function exported(value: unknown, part: string, name: string): unknown {
  if (typeof value === "object" && value !== null && Object.hasOwn(value, part)) return Reflect.get(value, part);
  throw new EvaluationError(`The script that exports \`${name}\` gave no value for it`);
}
