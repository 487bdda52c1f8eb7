// Controls as described elements: in place beside their cell, and all together in the strip.

import { printValue } from "./format.ts";
import { h } from "./tree.ts";
import type { Given, Tree } from "./tree.ts";
import type { ControlPart } from "../../cells/parts/part.ts";
import { windowTree } from "./windowControl.ts";

export interface ControlContext {
  readonly name: string;
  readonly where: "place" | "strip";
  readonly canEdit: boolean;
  /** The newest setting that the engine has not answered yet; undefined when there is none. */
  readonly pending: unknown;
  readonly fault: string | null;
}

/** A control with its label, its present setting and, once moved, the way back. */
export function controlTree(given: ControlPart, context: ControlContext): Tree {
  const part = context.pending === undefined ? given : { ...given, at: context.pending } as ControlPart;
  const id = `${context.where}-${context.name}`;
  const moved = !same(part.at, part.kept);
  return h("div", { class: `control control-${part.control}${moved ? " has-moved" : ""}`, key: context.where === "strip" ? context.name : null },
    part.control === "window" ? h("span", { class: "label" }, part.label) : h("label", { class: "label", for: id }, part.label),
    input(part, context.name, id, context.fault),
    h("div", { class: "control-moved" }, moved ? movedTree(part, context) : null));
}

function input(part: ControlPart, name: string, id: string, fault: string | null): Given {
  const act = { "data-act": "set", "data-name": name, "data-control": part.control, id };
  switch (part.control) {
    case "slider": return h("div", { class: "slider" },
      h("input", { type: "range", min: part.from, max: part.to, step: part.step, value: part.at, "aria-valuetext": printValue(part.at), ...act, style: `--at:${share(part.at, part.from, part.to)}` }),
      h("output", { for: id }, printValue(part.at)));
    case "choice": {
      const index = part.among.findIndex((item) => item === part.at);
      return h("select", { ...act, value: index }, part.among.map((item, i) => h("option", { value: i, selected: i === index }, printValue(item))));
    }
    case "switch": return h("span", { class: "switch" }, h("input", { type: "checkbox", role: "switch", checked: part.at, ...act }), h("span", { class: "switch-word", "aria-hidden": "true" }, part.at ? "on" : "off"));
    case "window": return windowTree(part, name, id, fault);
  }
}

/** What the text says, and what can be done about the difference. */
function movedTree(part: ControlPart, context: ControlContext): Given {
  const name = context.name;
  return [
    h("span", { class: "text-says" }, `text: ${settingText(part.kept, part.control)}`),
    h("button", { type: "button", class: "quiet", "data-act": "back", "data-name": name, "aria-label": `${part.label}: back to the text's ${settingText(part.kept, part.control)}` }, "back to the text’s"),
    context.canEdit ? h("button", { type: "button", class: "quiet", "data-act": "keep", "data-name": name, "aria-label": `${part.label}: keep this setting` }, "keep this setting") : null,
  ];
}

/** A setting as a reader reads it. */
function settingText(value: ControlPart["kept"], control: ControlPart["control"]): string {
  if (typeof value === "object") return `${value.from} to ${value.to}`;
  return control === "switch" ? (value ? "on" : "off") : printValue(value);
}

export function same(a: unknown, b: unknown): boolean {
  if (typeof a === "object" && typeof b === "object" && a !== null && b !== null) {
    const x = a as { from: string; to: string }; const y = b as { from: string; to: string };
    return x.from === y.from && x.to === y.to;
  }
  return a === b;
}

function share(at: number, from: number, to: number): string { return `${to > from ? Math.round(1000 * (at - from) / (to - from)) / 10 : 0}%`; }
