// What a cell shows at present.

import type { Kind } from "../../cells/kind.ts";
import type { Part } from "../../cells/parts/part.ts";
import type { PlannedCell } from "./plan.ts";
import { messageOf } from "./runCell.ts";
import type { EngineState, Entry } from "./state.ts";

/** A cell's kind, also where its text could not be planned. */
export function kindOf(state: EngineState, cell: PlannedCell | undefined): Kind<never, unknown> | undefined {
  return cell?.definition?.kind ?? state.language.kinds.find((kind) => kind.name === cell?.text.kind);
}

/** The described parts of a cell, made once for an outcome and a width. */
export function shownOf(state: EngineState, entry: Entry): Entry["shown"] {
  const { outcome } = entry;
  const kind = kindOf(state, state.cells.get(entry.id));
  if (outcome === null || !outcome.ok || kind === undefined) return null;
  if (!state.draw && kind.control === undefined) return null;
  if (entry.shown?.outcome === outcome && entry.shown.width === state.width) return entry.shown;
  try {
    entry.shown = { outcome, width: state.width, parts: kind.show(outcome.result as never, { name: state.cells.get(entry.id)?.text.name ?? null, width: state.width }), fault: null };
  } catch (error) {
    entry.shown = { outcome, width: state.width, parts: null, fault: `The result could not be drawn: ${messageOf(error)}` };
  }
  return entry.shown;
}

/** What a control shows of itself; null where there is no such control, or no value of it. */
export function controlPart(state: EngineState, name: string): Extract<Part, { part: "control" }> | null {
  const entry = state.entries.get(name);
  if (entry === undefined || kindOf(state, state.cells.get(name))?.control === undefined) return null;
  const part = shownOf(state, entry)?.parts?.find((each) => each.part === "control");
  return part !== undefined && part.part === "control" ? part : null;
}
