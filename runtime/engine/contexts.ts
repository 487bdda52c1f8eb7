// What a run may ask of the engine.

import type { RunContext } from "../../cells/kind.ts";
import { createAside } from "./aside.ts";
import { controlFor } from "./controls.ts";
import { sendOut, worthMs } from "./helpers.ts";
import type { Job } from "./helpers.ts";
import type { EngineHost } from "./host.ts";
import type { Pace } from "./nextTask.ts";
import type { Outcome } from "./outcome.ts";
import type { Definition } from "./runCell.ts";
import { labelOf } from "./state.ts";
import type { EngineState, Entry } from "./state.ts";
import { createTimeLeft } from "./timeLeft.ts";

export const codeNeedsLeave = "Code is not allowed to run here: `script` cells need `--allow-code`";

export interface Contexts {
  /** For a cell's own run: what it says of itself is kept in its entry. */
  full(entry: Entry, cell: Definition, outcomes: ReadonlyMap<string, Outcome>, signal: AbortSignal): RunContext;
  /** For a run off to the side: it says nothing to the page. */
  quiet(name: string | null, source: Readonly<Record<string, string>>, setting: unknown, signal: AbortSignal): RunContext;
}

/** @param progressed  told when a cell's progress has changed */
export function createContexts(state: EngineState, host: EngineHost, pace: Pace, progressed: (id: string) => void): Contexts {
  const quiet = (name: string | null, source: Readonly<Record<string, string>>, setting: unknown, signal: AbortSignal): RunContext => ({
    name, setting, source, signal,
    read: (file) => host.read(file),
    progress: () => undefined,
    breathe: () => pace.breathe(signal),
    stopped: () => false,
    recall: (_key, make) => make(),
    ahead: () => undefined,
    note: () => undefined,
    importCode: (code, inputs) => {
      const { importCode } = host;
      if (importCode === undefined || state.codeRefused !== null) return Promise.reject(new Error(state.codeRefused ?? codeNeedsLeave));
      return importCode.call(host, code, inputs, signal);
    },
    recompute: () => Promise.reject(new Error("A recomputation off to the side cannot start another")),
    control: (each) => controlFor(state, each),
  });
  const full = (entry: Entry, cell: Definition, outcomes: ReadonlyMap<string, Outcome>, signal: AbortSignal): RunContext => {
    const aside = createAside({
      language: state.language, library: state.library, outcomes,
      definition: (id) => state.cells.get(id)?.definition ?? null,
      mark: (id) => state.cells.get(id)?.mark ?? "",
      resolve: (name) => state.plan?.resolve(name) ?? null,
      label: (id) => labelOf(state, id),
      setting: (id) => state.settings.get(id),
      contextFor: (each, setting) => quiet(each.text.name, sourcesOf(each), setting, signal),
    }, entry.swept);
    const { stop, memory } = entry;
    const timeLeft = createTimeLeft();
    let job: Job | null = null;
    const help = (leftMs: number | null): void => {
      const { helpers } = host;
      if (job === null || helpers === undefined || leftMs === null || leftMs < worthMs) return;
      entry.endHelp = sendOut(job, helpers.call(host), memory.has, memory.put);
      job = null;
    };
    return {
      ...quiet(cell.text.name, sourcesOf(cell), state.settings.get(cell.id), signal),
      read: (file) => { entry.files.add(file); return host.read(file); },
      progress: (done, total, what = "") => {
        if (signal.aborted) return;
        const leftMs = timeLeft(done, total);
        help(leftMs);
        entry.progress = { done, total, what, leftMs };
        progressed(entry.id);
      },
      note: (text) => { if (!entry.notes.includes(text)) entry.notes.push(text); },
      recall: memory.recall,
      ahead: (task, shared, items) => { job = { task, shared, items }; },
      stopped: () => {
        if (stop === null) return false;
        stop.heard = true;
        stop.obeyed ||= stop.wanted;
        return stop.obeyed;
      },
      recompute: aside,
      control: (name) => controlFor(state, name),
    };
  };
  return { full, quiet };
}

function sourcesOf(cell: Definition): Readonly<Record<string, string>> {
  return Object.fromEntries(cell.text.options.map((option) => [option.name, option.source]));
}
