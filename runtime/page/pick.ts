// A chart of which the reader picks one view: a scale below it, and what is shown in words. Nothing is computed anew.

import { h } from "./tree.ts";
import type { Tree } from "./tree.ts";
import type { ChartPart, Pick } from "../../cells/parts/part.ts";

const views = new WeakMap<Pick, Map<number, ChartPart>>();

/** Where the reader stands: where they moved to, as far as there still is such a view. */
export function pickedAt(pick: Pick, moved: number | undefined): number {
  return moved === undefined ? pick.at : Math.max(0, Math.min(pick.among.length - 1, moved));
}

/** The chart as picked; the same object for the same view, so that it is drawn once. */
export function picked(part: ChartPart, moved: number | undefined): ChartPart {
  const { pick } = part;
  if (pick === undefined) return part;
  const at = pickedAt(pick, moved);
  if (at === pick.at) return part;
  const known = views.get(pick) ?? new Map<number, ChartPart>();
  views.set(pick, known);
  const found = known.get(at) ?? { ...part, data: { ...part.data, ...pick.among[at].data } };
  known.set(at, found);
  return found;
}

/** @param key  of the chart */
export function pickTree(pick: Pick, key: string, moved: number | undefined): Tree {
  const at = pickedAt(pick, moved), { label, words } = pick.among[at], most = pick.among.length - 1, id = `pick-${key}`;
  return h("div", { class: "pick" },
    h("div", { class: "control" },
      h("label", { class: "label", for: id }, pick.label),
      h("div", { class: "slider" },
        h("input", { type: "range", id, min: 0, max: most, step: 1, value: at, "data-act": "pick", "data-key": key, "aria-valuetext": `${label}. ${words}`, style: `--at:${most > 0 ? Math.round(1000 * at / most) / 10 : 0}%` }),
        h("output", { for: id }, label))),
    h("p", { class: "pick-words" }, words));
}
