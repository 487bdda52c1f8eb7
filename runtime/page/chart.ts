// One drawn chart: the one door to vega and vega-embed. A view is made once and kept; new data are swapped in.

import embed from "vega-embed";
import type { EmbedOptions } from "vega-embed";
import { changeset, Error as onlyErrors, truthy } from "vega";
import type { Loader } from "vega";
import { rowsOf } from "./chartData.ts";
import { compileChart } from "./chartSpec.ts";
import type { CompiledChart } from "./chartSpec.ts";
import { readingsOf } from "./chartReading.ts";
import type { Drawn, Reading } from "./chartReading.ts";
import { vegaExpression } from "./vegaExpression.ts";
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

const noLoader: Loader = {
  load: refuse, sanitize: async (uri) => { if (uri.startsWith("data:image/")) return { href: uri }; return refuse(); }, http: refuse, file: refuse,
};
async function refuse(): Promise<never> { throw new Error("A chart loads nothing"); }

/** @param say told the texts to show beside the pointer for marks that bring their own, or null */
export async function makeChart(element: HTMLElement, compiled: CompiledChart, part: ChartPart, width: number, say: (event: MouseEvent, value: unknown) => void): Promise<Chart> {
  let latest = part;
  const options: EmbedOptions = {
    mode: "vega", ast: true, expr: vegaExpression as unknown as NonNullable<EmbedOptions["expr"]>, actions: false, defaultStyle: false, renderer: "svg", hover: false,
    // An empty data set is no fault worth a warning: a forecast without held-out data has one.
    logLevel: onlyErrors, loader: noLoader, tooltip: (_handler, event, _item, value) => say(event, value),
    // Data go in before the first drawing, so that nothing is drawn empty.
    patch: (spec) => ({ ...spec, data: (spec.data ?? []).map((set) => set.name in part.data ? { ...set, values: rowsOf(part.data[set.name]) } : set), signals: (spec.signals ?? []).map((signal) => part.params && signal.name in part.params ? { ...signal, value: part.params[signal.name] } : signal) }) as typeof spec,
    ...(compiled.fits ? { width, height: part.height } : {}),
  };
  const { view, finalize } = await embed(element, compiled.spec, options);
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
      for (const [name, columns] of Object.entries(next.data)) {
        if (columns === drawn[name] || !compiled.dataNames.has(name)) continue;
        view.change(name, changeset().remove(truthy).insert(rowsOf(columns)));
      }
      drawn = next.data;
      for (const [name, value] of Object.entries(next.params ?? {})) if (compiled.signalNames.has(name)) view.signal(name, value);
      if (compiled.fits && drawnWidth !== width) { view.width(width); drawnWidth = width; }
      if (compiled.fits && view.height() !== next.height) view.height(next.height);
      await view.runAsync();
      await fitPanels();
    },
    readings: () => readingsOf(view as unknown as Drawn, latest),
    svg: () => view.toSVG(),
    destroy: finalize,
  };
}
