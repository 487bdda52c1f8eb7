// A live number in the prose: its saved text where it agrees, both values where it has moved.

import { h } from "./tree.ts";
import type { Tree } from "./tree.ts";
import type { NumberReport } from "../engine/messages.ts";

/** @param may `canAccept`: at kept settings with a text to write to; `canEdit`: there is a source to go to */
export function liveNumber(number: NumberReport, may: { readonly canAccept: boolean; readonly canEdit: boolean }): Tree {
  const from = `= ${number.expression}`;
  const source = may.canEdit ? { "data-act": "source", "data-from": number.from, "data-to": number.to } : {};
  if (number.state === "agrees") return h("span", { class: "live agrees", title: from, ...source }, number.saved);
  if (number.state === "undecided") {
    return h("span", { class: "live undecided", title: number.message ?? from, ...source }, number.saved, h("span", { class: "unseen" }, ` (undecided: ${(number.message ?? "not computed").replace(/^Undecided: /, "")})`));
  }
  return h("span", { class: "live moved", title: from },
    h("span", { class: "unseen" }, "moved from "), h("del", source, number.saved), h("span", { class: "unseen" }, " to "), h("ins", source, number.now ?? "–"),
    may.canAccept && number.now !== null ? h("button", { type: "button", class: "accept", "data-act": "accept", "data-index": number.index, "aria-label": `accept ${number.now} in place of ${number.saved}` }, "accept") : null);
}
