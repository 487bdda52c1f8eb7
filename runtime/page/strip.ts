// The strip: every control of the notebook, in view wherever the reader is.

import { controlTree } from "./controls.ts";
import { h } from "./tree.ts";
import type { Tree } from "./tree.ts";
import type { ControlPart } from "../../cells/parts/part.ts";

export interface StripControl { readonly name: string; readonly part: ControlPart; readonly pending: unknown; readonly fault: string | null }

/** Null when the notebook has no controls. @param moved names of settings that differ from the text's */
export function stripTree(controls: readonly StripControl[], open: boolean, moved: readonly string[], canEdit: boolean): Tree | null {
  if (controls.length === 0) return null;
  return h("section", { class: `strip ${open ? "open" : "shut"}`, "aria-label": "All controls", key: "strip" },
    h("div", { class: "strip-bar" },
      h("button", { type: "button", class: "strip-toggle", "data-act": "strip", "aria-expanded": open ? "true" : "false", "aria-controls": "strip-controls" },
        h("span", { class: "chevron", "aria-hidden": "true" }), `controls (${controls.length})`),
      h("span", { class: "strip-moved" }, moved.length > 0 ? `${moved.length} moved from the text’s` : ""),
      moved.length > 0 ? h("button", { type: "button", class: "quiet", "data-act": "all-back" }, moved.length === 1 ? "move it back" : "move all back") : null),
    h("div", { class: "strip-controls", id: "strip-controls", hidden: !open },
      controls.map(({ name, part, pending, fault }) => controlTree(part, { name, where: "strip", canEdit, pending, fault }))));
}
