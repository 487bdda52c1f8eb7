// All charts of a notebook as SVG, for `renderStill`.

import { chartKey } from "./cell.ts";
import { chartStill } from "./chartStill.ts";
import { escapeHtml } from "./html.ts";
import type { PageState } from "./pageState.ts";
import type { ChartPart } from "../../cells/parts/part.ts";

export interface StillOptions {
  /** SVG of parts printed before; filled. */
  readonly known?: WeakMap<ChartPart, string>;
  /** Called between two charts, so that a page in use is not held up. */
  readonly breathe?: () => Promise<void>;
}

/** @param width in pixels of a figure
 *  @returns SVG by chart key; a chart that cannot be drawn gives its reason as a paragraph */
export async function stillCharts(state: PageState, width: number, { known = new WeakMap(), breathe }: StillOptions = {}): Promise<ReadonlyMap<string, string>> {
  const drawn = new Map<string, string>();
  for (const cell of state.cells.values()) {
    for (const [index, part] of (cell.show ?? []).entries()) {
      if (part.part !== "chart") continue;
      let svg = known.get(part);
      if (svg === undefined) {
        await breathe?.();
        svg = await chartStill(part, width).catch((error: unknown) => `<p class="chart-fault">This chart cannot be drawn: ${escapeHtml(error instanceof Error ? error.message : String(error))}</p>`);
        known.set(part, svg);
      }
      drawn.set(chartKey(cell.id, index), svg);
    }
  }
  return drawn;
}
