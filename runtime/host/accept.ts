// Writes what live numbers give now into the text: those bytes and no others.

import type { NumberReport } from "../engine/messages.ts";
import { language } from "../../cells/index.ts";
import { acceptNumber, applyEdits } from "../text/edits.ts";
import { parse } from "../text/parse.ts";

/** The text with every moved number as it is now.
 *  @param free    a saved text that has no form of its own yet; `form` then gives the number one */
export function acceptedText(text: string, numbers: readonly NumberReport[], free: string | null = null, form: (value: number) => string = String): string {
  const notebook = parse(text, language.kinds);
  const edits = numbers.flatMap((number) => {
    if (number.state !== "moved" || number.value === null) return [];
    if (number.saved === free && typeof number.value === "number") return [{ ...notebook.numbers[number.index].savedPlace, insert: form(number.value) }];
    const outcome = acceptNumber(notebook, number.index, number.value);
    return "edits" in outcome ? outcome.edits : [];
  });
  return applyEdits(text, edits);
}
