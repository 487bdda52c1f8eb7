// Keeps a text whose lines end in "\r\n" that way: lines that the author adds end like the others.

import { EditorState } from "@codemirror/state";
import type { Extension } from "@codemirror/state";

/** Nothing for a text of plain line ends; for one that mostly ends its lines in "\r\n", new lines get the same. */
export function keepLineEnds(text: string): Extension {
  const all = text.match(/\n/g)?.length ?? 0, pairs = text.match(/\r\n/g)?.length ?? 0;
  if (pairs === 0 || pairs * 2 < all) return [];
  return EditorState.transactionFilter.of((transaction) => {
    if (!transaction.docChanged || transaction.isUserEvent("undo") || transaction.isUserEvent("redo")) return transaction;
    const changes: { from: number; to: number; insert: string }[] = [];
    let differs = false;
    transaction.changes.iterChanges((from, to, _fromB, _toB, inserted) => {
      const given = inserted.toString(), insert = given.replace(/(?<!\r)\n/g, "\r\n");
      if (insert !== given) differs = true;
      changes.push({ from, to, insert });
    });
    if (!differs) return transaction;
    const end = changes.at(-1);
    const grown = changes.reduce((sum, change) => sum + change.insert.length - (change.to - change.from), 0);
    return [{ changes, selection: end ? { anchor: end.to + grown } : undefined, scrollIntoView: transaction.scrollIntoView, userEvent: "input" }];
  });
}
