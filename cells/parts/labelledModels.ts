// The models of a comparison with the labels that its reader will know them by.

import type { Forecaster } from "../../stdlib/index.ts";
import { needForecaster } from "./forecaster.ts";
import { OptionError } from "../kind.ts";

export interface LabelledModel { readonly label: string; readonly model: Forecaster }

/** @param given   `{label: model}`, or a list of models
 *  @param source  the author's text of the option: a name in a list labels its model
 *  @throws OptionError where an item is no model, or two share a label */
export function labelledModels(given: unknown, source: string | undefined): readonly LabelledModel[] {
  const list = Array.isArray(given) ? fromList(given, source) : fromObject(given);
  if (list.length === 0) throw new OptionError("models", "models is empty; give at least one fit or rule");
  return distinct(list);
}

function fromObject(given: unknown): readonly LabelledModel[] {
  if (typeof given !== "object" || given === null || "rule" in given || "sigma2" in given || "values" in given) {
    throw new OptionError("models", "models takes a list of fits and rules, such as [airline, rule.naive(crossings)], or an object of them by label");
  }
  return Object.entries(given).map(([label, model]) => ({ label, model: needForecaster(model, "models") }));
}

function fromList(given: readonly unknown[], source: string | undefined): readonly LabelledModel[] {
  const written = source === undefined ? [] : itemsOf(source);
  const names = written.length === given.length ? written : [];
  return given.map((item, i) => {
    const model = needForecaster(item, "models");
    const own = typeof item === "object" && item !== null && "label" in item && typeof item.label === "string" ? item.label : model.label;
    const name = names[i] ?? "";
    return { label: /^[\p{ID_Start}$_][\p{ID_Continue}$]*$/u.test(name) ? name : own, model };
  });
}

/** The items of a list as they were written: split at commas outside brackets and quotes. */
function itemsOf(source: string): readonly string[] {
  const inner = /^\s*\[([\s\S]*)\]\s*$/.exec(source)?.[1];
  if (inner === undefined) return [];
  const items: string[] = [];
  let depth = 0, quote = "", item = "";
  for (const mark of inner) {
    if (quote !== "") { if (mark === quote) quote = ""; item += mark; continue; }
    if (mark === "\"" || mark === "'" || mark === "`") quote = mark;
    if ("([{".includes(mark)) depth++;
    if (")]}".includes(mark)) depth--;
    if (mark === "," && depth === 0) { items.push(item.trim()); item = ""; } else item += mark;
  }
  if (item.trim() !== "") items.push(item.trim());
  return items;
}

/** Two models of one label are told apart by a number. */
function distinct(list: readonly LabelledModel[]): readonly LabelledModel[] {
  const seen = new Map<string, number>();
  return list.map(({ label, model }) => {
    const times = (seen.get(label) ?? 0) + 1;
    seen.set(label, times);
    return { label: times === 1 ? label : `${label} (${times})`, model };
  });
}
