// The names that every expression may use: library functions, constants, function forms of kinds.

import type { Language } from "../../cells/kind.ts";
import type { Compiled } from "./evaluate.ts";

export interface LibraryScope {
  /** Functions, and objects of them for dotted names ("rule.naive"). Constants too. */
  readonly values: ReadonlyMap<string, unknown>;
  /** Kinds that may be called with their options as an object. */
  readonly callableKinds: ReadonlyMap<string, Language["kinds"][number]>;
  readonly functions: readonly object[];
  /** All of these names, for the parser. */
  readonly names: readonly string[];
  /** Expressions compiled so far, by their text. */
  readonly compiled: Map<string, Compiled>;
}

export function libraryScope(language: Language): LibraryScope {
  const values = new Map<string, unknown>([["NaN", NaN], ["Infinity", Infinity], ["free", "free"], ...Object.entries(language.constants)]);
  const spaces = new Map<string, Record<string, unknown>>();
  const functions: object[] = [];
  for (const { name, call } of language.library) {
    functions.push(call);
    const [space, member] = name.split(".");
    if (member === undefined) { values.set(name, call); continue; }
    const members = spaces.get(space) ?? {};
    members[member] = call;
    spaces.set(space, members);
  }
  for (const [space, members] of spaces) values.set(space, Object.freeze(members));
  const callableKinds = new Map(language.kinds.filter((kind) => kind.callable).map((kind) => [kind.name, kind]));
  return { values, callableKinds, functions, names: [...new Set([...values.keys(), ...callableKinds.keys()])], compiled: new Map() };
}
