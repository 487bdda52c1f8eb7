// What is told of a live number: what it is now, and whether that agrees with what the text says.

import { agrees, formatLike, patternFault } from "../text/live.ts";
import type { LiveValue } from "../text/live.ts";
import type { LiveNumber } from "../text/notebook.ts";
import type { NumberReport } from "./messages.ts";
import type { PlannedNumber } from "./plan.ts";
import { labelOf, valueOf } from "./state.ts";
import type { EngineState } from "./state.ts";
import { whatIs } from "./values.ts";

/** @throws Error where there is no such number */
export function numberReport(state: EngineState, id: string): NumberReport {
  const number = state.numbers.get(id);
  if (number === undefined) throw new Error(`no number ${id}`);
  const { text } = number;
  const outcome = state.entries.get(id)?.outcome ?? null;
  const base = { index: text.index, line: text.line, from: text.from, to: text.to, expression: text.expression, saved: text.saved, now: null, value: null, state: "undecided" as const };
  if (outcome === null) return { ...base, message: null };
  if (!outcome.ok) return { ...base, message: outcome.message };
  const judged = judge(text, outcome.value);
  return { ...base, ...judged, message: Number.isNaN(outcome.value) ? `${[judged.message ?? "", ...outcome.notes.slice(-1)].join(": ")}${remarksOn(state, number)}` : judged.message };
}

/** What the values that a number reads say about themselves: why a figure of theirs is missing stands there. */
function remarksOn(state: EngineState, number: PlannedNumber): string {
  const said = number.inputs.flatMap((id) => { const notes = notesIn(valueOf(state, id)); return notes.length === 0 ? [] : [`. ${labelOf(state, id)} notes: ${notes.join(" ")}`]; });
  return said.join("");
}

function judge(text: LiveNumber, value: unknown): Pick<NumberReport, "now" | "value" | "state" | "message"> {
  if (typeof value !== "number" && typeof value !== "string" && typeof value !== "boolean") {
    return { now: null, value: null, state: "undecided", message: `This gives ${whatIs(value)}: choose one number, text or truth of it` };
  }
  const agreed = agrees(text.saved, text.pattern, value as LiveValue);
  if (agreed === null) return { now: null, value: null, state: "undecided", message: `Undecided: \`${text.expression}\` is ${Number.isNaN(value) ? "missing (NaN)" : "infinite"}` };
  const fault = text.pattern === null ? null : patternFault(text.pattern);
  return { now: formatLike(text.saved, text.pattern, value), value, state: agreed ? "agrees" : "moved", message: fault };
}

/** The texts of a value's own `notes`, such as a fit's. */
function notesIn(value: unknown): readonly string[] {
  const notes: unknown = typeof value === "object" && value !== null && "notes" in value ? value.notes : null;
  return !Array.isArray(notes) ? [] : notes.flatMap((each: unknown) => typeof each === "object" && each !== null && "text" in each && typeof each.text === "string" ? [each.text] : []);
}
