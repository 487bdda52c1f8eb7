// What the engine keeps between runs: the text as it was last read, and each cell and live number with its present value.

import type { Language } from "../../cells/kind.ts";
import type { Part } from "../../cells/parts/part.ts";
import type { ParsedNotebook } from "../text/parse.ts";
import type { Swept } from "./aside.ts";
import type { GraphNode } from "./graph.ts";
import type { LibraryScope } from "./library.ts";
import type { Memory } from "./memory.ts";
import type { CellReport, CellState } from "./messages.ts";
import type { Outcome } from "./outcome.ts";
import type { Plan, PlannedCell, PlannedNumber } from "./plan.ts";

/** Written by the engine only; reports and contexts read it. */
export interface EngineState {
  readonly language: Language;
  readonly library: LibraryScope;
  /** Whether descriptions of what cells show are made. */
  readonly draw: boolean;
  width: number;
  /** Why code may not run; null where it may. */
  codeRefused: string | null;
  notebook: ParsedNotebook | null;
  plan: Plan | null;
  cells: ReadonlyMap<string, PlannedCell>;
  numbers: ReadonlyMap<string, PlannedNumber>;
  readonly entries: Map<string, Entry>;
  readonly settings: Map<string, unknown>;
  /** Settings that were dropped, until their control is moved again: the reader is told. `reason` is null where the control's own text was edited. */
  readonly dropped: Map<string, { readonly at: unknown; readonly reason: string | null }>;
}

/** A cell or live number as the engine keeps it. */
export interface Entry {
  readonly id: string;
  readonly node: GraphNode<Outcome>;
  mark: string;
  inputs: readonly string[];
  state: CellState;
  outcome: Outcome | null;
  /** What it last ran on: the same inputs give the same outcome. */
  ranOn: { readonly run: object; readonly inputs: readonly Outcome[] } | null;
  /** A new object asks for a new run on the same inputs. */
  run: object;
  runs: number;
  lastMs: number;
  notes: string[];
  progress: CellReport["progress"];
  files: Set<string>;
  stop: Stop | null;
  /** Whether its present outcome is what a stop left. */
  stopped: boolean;
  readonly memory: Memory;
  /** Ends the helpers of its present run. */
  endHelp: (() => void) | null;
  readonly swept: Swept;
  shown: { readonly outcome: Outcome; readonly width: number; readonly parts: readonly Part[] | null; readonly fault: string | null } | null;
}

/** How a run can be ended by hand. `heard`: the run asks by itself whether it should end; `wanted`: it should; `obeyed`: it was told so. */
export interface Stop { readonly controller: AbortController; heard: boolean; wanted: boolean; obeyed: boolean }

/** A cell's name as messages say it. */
export function labelOf(state: EngineState, id: string): string {
  const cell = state.cells.get(id);
  if (cell === undefined) return `\`${id}\``;
  return cell.text.name === null ? `the \`${cell.text.kind}\` in line ${cell.text.line}` : `\`${cell.text.name}\``;
}

/** What readers of a cell see at present; null where it has no value. */
export function valueOf(state: EngineState, id: string): unknown {
  const outcome = state.entries.get(id)?.outcome;
  return outcome?.ok ? outcome.value : null;
}
