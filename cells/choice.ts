// One of a list.

import { OptionError, type Kind } from "./kind.ts";
import type { ControlPart } from "./parts/part.ts";

type Item = string | number | boolean;
export interface ChoiceCell { readonly among: readonly unknown[]; readonly at?: unknown; readonly label?: string }
type Choice = Extract<ControlPart, { control: "choice" }>;

/** A list for a reader's eye; far longer ones would also take the page seconds to draw. */
const mostItems = 1000;

export const choice: Kind<ChoiceCell, Choice> = {
  name: "choice",
  sentence: "One of a list, which the reader can change.",
  options: {
    among: { type: "list", required: true, sentence: "What to choose among: texts, numbers, true or false.", example: "[\"aicc\", \"bic\"]" },
    at: { type: "any", sentence: "The choice that the text keeps; the first unless given." },
    label: { type: "text", sentence: "What readers see beside it; the cell's name unless given." },
  },
  body: "options",
  control: { keeps: ["at"] },
  example: "among: [\"aicc\", \"bic\"]",
  run: (options, context) => {
    const { label = context.name ?? "" } = options;
    if (options.among.length > mostItems) throw new OptionError("among", `\`among\` has ${options.among.length} items; nobody chooses among more than ${mostItems}: give fewer, or use a slider`);
    const among = Array.from(options.among, item);
    if (among.length === 0) throw new OptionError("among", "`among` is an empty list; there is nothing to choose");
    const twice = among.find((each, i) => among.indexOf(each) !== i);
    if (twice !== undefined) throw new OptionError("among", `\`among\` holds ${JSON.stringify(twice)} twice`);
    const kept = options.at === undefined ? among[0] : chosen(options.at, among, "at");
    const at = context.setting === undefined ? kept : chosen(context.setting, among, null);
    return { part: "control", control: "choice", label, among, at, kept };
  },
  value: (result) => result.at,
  show: (result) => [result],
};

function item(value: unknown, i: number): Item {
  if (typeof value === "string" || typeof value === "boolean" || (typeof value === "number" && !Number.isNaN(value))) return value;
  throw new OptionError("among", `item ${i + 1} of \`among\` is no text, number, true or false; choose among names, and look the rest up with them, as in {a: first, b: second}[name]`);
}

function chosen(value: unknown, among: readonly Item[], option: string | null): Item {
  const found = among.find((each) => each === value) ?? (option === null ? among.find((each) => String(each) === String(value)) : undefined);
  if (found !== undefined) return found;
  throw new OptionError(option, `${option === null ? "the setting" : `\`${option}\``} is ${JSON.stringify(value)}, which is not among ${among.slice(0, 8).map((each) => JSON.stringify(each)).join(", ")}${among.length > 8 ? ", …" : ""}`);
}
