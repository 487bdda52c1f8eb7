// Notices work that does not end: an engine that no longer answers, or a cell at work without progress.

import type { PageState } from "./pageState.ts";
import type { CellReport } from "../engine/messages.ts";

export interface Notice { readonly words: string; readonly cell: string | null; readonly label: string }

export interface Watchdog {
  reported(cell: CellReport): void;
  silent(ms: number): void;
  answered(running: string | null): void;
  /** The engine was started anew. */
  fresh(): void;
  /** Whether the engine answers no more. */
  stuck(): boolean;
  canStop(cell: string): boolean;
  notice(): Notice | null;
}

/** An engine silent for so long is taken to be stuck. */
export const patienceMs = 2000;
/** A cell at work for so long may be stopped, though the engine answers. */
export const cellPatienceMs = 1500;

export function watchdog(state: PageState, changed: () => void, clock: () => number = () => performance.now()): Watchdog {
  /** When each working cell began; the one that last gave a sign stands last. */
  const began = new Map<string, number>();
  let stuckMs = 0;
  let running: string | null = null;

  const working = (): readonly string[] => [...began.keys()];
  const slow = (id: string): boolean => clock() - (began.get(id) ?? clock()) > cellPatienceMs;
  /** The cell that the engine is in: the last one it spoke of, else one that it said was at work. */
  const suspect = (): string | null => (running !== null && state.cells.get(running)?.state === "working" ? running : working().at(-1) ?? null);

  return {
    reported(cell) { const since = began.get(cell.id) ?? clock(); began.delete(cell.id); if (cell.state === "working") began.set(cell.id, since); },
    silent(ms) { const was = stuckMs > patienceMs; stuckMs = ms; if (ms > patienceMs && (!was || Math.floor(ms / 1000) !== Math.floor((ms - 500) / 1000))) changed(); },
    answered(now) {
      running = now;
      const was = stuckMs > patienceMs; stuckMs = 0;
      for (const id of began.keys()) if (!state.cells.has(id)) began.delete(id);
      if (was || working().some(slow)) changed();
    },
    fresh() { began.clear(); stuckMs = 0; running = null; },
    stuck: () => stuckMs > patienceMs,
    canStop: (id) => began.has(id) && (slow(id) || (stuckMs > patienceMs && suspect() === id)),
    notice() {
      if (stuckMs <= patienceMs) return null;
      const id = suspect();
      const cell = id === null ? undefined : state.cells.get(id);
      const label = cell ? cell.name ?? `the ${cell.kind} cell of line ${cell.line}` : "";
      const seconds = Math.floor(stuckMs / 1000);
      return cell
        ? { words: `${label} has been at work for ${seconds} s without an answer. The page and the text stay usable; the other cells wait for it.`, cell: cell.id, label }
        : { words: `The computing part of this page has not answered for ${seconds} s.`, cell: null, label };
    },
  };
}
