// A chart's view with its data and settings in it, before anything is drawn: the one door to vega.

import { changeset, Error as onlyErrors, parse, truthy, View } from "vega";
import type { Loader } from "vega";
import { rowsOf } from "./chartData.ts";
import type { CompiledChart } from "./chartSpec.ts";
import { vegaExpression } from "./vegaExpression.ts";
import type { ChartPart, Columns } from "../../cells/parts/part.ts";

export type { View } from "vega";

const refuse = async (): Promise<never> => { throw new Error("A chart loads nothing"); };
const noLoader: Loader = { load: refuse, http: refuse, file: refuse, sanitize: async (uri) => uri.startsWith("data:image/") ? { href: uri } : refuse() };

/** @param renderer "none" where there is no document */
export function chartView(compiled: CompiledChart, part: ChartPart, renderer: "svg" | "none"): View {
  const view = new View(parse(compiled.spec, undefined, { ast: true }), {
    renderer, loader: noLoader, hover: false, tooltip: () => undefined, expr: vegaExpression as never,
    // An empty data set is no fault worth a warning: a forecast without held-out data has one.
    logLevel: onlyErrors,
  });
  for (const [name, columns] of Object.entries(part.data)) if (compiled.dataNames.has(name)) view.data(name, rowsOf(columns));
  setSignals(view, compiled, part);
  return view;
}

/** Swaps new data in; columns that are the very same stay. */
export function swapData(view: View, compiled: CompiledChart, before: Readonly<Record<string, Columns>>, part: ChartPart): void {
  for (const [name, columns] of Object.entries(part.data)) {
    if (columns !== before[name] && compiled.dataNames.has(name)) view.change(name, changeset().remove(truthy).insert(rowsOf(columns)));
  }
  setSignals(view, compiled, part);
}

function setSignals(view: View, compiled: CompiledChart, { params }: ChartPart): void {
  for (const [name, value] of Object.entries(params ?? {})) if (compiled.signalNames.has(name)) view.signal(name, value);
}
