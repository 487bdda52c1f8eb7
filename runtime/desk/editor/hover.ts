// Help for the word under the pointer.

import type { Extension } from "@codemirror/state";
import { hoverTooltip } from "@codemirror/view";
import type { Catalogue } from "../catalogue.ts";
import { helpAt } from "../help.ts";
import type { NamedCell } from "../suggest.ts";

export function hoverHelp(catalogue: Catalogue, cells: () => readonly NamedCell[]): Extension {
  return hoverTooltip((view, position) => {
    const help = helpAt(view.state.doc.toString(), position, catalogue, cells());
    if (!help) return null;
    return { pos: help.from, end: help.to, above: true, create: () => ({ dom: drawn(help.title, help.text) }) };
  }, { hoverTime: 350 });
}

function drawn(title: string, text: string): HTMLElement {
  const box = document.createElement("div");
  box.className = "cm-help";
  const head = document.createElement("strong");
  head.textContent = title;
  box.append(head, text);
  return box;
}
