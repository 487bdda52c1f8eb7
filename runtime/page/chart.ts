// One drawn chart: the one door to vega-embed. A view is made once and kept; new data are swapped in.

import embed from "vega-embed";
import { filled, swapData, viewOptions } from "./chartView.ts";
import { compileChart } from "./chartSpec.ts";
import type { CompiledChart } from "./chartSpec.ts";
import { readingsOf } from "./chartReading.ts";
import type { Drawn, Reading } from "./chartReading.ts";
import type { ChartPart, Columns } from "../../cells/parts/part.ts";

export interface Chart {
  /** Swaps data and settings in; the shape must be the one that the chart was made for. */
  update(part: ChartPart, width: number): Promise<void>;
  /** Its points in reading order, with places in pixels from the chart's corner. */
  readings(): readonly Reading[];
  /** The picture as SVG, colours still as the page's variables. */
  svg(): Promise<string>;
  destroy(): void;
}

/** Compiles each shape once. Keep one for the page. */
export function chartCompiler(): (shape: string, part: ChartPart) => CompiledChart {
  const known = new Map<string, CompiledChart>();
  return (shape, part) => {
    const found = known.get(shape);
    if (found) return found;
    const made = compileChart(part);
    known.set(shape, made);
    // An edited specification leaves its old shapes behind.
    if (known.size > 200) { const [oldest] = known.keys(); known.delete(oldest); }
    return made;
  };
}

/** @param width in pixels */
export async function makeChart(element: HTMLElement, compiled: CompiledChart, part: ChartPart, width: number): Promise<Chart> {
  let latest = part;
  // A place of its own: the box around it has a role and a label that the library would overwrite.
  const place = document.createElement("div");
  element.replaceChildren(place);
  const { view, finalize } = await embed(place, compiled.spec, {
    ...viewOptions, mode: "vega", ast: true, renderer: "svg", actions: false, defaultStyle: false,
    patch: (spec) => filled(spec, part), ...(compiled.fits ? { width, height: part.height } : {}),
  });
  let drawn: Readonly<Record<string, Columns>> = part.data;
  let drawnWidth = compiled.fits ? width : 0;
  await fitPanels();
  async function fitPanels(): Promise<void> {
    if (compiled.fits || compiled.widthSignals.length === 0 || drawnWidth === width) return;
    // The room that axes take is known only after a drawing: a few passes settle it.
    for (let pass = 0; pass < 3; pass++) {
      const taken = Number(element.querySelector("svg")?.getAttribute("width") ?? width);
      if (Math.abs(width - taken) < 2) break;
      for (const name of compiled.widthSignals) {
        const now = view.signal(name) as number;
        const across = compiled.widthSignals.length > 1 ? compiled.widthSignals.length : Math.max(1, Math.round(taken / (now + 50)));
        view.signal(name, Math.max(60, now + (width - taken) / across));
      }
      await view.resize().runAsync(); // a grid of panels takes new room only when told to
    }
    drawnWidth = width;
  }
  return {
    async update(next, nextWidth) {
      latest = next; width = nextWidth;
      swapData(view, compiled, drawn, next);
      drawn = next.data;
      if (compiled.fits && drawnWidth !== width) { view.width(width); drawnWidth = width; }
      if (compiled.fits && view.height() !== next.height) view.height(next.height);
      await view.runAsync();
      await fitPanels();
    },
    readings: () => readingsOf(view as unknown as Drawn, latest),
    svg: () => view.toSVG(),
    destroy() { finalize(); place.remove(); },
  };
}
