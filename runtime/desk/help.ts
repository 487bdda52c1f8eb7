// The help that stands beside a kind, an option, a name or a function.

import type { Option, OptionType } from "../../cells/kind.ts";
import type { Catalogue } from "./catalogue.ts";
import { contextAt } from "./context.ts";
import type { NamedCell } from "./suggest.ts";

export interface Help { readonly from: number; readonly to: number; readonly title: string; readonly text: string }

/** Help for the word at `position`; null where the word means nothing to us. */
export function helpAt(text: string, position: number, catalogue: Catalogue, cells: readonly NamedCell[]): Help | null {
  const word = wordAt(text, position);
  if (!word) return null;
  const place = { from: word.from, to: word.to };
  const context = contextAt(text, word.to);
  if (context.in === "prose") return null;
  if (context.in === "fence") {
    const kind = catalogue.kinds.find((entry) => entry.name === word.word);
    return kind ? { ...place, title: kind.name, text: kind.sentence } : null;
  }
  if (context.in === "option") {
    const option = catalogue.kinds.find((entry) => entry.name === context.kind)?.options[word.word];
    return option ? { ...place, title: word.word, text: optionHelp(option) } : null;
  }
  const cell = cells.find((entry) => entry.name === word.word);
  if (cell) return { ...place, title: cell.name, text: `The ${cell.kind} cell “${cell.name}”: ${cell.state}.` };
  const found = catalogue.functions.find((entry) => entry.name === word.word);
  if (found) return { ...place, title: found.signature, text: found.sentence };
  const kind = catalogue.kinds.find((entry) => entry.callable && entry.name === word.word);
  return kind ? { ...place, title: `${kind.name}({…})`, text: kind.sentence } : null;
}

/** An option in words: what it is for, what it takes, what stands when it is left out. */
export function optionHelp(option: Option): string {
  const parts = [option.sentence, `Takes ${typeWords(option.type)}${boundsWords(option)}.`];
  if (option.required) parts.push("Required.");
  else if (option.default !== undefined && option.default !== null) parts.push(`Left out: ${JSON.stringify(option.default)}.`);
  return parts.filter((part) => part !== "").join(" ");
}

const words: Readonly<Record<string, string>> = {
  series: "a series", number: "a number", integer: "a whole number", boolean: "true or false", text: "a text in quotes", time: "a time in quotes, such as \"2019-03\"",
  level: "a confidence level between 0 and 1", any: "any value", lags: "a number of lags, or a list of lags", fit: "a fit", forecaster: "a fit, a rule or a ranked model",
  window: "a window", list: "a list", object: "an object", rows: "rows (a list of objects)",
};

function typeWords(type: OptionType): string {
  if (typeof type === "string") return words[type];
  if ("oneOf" in type) return `one of ${type.oneOf.map((value) => JSON.stringify(value)).join(", ")}`;
  if ("anyOf" in type) return type.anyOf.map(typeWords).join(", or ");
  return `a list, each item ${typeWords(type.listOf)}`;
}

function boundsWords({ min, max }: Option): string {
  if (min !== undefined && max !== undefined) return ` from ${min} to ${max}`;
  if (min !== undefined) return `, ${min} or more`;
  return max === undefined ? "" : `, ${max} or less`;
}

function wordAt(text: string, position: number): { readonly from: number; readonly to: number; readonly word: string } | null {
  const part = /[\w$]/;
  let from = position, to = position;
  while (from > 0 && part.test(text[from - 1])) from--;
  while (to < text.length && part.test(text[to])) to++;
  if (from === to) return null;
  if (text.slice(Math.max(0, from - 5), from) === "rule.") from -= 5;
  return { from, to, word: text.slice(from, to) };
}
