// What is told of each cell: its state, what it shows, what is wrong and where.

import { fieldsOf } from "./fields.ts";
import { farOf } from "./evaluation.ts";
import type { CellReport } from "./messages.ts";
import { sameData } from "./outcome.ts";
import type { CutShort, PlaceInCell } from "./outcome.ts";
import type { PlannedCell } from "./plan.ts";
import { controlPart, kindOf, shownOf } from "./shown.ts";
import { labelOf } from "./state.ts";
import type { EngineState } from "./state.ts";

/** One conclusion of a `claims` cell; `holds` is null where it is undecided. */
export interface ClaimReport { readonly cell: string; readonly line: number; readonly claim: string; readonly holds: boolean | null; readonly message: string | null }

/** @throws Error where there is no such cell */
export function cellReport(state: EngineState, id: string): CellReport {
  const cell = state.cells.get(id);
  const entry = state.entries.get(id);
  if (cell === undefined || entry === undefined) throw new Error(`no cell ${id}`);
  const { text, problem } = cell;
  const { outcome } = entry;
  const base = {
    id, name: text.name, kind: text.kind, line: text.line, from: text.from, to: text.to, state: entry.state, message: null, at: null,
    notes: [] as readonly string[], show: null, progress: entry.state === "working" ? entry.progress : null, fields: null, runs: entry.runs, stopped: false,
  };
  if (entry.state === "waiting" || entry.state === "working" || outcome === null) return base;
  const { stopped } = entry;
  if (!outcome.ok) {
    if (outcome.state === "blocked") return { ...base, message: `blocked by ${labelOf(state, outcome.root)}, which failed` };
    if (problem !== null && cell.definition === null) return { ...base, message: problem.message, at: { line: problem.line, column: problem.column, from: problem.from, to: problem.to } };
    return { ...base, message: outcome.message, at: placeOf(state, cell, outcome.at), notes: outcome.notes, stopped };
  }
  const shown = shownOf(state, entry);
  if (shown !== null && shown.fault !== null) return { ...base, state: "failed", message: shown.fault };
  const notes = [...outcome.notes, ...textNotes(state, text.index), ...droppedNote(state, id)];
  return { ...base, notes, message: cutWords(state, id, outcome.cutShort), stopped, show: shown?.parts ?? null, fields: text.name === null || !state.draw ? null : fieldsOf(text.name, outcome.value) };
}

function cutWords(state: EngineState, id: string, cut: CutShort | null): string | null {
  if (cut === null) return null;
  const rest = "Claims and live numbers that read it are undecided.";
  return cut.root === id ? `Ended early by hand, ${farOf(cut)}. ${rest}` : `Rests on ${labelOf(state, cut.root)}, which was ended early by hand, ${farOf(cut)}. ${rest}`;
}

function textNotes(state: EngineState, index: number): string[] {
  return (state.notebook?.problems ?? []).filter((each) => each.cell === index && each.severity === "note").map((each) => each.message);
}

function droppedNote(state: EngineState, id: string): string[] {
  const dropped = state.dropped.get(id);
  if (dropped === undefined || sameData(dropped.at, controlPart(state, id)?.kept)) return [];
  const why = dropped.reason === null ? "; its text was edited since" : `, which it cannot take: ${dropped.reason}`;
  return [`It had been moved to ${settingWords(dropped.at)}${why}. It stands as the text says`];
}

function placeOf(state: EngineState, cell: PlannedCell, at: PlaceInCell | null): CellReport["at"] {
  if (at === null || state.notebook === null) return null;
  const option = cell.text.options.find((each) => each.name === at.option);
  if (option === undefined) return null;
  const from = option.expression.from + at.from;
  const to = at.to === null ? option.expression.to : option.expression.from + at.to;
  const before = state.notebook.text.slice(option.from, from);
  const breaks = before.split(/\r\n|\n|\r/);
  return { line: option.line + breaks.length - 1, column: (breaks.length === 1 ? from - option.from : breaks[breaks.length - 1].length) + 1, from, to };
}

export function claimReports(state: EngineState): readonly ClaimReport[] {
  return [...state.cells.values()].flatMap((cell) => {
    if (kindOf(state, cell)?.body !== "claims") return [];
    const outcome = state.entries.get(cell.id)?.outcome ?? null;
    return cell.text.options.map((option, i): ClaimReport => {
      const decided = outcome?.ok ? outcome.claims?.[i] : undefined;
      return { cell: cell.id, line: option.line, claim: option.name, holds: decided?.holds ?? null, message: decided === undefined ? `Undecided: ${cellReport(state, cell.id).message ?? "not computed"}` : decided.message ?? null };
    });
  });
}

/** @example settingWords({ from: "2019-01", to: "2020-12" }) // "2019-01 to 2020-12" */
function settingWords(setting: unknown): string {
  const ends = typeof setting === "object" && setting !== null ? Object.values(setting).filter((each) => typeof each === "string") : [];
  return ends.length > 0 ? ends.join(" to ") : JSON.stringify(setting);
}
