// What can be written in a notebook, as plain data: the kinds with their option tables, and the library.
// Made from the kinds themselves when the desk is built, so that the editor's help and the engine never differ.

import type { Kind, LibraryFunction, Option } from "../../cells/kind.ts";

export type KindEntry = Pick<Kind, "name" | "sentence" | "body" | "example" | "control" | "callable"> & { readonly options: Readonly<Record<string, Option>> };
export type FunctionEntry = Pick<LibraryFunction, "name" | "signature" | "sentence" | "topic">;

export interface Catalogue {
  /** Lagbook's own version. */
  readonly version: string;
  readonly kinds: readonly KindEntry[];
  readonly functions: readonly FunctionEntry[];
}
