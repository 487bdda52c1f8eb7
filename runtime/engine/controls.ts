// What the controls stand at, and what became of settings.

import type { RunContext } from "../../cells/kind.ts";
import type { Part } from "../../cells/parts/part.ts";
import { sameData } from "./outcome.ts";
import { controlPart, kindOf } from "./shown.ts";
import { valueOf } from "./state.ts";
import type { EngineState } from "./state.ts";

export interface ControlReport { readonly name: string; readonly kind: string; readonly at: unknown }

/** The named controls, with what they stand at. */
export function controlReports(state: EngineState): readonly ControlReport[] {
  return [...state.cells.values()].flatMap((cell) => {
    if (kindOf(state, cell)?.control === undefined || cell.text.name === null) return [];
    const outcome = state.entries.get(cell.id)?.outcome;
    return [{ name: cell.text.name, kind: cell.text.kind, at: outcome?.ok ? outcome.value : null }];
  });
}

/** Settings that differ from the text's. */
export function movedSettings(state: EngineState): Readonly<Record<string, unknown>> {
  const moved: Record<string, unknown> = {};
  for (const name of state.settings.keys()) {
    const part = controlPart(state, name);
    if (part !== null && !sameData(part.at, part.kept)) moved[name] = part.at;
  }
  return moved;
}

/** Settings that their controls could not take, each with the reason. */
export function refusedSettings(state: EngineState): Readonly<Record<string, string>> {
  return Object.fromEntries([...state.dropped].flatMap(([name, { reason }]) => (reason === null ? [] : [[name, reason] as const])));
}

/** A control as a sweep asks for it. @throws Error with a message for the reader */
export function controlFor(state: EngineState, name: string): ReturnType<RunContext["control"]> {
  const cell = state.cells.get(name);
  const part = controlPart(state, name);
  if (cell === undefined || part === null) throw new Error(`\`${name}\` is not a control: name a slider, choice, switch or window`);
  return { kind: part.control, at: valueOf(state, name) ?? part.at, values: valuesOf(part) };
}

function valuesOf(part: Extract<Part, { part: "control" }>): readonly unknown[] {
  switch (part.control) {
    case "slider": return Array.from({ length: Math.max(0, Math.floor((part.to - part.from) / part.step + 1e-9)) + 1 }, (_, i) => Number((part.from + i * part.step).toPrecision(12)));
    case "choice": return part.among;
    case "switch": return [false, true];
    case "window": return [];
  }
}
