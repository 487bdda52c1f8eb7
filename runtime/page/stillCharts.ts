// All charts of a notebook as SVG, for `renderStill`.

import { chartKey } from "./cell.ts";
import { chartStill } from "./chartStill.ts";
import { escapeHtml } from "./html.ts";
import type { PageState } from "./pageState.ts";

/** @param width in pixels of a figure
 *  @returns SVG by chart key; a chart that cannot be drawn gives its reason as a paragraph */
export async function stillCharts(state: PageState, width: number): Promise<ReadonlyMap<string, string>> {
  const drawn = new Map<string, string>();
  for (const cell of state.cells.values()) {
    for (const [index, part] of (cell.show ?? []).entries()) {
      if (part.part !== "chart") continue;
      drawn.set(chartKey(cell.id, index), await chartStill(part, width).catch((error: unknown) => `<p class="chart-fault">This chart cannot be drawn: ${escapeHtml(error instanceof Error ? error.message : String(error))}</p>`));
    }
  }
  return drawn;
}
