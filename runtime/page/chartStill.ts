// A chart printed as SVG without a browser: for the exported page's first sight and its print.

import { parse, View } from "vega";
import { compileChart } from "./chartSpec.ts";
import { compactSvg } from "./compactSvg.ts";
import { filled, viewOptions } from "./chartView.ts";
import type { ChartPart } from "../../cells/parts/part.ts";

/** @param width in pixels
 *  @returns SVG whose colours are the page's CSS variables; it scales down with its box */
export async function chartStill(part: ChartPart, width: number): Promise<string> {
  const compiled = compileChart(part);
  const view = new View(parse(filled(compiled.spec, part), undefined, { ast: true }), { ...viewOptions, renderer: "none" });
  if (compiled.fits) view.width(width).height(part.height);
  else for (const name of compiled.widthSignals) view.signal(name, name === "width" ? width - 60 : Math.max(60, width / panelsAcross(part) - 60));
  const svg = await view.toSVG();
  view.finalize();
  // Its width becomes the most that it takes.
  const across = /<svg [^>]*\bwidth="([\d.]+)"/.exec(svg)?.[1] ?? "600";
  return compactSvg(svg, { "aria-hidden": "true", style: `width:100%;max-width:${across}px;height:auto` });
}

function panelsAcross(part: ChartPart): number { const { hconcat } = part.spec as { hconcat?: readonly unknown[] }; return hconcat?.length ?? 2; }
