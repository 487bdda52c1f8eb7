// Completion: what `suggest` knows, as the editor wants it.

import { snippetCompletion } from "@codemirror/autocomplete";
import type { Completion, CompletionContext, CompletionResult, CompletionSource } from "@codemirror/autocomplete";
import type { Catalogue } from "../catalogue.ts";
import { suggest } from "../suggest.ts";
import type { NamedCell, Suggestion } from "../suggest.ts";

/** What was asked for most comes first: an option's own values, then cells, then the library. */
const boosts: Readonly<Record<Suggestion["sort"], number>> = { value: 30, cell: 20, option: 10, kind: 10, function: 0, constant: 0 };

export function completeFrom(catalogue: Catalogue, cells: () => readonly NamedCell[]): CompletionSource {
  return (context: CompletionContext): CompletionResult | null => {
    const found = suggest(context.state.doc.toString(), context.pos, catalogue, cells(), context.explicit);
    if (!found || found.list.length === 0) return null;
    return { from: found.from, options: found.list.map(completion), validFor: /^(?:rule\.)?[\w$"]*$/ };
  };
}

function completion({ label, detail, help, sort, insert }: Suggestion): Completion {
  return snippetCompletion(insert, { label, detail, ...(help ? { info: help } : {}), type: sort, boost: boosts[sort] });
}
