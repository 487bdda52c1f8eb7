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
  canStop(cell: string): boolean;
  notice(): Notice | null;
}

/** An engine silent for so long is taken to be stuck. */
export const patienceMs = 2000;
/** A cell at work for so long without a word of progress may be stopped, though the engine answers. */
export const cellPatienceMs = 4000;

export function watchdog(state: PageState, changed: () => void, clock: () => number = () => performance.now()): Watchdog {
  /** When each working cell last gave a sign. */
  const signs = new Map<string, number>();
  let stuckMs = 0;
  let running: string | null = null;

  const working = (): readonly string[] => [...signs.keys()];
  const slow = (id: string): boolean => clock() - (signs.get(id) ?? clock()) > cellPatienceMs;
  /** The cell that the engine is in: the last one it spoke of, else one that it said was at work. */
  const suspect = (): string | null => (running !== null && state.cells.get(running)?.state === "working" ? running : working().at(-1) ?? null);

  return {
    reported(cell) { if (cell.state === "working") { signs.delete(cell.id); signs.set(cell.id, clock()); } else signs.delete(cell.id); },
    silent(ms) { const was = stuckMs > patienceMs; stuckMs = ms; if (ms > patienceMs && (!was || Math.floor(ms / 1000) !== Math.floor((ms - 500) / 1000))) changed(); },
    answered(now) {
      running = now;
      const was = stuckMs > patienceMs; stuckMs = 0;
      for (const id of signs.keys()) if (!state.cells.has(id)) signs.delete(id);
      if (was || working().some(slow)) changed();
    },
    fresh() { signs.clear(); stuckMs = 0; running = null; },
    canStop: (id) => signs.has(id) && (slow(id) || (stuckMs > patienceMs && suspect() === id)),
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
