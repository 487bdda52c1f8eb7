// Keeps a notebook's cells, claims and live numbers current. It has no page and no files, and runs alike in a worker and in Node.

import type { Language } from "../../cells/kind.ts";
import type { Notebook } from "../text/notebook.ts";
import { parse } from "../text/parse.ts";
import { codeNeedsLeave, createContexts } from "./contexts.ts";
import type { Contexts } from "./contexts.ts";
import { controlReports, movedSettings, refusedSettings } from "./controls.ts";
import type { ControlReport } from "./controls.ts";
import { evaluate } from "./evaluation.ts";
import { createGraph } from "./graph.ts";
import type { EngineHost } from "./host.ts";
import { libraryScope } from "./library.ts";
import { createMemory } from "./memory.ts";
import type { CellReport, NumberReport } from "./messages.ts";
import { createPace, nextTask } from "./nextTask.ts";
import { numberReport } from "./numberReport.ts";
import { sameData, withCut } from "./outcome.ts";
import type { CutShort, NotDone, Outcome } from "./outcome.ts";
import { createOutliner } from "./outline.ts";
import { planOf } from "./plan.ts";
import type { PlannedCell, PlannedNumber } from "./plan.ts";
import { cellReport, claimReports } from "./reports.ts";
import type { ClaimReport } from "./reports.ts";
import { messageOf, runCell } from "./runCell.ts";
import type { CellSurroundings, Definition } from "./runCell.ts";
import { controlPart } from "./shown.ts";
import { labelOf } from "./state.ts";
import type { EngineState, Entry, Stop } from "./state.ts";
import { EvaluationError, Overtaken, Undecided } from "./values.ts";

export interface EngineOptions {
  /** Pixels that a figure may take across (default 720). */
  readonly width?: number;
  /** Whether `script` cells may run (default: where the host can run them). */
  readonly allowCode?: boolean;
  /** Whether descriptions of what cells show are made (default true). */
  readonly draw?: boolean;
}

export interface Engine {
  /** Takes a new text; what did not change keeps its value. */
  setText(text: string, version?: number): void;
  /** Moves a control, until its own text is edited or it is unset. */
  set(name: string, value: unknown): void;
  unset(name: string): void;
  /** A file has changed: what read it reads it again. */
  fileChanged(file: string): void;
  setWidth(width: number): void;
  /** @param reason  what `script` cells say where they may not run */
  setAllowCode(allow: boolean, reason?: string): void;
  /** Ends a cell's work early. One that keeps what it has done gives that, marked as cut short; one that does not, or that is
   *  told a second time, is broken off and has failed until something that it reads changes. */
  stop(id: string): void;
  /** Runs a stopped cell again. */
  goOn(id: string): void;
  /** A cell that was stopped by hand with its worker: it is not run until its own text changes. */
  hold(id: string): void;
  /** Resolves when nothing is at work or waiting any more. */
  settle(): Promise<void>;
  notebook(): Notebook | null;
  cells(): readonly CellReport[];
  numbers(): readonly NumberReport[];
  claims(): readonly ClaimReport[];
  /** Settings that differ from the text's. */
  moved(): Readonly<Record<string, unknown>>;
  /** Settings that their controls could not take, each with the reason: those controls stand as the text says. */
  refused(): Readonly<Record<string, string>>;
  /** Names of the controls, with what they stand at. */
  controls(): readonly ControlReport[];
  /** The cell that is running just now. */
  running(): string | null;
  dispose(): void;
}

/** A cell whose last run took longer says that it is at work before it runs again. */
const SLOW_MS = 25;

/** An engine for one notebook. @param language kinds, library and checker: `language` of cells/index.ts */
export function createEngine(language: Language, host: EngineHost, options: EngineOptions = {}): Engine {
  return new NotebookEngine(language, host, options);
}

class NotebookEngine implements Engine {
  readonly #state: EngineState;
  readonly #host: EngineHost;
  readonly #graph = createGraph<Outcome>();
  readonly #pace = createPace();
  readonly #contexts: Contexts;
  readonly #outline = createOutliner();
  #version = 0;
  readonly #held = new Set<string>();
  /** Ids whose present value is out of date. */
  readonly #outstanding = new Set<string>();
  readonly #dirty = new Set<string>();
  #flushing = false;
  #unsettled = false;
  #waiters: (() => void)[] = [];
  /** Cells that are running, the last one begun last. */
  readonly #running = new Map<string, AbortSignal>();
  #disposed = false;

  constructor(language: Language, host: EngineHost, options: EngineOptions) {
    this.#host = host;
    this.#state = {
      language, library: libraryScope(language), draw: options.draw ?? true, width: options.width ?? 720, codeRefused: options.allowCode ?? true ? null : codeNeedsLeave,
      notebook: null, plan: null, cells: new Map(), numbers: new Map(), entries: new Map(), settings: new Map(), dropped: new Map(),
    };
    this.#contexts = createContexts(this.#state, host, this.#pace, (id) => { this.#dirty.add(id); this.#scheduleFlush(); });
  }

  setText(text: string, version = this.#version + 1): void {
    const before = this.#state.notebook;
    this.#version = version;
    this.#state.notebook = parse(text, this.#state.language.kinds, { names: this.#state.library.names, ...(before === null ? {} : { before }) });
    this.#state.plan = planOf(this.#state.notebook, this.#state.language);
    const planned = new Map<string, PlannedCell | PlannedNumber>([...this.#state.plan.cells, ...this.#state.plan.numbers].map((each) => [each.id, each]));
    this.#state.cells = new Map(this.#state.plan.cells.map((each) => [each.id, each]));
    this.#state.numbers = new Map(this.#state.plan.numbers.map((each) => [each.id, each]));
    for (const [id, entry] of this.#state.entries) if (!planned.has(id)) this.#remove(id, entry);
    const changed: string[] = [];
    for (const [id, each] of planned) {
      const entry = this.#state.entries.get(id);
      // A report speaks of places; those of cells that stand as they did are in the outline.
      if (entry !== undefined && (entry.state !== "current" || this.#state.numbers.has(id))) this.#dirty.add(id);
      if (entry?.mark === each.mark) continue;
      if (entry !== undefined) this.#held.delete(id);
      // The newest intention wins: an edit of a control's own text drops its moved setting.
      if (entry !== undefined && this.#state.settings.has(id)) this.#drop(id, controlPart(this.#state, id)?.at ?? this.#state.settings.get(id), null);
      changed.push(id);
    }
    for (const id of changed) this.#ensure(id, planned.get(id));
    this.#host.send(this.#outline(this.#state.notebook, this.#state.plan, version));
    this.#redefine(changed);
    this.#scheduleFlush();
  }

  set(name: string, value: unknown): void {
    this.#state.settings.set(name, value);
    this.#state.dropped.delete(name);
    this.#rerun([name]);
  }

  unset(name: string): void {
    if (this.#state.settings.delete(name)) this.#rerun([name]);
  }

  fileChanged(file: string): void {
    this.#rerun([...this.#state.entries].filter(([, entry]) => entry.files.has(file)).map(([id]) => id));
  }

  setWidth(width: number): void {
    if (width === this.#state.width) return;
    this.#state.width = width;
    for (const id of this.#state.cells.keys()) this.#dirty.add(id);
    this.#scheduleFlush();
  }

  setAllowCode(allow: boolean, reason = codeNeedsLeave): void {
    const refused = allow ? null : reason;
    if (refused === this.#state.codeRefused) return;
    this.#state.codeRefused = refused;
    this.#rerun([...this.#state.cells.values()].filter((cell) => cell.definition?.kind.body === "code").map((cell) => cell.id));
  }

  stop(id: string): void {
    const stop = this.#state.entries.get(id)?.stop;
    if (stop === null || stop === undefined) return;
    if (stop.heard && !stop.wanted) stop.wanted = true;
    else stop.controller.abort();
  }

  goOn(id: string): void {
    if (this.#state.entries.get(id)?.stopped === true) this.#rerun([id]);
  }

  hold(id: string): void {
    this.#held.add(id);
    this.#rerun([id]);
  }

  settle(): Promise<void> {
    if (!this.#unsettled) return Promise.resolve();
    return new Promise((resolve) => { this.#waiters.push(resolve); });
  }

  notebook(): Notebook | null { return this.#state.notebook; }
  cells(): readonly CellReport[] { return [...this.#state.cells.keys()].map((id) => cellReport(this.#state, id)); }
  numbers(): readonly NumberReport[] { return [...this.#state.numbers.keys()].map((id) => numberReport(this.#state, id)); }
  running(): string | null { return [...this.#running.keys()].at(-1) ?? null; }

  claims(): readonly ClaimReport[] { return claimReports(this.#state); }
  moved(): Readonly<Record<string, unknown>> { return movedSettings(this.#state); }
  refused(): Readonly<Record<string, string>> { return refusedSettings(this.#state); }
  controls(): readonly ControlReport[] { return controlReports(this.#state); }

  dispose(): void {
    this.#disposed = true;
    for (const entry of this.#state.entries.values()) entry.stop?.controller.abort();
    this.#graph.dispose();
  }

  // What runs.

  #ensure(id: string, each: PlannedCell | PlannedNumber | undefined): void {
    if (each === undefined) return;
    const known = this.#state.entries.get(id);
    const entry: Entry = known ?? {
      id, mark: each.mark, inputs: each.inputs, state: "waiting", outcome: null, ranOn: null, run: {}, runs: 0, lastMs: 0, notes: [], progress: null, files: new Set(), stop: null, stopped: false, memory: createMemory(), endHelp: null, swept: new Map(), shown: null,
      node: this.#graph.node(id, { stale: () => this.#stale(id), value: (outcome) => this.#arrived(id, outcome) }),
    };
    entry.mark = each.mark;
    entry.inputs = each.inputs;
    entry.run = {};
    this.#state.entries.set(id, entry);
  }

  #remove(id: string, entry: Entry): void {
    entry.stop?.controller.abort();
    entry.node.remove();
    this.#state.entries.delete(id);
    this.#outstanding.delete(id);
    this.#dirty.delete(id);
    this.#state.settings.delete(id);
    this.#state.dropped.delete(id);
    this.#held.delete(id);
  }

  #drop(id: string, at: unknown, reason: string | null): void {
    this.#state.settings.delete(id);
    this.#state.dropped.set(id, { at, reason });
  }

  /** Asks for a new run of cells, on whatever they read. */
  #rerun(ids: readonly string[]): void {
    const known = ids.filter((id) => this.#state.entries.has(id));
    for (const id of known) { const entry = this.#state.entries.get(id); if (entry !== undefined) entry.run = {}; }
    if (known.length > 0) this.#redefine(known);
  }

  #redefine(ids: readonly string[]): void {
    this.#unsettled = true;
    for (const id of this.#dependants(ids)) this.#stale(id);
    for (const id of ids) {
      const entry = this.#state.entries.get(id);
      if (entry !== undefined) entry.node.define(entry.inputs, (inputs, signal) => this.#run(entry, inputs, signal));
    }
    this.#scheduleFlush();
  }

  #dependants(ids: readonly string[]): ReadonlySet<string> {
    const readers = new Map<string, string[]>();
    for (const entry of this.#state.entries.values()) for (const input of entry.inputs) readers.set(input, [...(readers.get(input) ?? []), entry.id]);
    const found = new Set(ids);
    for (const id of found) for (const reader of readers.get(id) ?? []) found.add(reader);
    return found;
  }

  #stale(id: string): void {
    const entry = this.#state.entries.get(id);
    if (entry === undefined) return;
    entry.state = "waiting";
    entry.progress = null;
    this.#outstanding.add(id);
    this.#dirty.add(id);
    this.#unsettled = true;
  }

  async #run(entry: Entry, inputs: readonly Outcome[], signal: AbortSignal): Promise<Outcome> {
    const { run } = entry;
    const before = entry.ranOn;
    if (before !== null && before.run === run && entry.outcome !== null && before.inputs.length === inputs.length && before.inputs.every((each, i) => sameForReaders(each, inputs[i]))) return entry.outcome;
    const stop: Stop = { controller: new AbortController(), heard: false, wanted: false, obeyed: false };
    entry.stop = stop;
    entry.stopped = false;
    const either = AbortSignal.any([signal, stop.controller.signal]);
    try {
      await this.#pace.breathe(signal);
      const cell = this.#state.cells.get(entry.id);
      const outcome = cell === undefined ? await this.#runNumber(entry, inputs, either) : await this.#runCell(entry, cell, inputs, either);
      if (signal.aborted) return outcome;
      entry.memory.ended();
      entry.stopped = stop.obeyed;
      const kept = withCut(this.#sameAsBefore(entry, cell, outcome), cutOf(entry, stop), inputs);
      entry.ranOn = { run, inputs };
      return kept;
    } catch (error) {
      if (stop.controller.signal.aborted && !signal.aborted) {
        entry.stopped = true;
        return { ok: false, state: "failed", root: entry.id, message: "Stopped by hand. It runs again when something that it reads changes", at: null, notes: [] };
      }
      if (error instanceof Overtaken || signal.aborted) return overtaken(entry.id);
      return { ok: false, state: "failed", root: entry.id, message: messageOf(error), at: null, notes: [] };
    } finally {
      if (entry.stop === stop) entry.stop = null;
    }
  }

  /** A control that still stands where it stood changes nothing for its readers. */
  #sameAsBefore(entry: Entry, cell: PlannedCell | undefined, outcome: Outcome): Outcome {
    const before = entry.outcome;
    const control = cell?.definition?.kind.control !== undefined;
    return control && outcome.ok && before?.ok && sameData(before.value, outcome.value) ? { ...outcome, value: before.value } : outcome;
  }

  async #runCell(entry: Entry, cell: PlannedCell, inputs: readonly Outcome[], signal: AbortSignal): Promise<Outcome> {
    const { definition } = cell;
    if (definition === null) return { ok: false, state: "failed", root: entry.id, message: "", at: null, notes: [] };
    if (this.#held.has(entry.id)) return { ok: false, state: "failed", root: entry.id, message: "Stopped by hand. It runs again when its text is edited", at: null, notes: [] };
    entry.state = "working";
    entry.notes = [];
    entry.files = new Set();
    const outcomes = new Map(entry.inputs.map((id, i) => [id, inputs[i]]));
    const blocked = definition.kind.body !== "claims" && definition.needs.some((id) => outcomes.get(id)?.ok === false);
    if (!blocked) {
      entry.runs += 1;
      // Said at once where it may take long, for nothing can be said while it runs.
      if (entry.runs === 1 || entry.lastMs > SLOW_MS || definition.kind.body === "code") this.#send(cellReport(this.#state, entry.id));
    }
    const started = performance.now();
    this.#running.delete(entry.id);
    this.#running.set(entry.id, signal);
    try {
      const context = this.#contexts.full(entry, definition, outcomes, signal);
      const around = { language: this.#state.language, library: this.#state.library, outcomes, label: (id: string) => labelOf(this.#state, id), context, notes: entry.notes };
      const outcome = await runCell(definition, around);
      return outcome.ok || context.setting === undefined ? outcome : await this.#withoutSetting(definition, around, outcome);
    } finally {
      entry.lastMs = performance.now() - started;
      entry.endHelp?.();
      entry.endHelp = null;
      if (this.#running.get(entry.id) === signal) this.#running.delete(entry.id);
    }
  }

  /** A setting that its control cannot take, perhaps since an edit elsewhere, gives way to the text's, where that can be had. */
  async #withoutSetting(cell: Definition, around: CellSurroundings, refused: NotDone): Promise<Outcome> {
    const { setting, signal } = around.context;
    const outcome = await runCell(cell, { ...around, context: { ...around.context, setting: undefined } });
    if (!outcome.ok) return refused;
    if (!signal.aborted && this.#state.settings.get(cell.id) === setting) this.#drop(cell.id, setting, refused.message);
    return outcome;
  }

  async #runNumber(entry: Entry, inputs: readonly Outcome[], signal: AbortSignal): Promise<Outcome> {
    const number = this.#state.numbers.get(entry.id);
    if (number === undefined) throw new Overtaken("no longer in the text");
    entry.runs += 1;
    const outcomes = new Map(entry.inputs.map((id, i) => [id, inputs[i]]));
    const notes: string[] = [];
    try {
      const context = { ...this.#contexts.quiet(null, {}, undefined, signal), recall: entry.memory.recall };
      const value = await evaluate(number.text.expression, { language: this.#state.language, library: this.#state.library, names: number.names, outcomes, label: (id) => labelOf(this.#state, id), context, whole: true, missing: (why) => { notes.push(why); } });
      return { ok: true, result: value, value, notes, claims: null, cutShort: null };
    } catch (error) {
      if (error instanceof Overtaken || signal.aborted) throw error;
      const message = error instanceof EvaluationError || !(error instanceof Undecided) ? messageOf(error) : `Undecided: ${error.message}`;
      return { ok: false, state: "failed", root: entry.id, message, at: null, notes: [] };
    }
  }

  // What is said.

  #arrived(id: string, outcome: Outcome): void {
    const entry = this.#state.entries.get(id);
    if (entry === undefined) return;
    entry.outcome = outcome;
    entry.progress = null;
    entry.state = outcome.ok ? "current" : outcome.state;
    this.#outstanding.delete(id);
    // A cell that is done is not held up by the cells that read it: they may run before the next task.
    if (outcome.ok && this.#state.cells.has(id) && !this.#disposed) { this.#dirty.delete(id); this.#send(cellReport(this.#state, id)); } else this.#dirty.add(id);
    this.#scheduleFlush();
  }

  /** Other reports go out together, so that a cell that is done at once never flickers through its states. */
  #scheduleFlush(): void {
    if (this.#flushing || this.#disposed) return;
    this.#flushing = true;
    void nextTask().then(() => { this.#flushing = false; this.#flush(); });
  }

  #flush(): void {
    if (this.#disposed) return;
    const dirty = [...this.#dirty];
    this.#dirty.clear();
    for (const id of dirty) {
      if (this.#state.cells.has(id)) this.#send(cellReport(this.#state, id));
      else if (this.#state.numbers.has(id) && !this.#outstanding.has(id)) this.#host.send({ from: "number", number: numberReport(this.#state, id) });
    }
    if (this.#outstanding.size > 0 || this.#dirty.size > 0 || !this.#unsettled) return;
    this.#unsettled = false;
    this.#host.send({ from: "settled", version: this.#version, moved: movedSettings(this.#state) });
    const waiters = this.#waiters;
    this.#waiters = [];
    for (const resolve of waiters) resolve();
  }

  #send(cell: CellReport): void {
    this.#host.send({ from: "cell", cell });
  }

}

/** Readers see values only: a control may show another kept setting and still stand where it stood. */
function sameForReaders(a: Outcome, b: Outcome): boolean {
  return a === b || (a.ok && b.ok && Object.is(a.value, b.value));
}

/** How far a run had come that obeyed a stop; null where it ran to its end. */
function cutOf(entry: Entry, stop: Stop): CutShort | null {
  return stop.obeyed ? { root: entry.id, done: entry.progress?.done ?? 0, total: entry.progress?.total ?? 0 } : null;
}

/** Dropped by the graph: the run that gave it has been overtaken. */
function overtaken(id: string): Outcome {
  return { ok: false, state: "failed", root: id, message: "overtaken by newer work", at: null, notes: [] };
}
