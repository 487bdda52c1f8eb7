// The page printed once as HTML: what an exported file shows before, or without, JavaScript.

import { html } from "./html.ts";
import { pageTrees } from "./pageTrees.ts";
import type { PageState } from "./pageState.ts";

/** @param state  what the engine said, all of it (see `stateAfter`)
 *  @param charts SVG of each chart by its key (see `stillCharts`)
 *  @returns HTML for the inside of the page's root element */
export function renderStill(state: PageState, charts: ReadonlyMap<string, string>): string {
  const trees = pageTrees().blocks(state, { canEdit: false, still: true, pending: () => undefined, fault: () => null, asTable: () => false, fieldsOpen: () => false, pickedAt: () => undefined, canStop: () => false });
  return `<article class="page still">${trees.map((tree) => html(tree, (own) => charts.get(own) ?? "")).join("\n")}</article>`;
}
