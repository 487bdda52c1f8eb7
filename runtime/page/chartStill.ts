// A chart printed as SVG without a browser: for the exported page's first sight and its print.

import { Error as onlyErrors, parse, View } from "vega";
import { rowsOf } from "./chartData.ts";
import { compileChart } from "./chartSpec.ts";
import { vegaExpression } from "./vegaExpression.ts";
import type { ChartPart } from "../../cells/parts/part.ts";

/** @param width in pixels
 *  @returns SVG whose colours are the page's CSS variables; it scales down with its box */
export async function chartStill(part: ChartPart, width: number): Promise<string> {
  const compiled = compileChart(part);
  const view = new View(parse(compiled.spec, undefined, { ast: true }), { renderer: "none", logLevel: onlyErrors, expr: vegaExpression as never });
  for (const [name, columns] of Object.entries(part.data)) if (compiled.dataNames.has(name)) view.data(name, rowsOf(columns));
  for (const [name, value] of Object.entries(part.params ?? {})) if (compiled.signalNames.has(name)) view.signal(name, value);
  if (compiled.fits) view.width(width).height(part.height);
  else for (const name of compiled.widthSignals) view.signal(name, name === "width" ? width - 60 : Math.max(60, width / panelsAcross(part) - 60));
  const svg = await view.toSVG();
  view.finalize();
  return compact(svg).replace(/<svg [^>]*>/, (tag) => scaling(tag));
}

/** The same drawing in fewer bytes: hundredths of a pixel are enough, what is the default need not be said, and what the page
 *  already has as its own typeface is inherited. */
function compact(svg: string): string {
  const rounded = (attribute: string): string => attribute.replace(/-?\d+\.\d{3,}(?:e-?\d+)?/g, (number) => String(Math.round(Number(number) * 100) / 100));
  return svg
    .replace(/ (?:d|transform|x|y|x1|x2|y1|y2|width|height|r)="[^"]*"/g, rounded)
    .replace(/ (?:opacity|fill-opacity|stroke-opacity|stroke-width)="1"| pointer-events="none"/g, "")
    .replace(/ font-family="[^"]*"/g, "");
}

function panelsAcross(part: ChartPart): number { const { hconcat } = part.spec as { hconcat?: readonly unknown[] }; return hconcat?.length ?? 2; }

/** Width and height become the most that it takes. */
function scaling(tag: string): string {
  const width = /\bwidth="([\d.]+)"/.exec(tag)?.[1] ?? "600";
  return tag.replace(/\bwidth="[\d.]+"/, "").replace(/\bheight="[\d.]+"/, "").replace("<svg ", `<svg aria-hidden="true" style="width:100%;max-width:${width}px;height:auto" `);
}
