// What every chart's view is given, live and still alike: its data and settings, how expressions run, and what it may not do.

import { changeset, Error as onlyErrors, truthy } from "vega";
import type { Loader, Spec, View } from "vega";
import { rowsOf } from "./chartData.ts";
import type { CompiledChart } from "./chartSpec.ts";
import { vegaExpression } from "./vegaExpression.ts";
import type { ChartPart, Columns } from "../../cells/parts/part.ts";

const refuse = async (): Promise<never> => { throw new Error("A chart loads nothing"); };
const noLoader: Loader = { load: refuse, http: refuse, file: refuse, sanitize: async (uri) => uri.startsWith("data:image/") ? { href: uri } : refuse() };

/** Pointer and keys are read by the page itself (chartPointer.ts), so that a view shows no labels and no hovering of its own. */
export const viewOptions = {
  loader: noLoader, hover: false, tooltip: (): void => undefined, expr: vegaExpression as never,
  // An empty data set is no fault worth a warning: a forecast without held-out data has one.
  logLevel: onlyErrors,
};

/** The specification with data and settings in it, so that nothing is drawn empty first. */
export function filled(spec: Spec, part: ChartPart): Spec {
  const { data, params = {} } = part;
  return {
    ...spec,
    data: (spec.data ?? []).map((set) => Object.hasOwn(data, set.name) ? { ...set, values: rowsOf(data[set.name]) } : set) as NonNullable<Spec["data"]>,
    signals: (spec.signals ?? []).map((signal) => Object.hasOwn(params, signal.name) ? { ...signal, value: params[signal.name] } : signal) as NonNullable<Spec["signals"]>,
  };
}

/** Swaps new data and settings in; columns that are the very same stay. */
export function swapData(view: View, compiled: CompiledChart, before: Readonly<Record<string, Columns>>, part: ChartPart): void {
  for (const [name, columns] of Object.entries(part.data)) {
    if (columns !== before[name] && compiled.dataNames.has(name)) view.change(name, changeset().remove(truthy).insert(rowsOf(columns)));
  }
  for (const [name, value] of Object.entries(part.params ?? {})) if (compiled.signalNames.has(name)) view.signal(name, value);
}
