// Where the reader moved the controls: what the engine was told and has not answered, and how to say it all again.

import { same } from "./controls.ts";
import type { ControlPart } from "../../cells/parts/part.ts";
import type { CellReport, ToEngine } from "../engine/messages.ts";

export interface Settings {
  /** Tells the engine, and remembers. */
  set(name: string, value: unknown): void;
  unset(name: string): void;
  /** The newest setting that has not been answered; undefined when there is none. */
  pending(name: string): unknown;
  /** A control's cell was reported: its answer may have come. */
  answered(cell: CellReport): void;
  /** All of it settled: forgets what the text now says by itself. */
  settled(moved: Readonly<Record<string, unknown>>): void;
  /** Messages that bring a fresh engine to the same settings. */
  again(): readonly ToEngine[];
}

export function settings(send: (message: ToEngine) => void): Settings {
  const told = new Map<string, unknown>();
  const waiting = new Map<string, unknown>();
  return {
    set(name, value) { told.set(name, value); waiting.set(name, value); send({ to: "set", name, value }); },
    unset(name) { told.delete(name); waiting.delete(name); send({ to: "unset", name }); },
    pending: (name) => waiting.get(name),
    answered(cell) {
      const part = controlOf(cell);
      if (cell.name === null || !waiting.has(cell.name)) return;
      if ((part && same(part.at, waiting.get(cell.name))) || cell.state === "failed") waiting.delete(cell.name);
    },
    settled(moved) {
      waiting.clear();
      for (const name of told.keys()) if (!(name in moved)) { told.delete(name); send({ to: "unset", name }); }
    },
    again: () => [...told].map(([name, value]) => ({ to: "set", name, value })),
  };
}

export function controlOf(cell: CellReport | undefined): ControlPart | null {
  return (cell?.show ?? []).find((part): part is ControlPart => part.part === "control") ?? null;
}
