// The list of kinds and functions for the editor, made when the desk is built.

import { language } from "../../cells/index.ts";
import type { Catalogue } from "../desk/catalogue.ts";
import { version } from "./version.ts";

export function catalogueText(): string {
  const catalogue: Catalogue = {
    version,
    kinds: language.kinds.map(({ name, sentence, body, example, control, callable, options }) => ({ name, sentence, body, example, control, callable, options })),
    functions: language.library.map(({ name, signature, sentence, topic }) => ({ name, signature, sentence, topic })),
  };
  return JSON.stringify(catalogue);
}
