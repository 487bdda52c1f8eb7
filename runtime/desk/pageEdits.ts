// What the page asks to have written into the text: a setting kept, numbers accepted. Each is one change that undo takes back.

import type { Edit } from "../text/notebook.ts";
import { acceptNumber, keepSetting } from "../text/edits.ts";
import { parse } from "../text/parse.ts";
import type { Catalogue } from "./catalogue.ts";

export interface PageEdits {
  /** Writes a control's present setting into its options. */
  keep(name: string, setting: unknown): void;
  /** Writes values, in the form in which the page shows them, into live numbers. */
  accept(numbers: readonly { readonly index: number; readonly now: string }[]): void;
}

/** @param say  tells the author what was done, or why it was not */
export function pageEdits(catalogue: Catalogue, editor: { text(): string; change(edits: readonly Edit[]): void }, say: (text: string) => void): PageEdits {
  return {
    keep(name, setting) {
      const outcome = keepSetting(parse(editor.text(), catalogue.kinds), catalogue.kinds, name, setting);
      if ("refused" in outcome) { say(`Not kept. ${outcome.refused}.`); return; }
      editor.change(outcome.edits);
      say(`The setting of ${name} is in the text now. Save keeps it in the file.`);
    },
    accept(numbers) {
      const notebook = parse(editor.text(), catalogue.kinds);
      const outcomes = numbers.map(({ index, now }) => acceptNumber(notebook, index, now));
      const refused = outcomes.flatMap((outcome) => "refused" in outcome ? [outcome.refused] : []);
      const edits = outcomes.flatMap((outcome) => "edits" in outcome ? outcome.edits : []);
      editor.change(edits);
      if (refused.length > 0) say(`${refused[0]}.`);
      else say(edits.length === 1 ? "1 number was written into the text. Save keeps it in the file." : `${edits.length} numbers were written into the text. Save keeps them in the file.`);
    },
  };
}
