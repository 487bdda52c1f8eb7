// Keeps a notebook's cells, claims and live numbers current. It has no page and no files, and runs alike in a worker and in Node.

import type { Kind, Language, RunContext } from "../../cells/kind.ts";
import type { Part } from "../../cells/parts/part.ts";
import { agrees, formatLike, patternFault } from "../text/live.ts";
import type { LiveValue } from "../text/live.ts";
import type { LiveNumber, Notebook } from "../text/notebook.ts";
import { parse } from "../text/parse.ts";
import type { ParsedNotebook } from "../text/parse.ts";
import { createAside } from "./aside.ts";
import type { Swept } from "./aside.ts";
import { evaluate, farOf } from "./evaluation.ts";
import { fieldsOf } from "./fields.ts";
import { createGraph } from "./graph.ts";
import type { GraphNode } from "./graph.ts";
import { libraryScope } from "./library.ts";
import type { CellReport, CellState, FromEngine, NumberReport } from "./messages.ts";
import { sendOut, worthMs } from "./helpers.ts";
import type { Helper, Job } from "./helpers.ts";
import { createMemory } from "./memory.ts";
import type { Memory } from "./memory.ts";
import { createPace, nextTask } from "./nextTask.ts";
import { sameData } from "./outcome.ts";
import type { CutShort, NotDone, Outcome } from "./outcome.ts";
import { createOutliner } from "./outline.ts";
import { planOf } from "./plan.ts";
import type { Plan, PlannedCell, PlannedNumber } from "./plan.ts";
import { messageOf, runCell } from "./runCell.ts";
import type { CellSurroundings, Definition } from "./runCell.ts";
import { createTimeLeft } from "./timeLeft.ts";
import { EvaluationError, Overtaken, Undecided, whatIs } from "./values.ts";

export interface EngineHost {
  /** Reads a file inside the notebook's folder. Rejects with a message for the reader. */
  read(file: string): Promise<Uint8Array>;
  send(message: FromEngine): void;
  /** Runs a script isolated and gives its exports; left out where scripts cannot run. Aborted with its signal. */
  /** Another worker of this program, to make ahead what long work needs; left out where there is none. */
  helpers?(): readonly Helper[];
  importCode?(source: string, inputs: Readonly<Record<string, unknown>>, signal: AbortSignal): Promise<Readonly<Record<string, unknown>>>;
}

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
  setAllowCode(allow: boolean): void;
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
  controls(): readonly { readonly name: string; readonly kind: string; readonly at: unknown }[];
  /** The cell that is running just now. */
  running(): string | null;
  dispose(): void;
}

export interface ClaimReport { readonly cell: string; readonly line: number; readonly claim: string; readonly holds: boolean | null; readonly message: string | null }

/** A cell or live number as the engine keeps it. */
interface Entry {
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
interface Stop { readonly controller: AbortController; heard: boolean; wanted: boolean; obeyed: boolean }

/** A cell whose last run took longer says that it is at work before it runs again. */
const SLOW_MS = 25;

/** An engine for one notebook. @param language kinds, library and checker: `language` of cells/index.ts */
export function createEngine(language: Language, host: EngineHost, options: EngineOptions = {}): Engine {
  return new NotebookEngine(language, host, options);
}

class NotebookEngine implements Engine {
  readonly #language: Language;
  readonly #host: EngineHost;
  readonly #library;
  readonly #graph = createGraph<Outcome>();
  readonly #pace = createPace();
  readonly #outline = createOutliner();
  readonly #draw: boolean;
  #width: number;
  #allowCode: boolean;
  #notebook: ParsedNotebook | null = null;
  #plan: Plan | null = null;
  #version = 0;
  #cells = new Map<string, PlannedCell>();
  #numbers = new Map<string, PlannedNumber>();
  readonly #entries = new Map<string, Entry>();
  readonly #settings = new Map<string, unknown>();
  /** Settings that were dropped, until their control is moved again: the reader is told. `reason` is null where the control's own text was edited. */
  readonly #dropped = new Map<string, { readonly at: unknown; readonly reason: string | null }>();
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
    this.#language = language;
    this.#host = host;
    this.#library = libraryScope(language);
    this.#width = options.width ?? 720;
    this.#allowCode = options.allowCode ?? true;
    this.#draw = options.draw ?? true;
  }

  setText(text: string, version = this.#version + 1): void {
    const before = this.#notebook;
    this.#version = version;
    this.#notebook = parse(text, this.#language.kinds, { names: this.#library.names, ...(before === null ? {} : { before }) });
    this.#plan = planOf(this.#notebook, this.#language);
    const planned = new Map<string, PlannedCell | PlannedNumber>([...this.#plan.cells, ...this.#plan.numbers].map((each) => [each.id, each]));
    this.#cells = new Map(this.#plan.cells.map((each) => [each.id, each]));
    this.#numbers = new Map(this.#plan.numbers.map((each) => [each.id, each]));
    for (const [id, entry] of this.#entries) if (!planned.has(id)) this.#remove(id, entry);
    const changed: string[] = [];
    for (const [id, each] of planned) {
      const entry = this.#entries.get(id);
      // A report speaks of places; those of cells that stand as they did are in the outline.
      if (entry !== undefined && (entry.state !== "current" || this.#numbers.has(id))) this.#dirty.add(id);
      if (entry?.mark === each.mark) continue;
      if (entry !== undefined) this.#held.delete(id);
      // The newest intention wins: an edit of a control's own text drops its moved setting.
      if (entry !== undefined && this.#settings.has(id)) this.#drop(id, this.#controlPart(id)?.at ?? this.#settings.get(id), null);
      changed.push(id);
    }
    for (const id of changed) this.#ensure(id, planned.get(id));
    this.#host.send(this.#outline(this.#notebook, this.#plan, version));
    this.#redefine(changed);
    this.#scheduleFlush();
  }

  set(name: string, value: unknown): void {
    this.#settings.set(name, value);
    this.#dropped.delete(name);
    this.#rerun([name]);
  }

  unset(name: string): void {
    if (this.#settings.delete(name)) this.#rerun([name]);
  }

  fileChanged(file: string): void {
    this.#rerun([...this.#entries].filter(([, entry]) => entry.files.has(file)).map(([id]) => id));
  }

  setWidth(width: number): void {
    if (width === this.#width) return;
    this.#width = width;
    for (const id of this.#cells.keys()) this.#dirty.add(id);
    this.#scheduleFlush();
  }

  setAllowCode(allow: boolean): void {
    if (allow === this.#allowCode) return;
    this.#allowCode = allow;
    this.#rerun([...this.#cells.values()].filter((cell) => cell.definition?.kind.body === "code").map((cell) => cell.id));
  }

  stop(id: string): void {
    const stop = this.#entries.get(id)?.stop;
    if (stop === null || stop === undefined) return;
    if (stop.heard && !stop.wanted) stop.wanted = true;
    else stop.controller.abort();
  }

  goOn(id: string): void {
    if (this.#entries.get(id)?.stopped === true) this.#rerun([id]);
  }

  hold(id: string): void {
    this.#held.add(id);
    this.#rerun([id]);
  }

  settle(): Promise<void> {
    if (!this.#unsettled) return Promise.resolve();
    return new Promise((resolve) => { this.#waiters.push(resolve); });
  }

  notebook(): Notebook | null { return this.#notebook; }
  cells(): readonly CellReport[] { return [...this.#cells.keys()].map((id) => this.#cellReport(id)); }
  numbers(): readonly NumberReport[] { return [...this.#numbers.keys()].map((id) => this.#numberReport(id)); }
  running(): string | null { return [...this.#running.keys()].at(-1) ?? null; }

  claims(): readonly ClaimReport[] {
    return [...this.#cells.values()].flatMap((cell) => {
      if (this.#kindOf(cell)?.body !== "claims") return [];
      const outcome = this.#entries.get(cell.id)?.outcome ?? null;
      return cell.text.options.map((option, i): ClaimReport => {
        const decided = outcome?.ok ? outcome.claims?.[i] : undefined;
        return { cell: cell.id, line: option.line, claim: option.name, holds: decided?.holds ?? null, message: decided === undefined ? `Undecided: ${this.#cellReport(cell.id).message ?? "not computed"}` : decided.message ?? null };
      });
    });
  }

  moved(): Readonly<Record<string, unknown>> {
    const moved: Record<string, unknown> = {};
    for (const name of this.#settings.keys()) {
      const part = this.#controlPart(name);
      if (part !== null && !sameData(part.at, part.kept)) moved[name] = part.at;
    }
    return moved;
  }

  refused(): Readonly<Record<string, string>> {
    return Object.fromEntries([...this.#dropped].flatMap(([name, { reason }]) => (reason === null ? [] : [[name, reason] as const])));
  }

  controls(): readonly { readonly name: string; readonly kind: string; readonly at: unknown }[] {
    return [...this.#cells.values()].flatMap((cell) => {
      if (this.#kindOf(cell)?.control === undefined || cell.text.name === null) return [];
      const outcome = this.#entries.get(cell.id)?.outcome;
      return [{ name: cell.text.name, kind: cell.text.kind, at: outcome?.ok ? outcome.value : null }];
    });
  }

  dispose(): void {
    this.#disposed = true;
    for (const entry of this.#entries.values()) entry.stop?.controller.abort();
    this.#graph.dispose();
  }

  // What runs.

  #ensure(id: string, each: PlannedCell | PlannedNumber | undefined): void {
    if (each === undefined) return;
    const known = this.#entries.get(id);
    const entry: Entry = known ?? {
      id, mark: each.mark, inputs: each.inputs, state: "waiting", outcome: null, ranOn: null, run: {}, runs: 0, lastMs: 0, notes: [], progress: null, files: new Set(), stop: null, stopped: false, memory: createMemory(), endHelp: null, swept: new Map(), shown: null,
      node: this.#graph.node(id, { stale: () => this.#stale(id), value: (outcome) => this.#arrived(id, outcome) }),
    };
    entry.mark = each.mark;
    entry.inputs = each.inputs;
    entry.run = {};
    this.#entries.set(id, entry);
  }

  #remove(id: string, entry: Entry): void {
    entry.stop?.controller.abort();
    entry.node.remove();
    this.#entries.delete(id);
    this.#outstanding.delete(id);
    this.#dirty.delete(id);
    this.#settings.delete(id);
    this.#dropped.delete(id);
    this.#held.delete(id);
  }

  #drop(id: string, at: unknown, reason: string | null): void {
    this.#settings.delete(id);
    this.#dropped.set(id, { at, reason });
  }

  /** Asks for a new run of cells, on whatever they read. */
  #rerun(ids: readonly string[]): void {
    const known = ids.filter((id) => this.#entries.has(id));
    for (const id of known) { const entry = this.#entries.get(id); if (entry !== undefined) entry.run = {}; }
    if (known.length > 0) this.#redefine(known);
  }

  #redefine(ids: readonly string[]): void {
    this.#unsettled = true;
    for (const id of this.#dependants(ids)) this.#stale(id);
    for (const id of ids) {
      const entry = this.#entries.get(id);
      if (entry !== undefined) entry.node.define(entry.inputs, (inputs, signal) => this.#run(entry, inputs, signal));
    }
    this.#scheduleFlush();
  }

  #dependants(ids: readonly string[]): ReadonlySet<string> {
    const readers = new Map<string, string[]>();
    for (const entry of this.#entries.values()) for (const input of entry.inputs) readers.set(input, [...(readers.get(input) ?? []), entry.id]);
    const found = new Set(ids);
    for (const id of found) for (const reader of readers.get(id) ?? []) found.add(reader);
    return found;
  }

  #stale(id: string): void {
    const entry = this.#entries.get(id);
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
      const cell = this.#cells.get(entry.id);
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
      if (entry.runs === 1 || entry.lastMs > SLOW_MS || definition.kind.body === "code") this.#send(this.#cellReport(entry.id));
    }
    const started = performance.now();
    this.#running.delete(entry.id);
    this.#running.set(entry.id, signal);
    try {
      const context = this.#context(entry, definition, outcomes, signal);
      const around = { language: this.#language, library: this.#library, outcomes, label: (id: string) => this.#label(id), context, notes: entry.notes };
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
    if (!signal.aborted && this.#settings.get(cell.id) === setting) this.#drop(cell.id, setting, refused.message);
    return outcome;
  }

  async #runNumber(entry: Entry, inputs: readonly Outcome[], signal: AbortSignal): Promise<Outcome> {
    const number = this.#numbers.get(entry.id);
    if (number === undefined) throw new Overtaken("no longer in the text");
    entry.runs += 1;
    const outcomes = new Map(entry.inputs.map((id, i) => [id, inputs[i]]));
    const notes: string[] = [];
    try {
      const context = { ...this.#quietContext(null, {}, undefined, signal), recall: entry.memory.recall };
      const value = await evaluate(number.text.expression, { language: this.#language, library: this.#library, names: number.names, outcomes, label: (id) => this.#label(id), context, whole: true, missing: (why) => { notes.push(why); } });
      return { ok: true, result: value, value, notes, claims: null, cutShort: null };
    } catch (error) {
      if (error instanceof Overtaken || signal.aborted) throw error;
      const message = error instanceof EvaluationError || !(error instanceof Undecided) ? messageOf(error) : `Undecided: ${error.message}`;
      return { ok: false, state: "failed", root: entry.id, message, at: null, notes: [] };
    }
  }

  #context(entry: Entry, cell: Definition, outcomes: ReadonlyMap<string, Outcome>, signal: AbortSignal): RunContext {
    const aside = createAside({
      language: this.#language, library: this.#library, outcomes,
      definition: (id) => this.#cells.get(id)?.definition ?? null,
      mark: (id) => this.#cells.get(id)?.mark ?? "",
      resolve: (name) => this.#plan?.resolve(name) ?? null,
      label: (id) => this.#label(id),
      setting: (id) => this.#settings.get(id),
      contextFor: (each, setting) => this.#quietContext(each.text.name, sourcesOf(each), setting, signal),
    }, entry.swept);
    const { stop, memory } = entry;
    const timeLeft = createTimeLeft();
    let job: Job | null = null;
    const help = (leftMs: number | null): void => {
      const { helpers } = this.#host;
      if (job === null || helpers === undefined || leftMs === null || leftMs < worthMs) return;
      entry.endHelp = sendOut(job, helpers.call(this.#host), memory.has, memory.put);
      job = null;
    };
    return {
      ...this.#quietContext(cell.text.name, sourcesOf(cell), this.#settings.get(cell.id), signal),
      read: (file) => { entry.files.add(file); return this.#host.read(file); },
      progress: (done, total, what = "") => {
        if (signal.aborted) return;
        const leftMs = timeLeft(done, total);
        help(leftMs);
        entry.progress = { done, total, what, leftMs };
        this.#dirty.add(entry.id);
        this.#scheduleFlush();
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
      control: (name) => this.#controlFor(name),
    };
  }

  /** What a run off to the side gets: it says nothing to the page. */
  #quietContext(name: string | null, source: Readonly<Record<string, string>>, setting: unknown, signal: AbortSignal): RunContext {
    return {
      name, setting, source, signal,
      read: (file) => this.#host.read(file),
      progress: () => undefined,
      breathe: () => this.#pace.breathe(signal),
      stopped: () => false,
      recall: (_key, make) => make(),
      ahead: () => undefined,
      note: () => undefined,
      importCode: (code, inputs) => {
        const { importCode } = this.#host;
        if (importCode === undefined || !this.#allowCode) return Promise.reject(new Error("Code is not allowed to run here: `script` cells need `--allow-code`"));
        return importCode.call(this.#host, code, inputs, signal);
      },
      recompute: () => Promise.reject(new Error("A recomputation off to the side cannot start another")),
      control: (each) => this.#controlFor(each),
    };
  }

  #controlFor(name: string): ReturnType<RunContext["control"]> {
    const cell = this.#cells.get(name);
    const part = this.#controlPart(name);
    if (cell === undefined || part === null) throw new Error(`\`${name}\` is not a control: name a slider, choice, switch or window`);
    return { kind: part.control, at: this.#valueOf(name) ?? part.at, values: valuesOf(part) };
  }

  #valueOf(id: string): unknown {
    const outcome = this.#entries.get(id)?.outcome;
    return outcome?.ok ? outcome.value : null;
  }

  #controlPart(name: string): Extract<Part, { part: "control" }> | null {
    const entry = this.#entries.get(name);
    if (entry === undefined || this.#kindOf(this.#cells.get(name))?.control === undefined) return null;
    const part = this.#shown(entry)?.parts?.find((each) => each.part === "control");
    return part !== undefined && part.part === "control" ? part : null;
  }

  // What is said.

  #arrived(id: string, outcome: Outcome): void {
    const entry = this.#entries.get(id);
    if (entry === undefined) return;
    entry.outcome = outcome;
    entry.progress = null;
    entry.state = outcome.ok ? "current" : outcome.state;
    this.#outstanding.delete(id);
    // A cell that is done is not held up by the cells that read it: they may run before the next task.
    if (outcome.ok && this.#cells.has(id) && !this.#disposed) { this.#dirty.delete(id); this.#send(this.#cellReport(id)); } else this.#dirty.add(id);
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
      if (this.#cells.has(id)) this.#send(this.#cellReport(id));
      else if (this.#numbers.has(id) && !this.#outstanding.has(id)) this.#host.send({ from: "number", number: this.#numberReport(id) });
    }
    if (this.#outstanding.size > 0 || this.#dirty.size > 0 || !this.#unsettled) return;
    this.#unsettled = false;
    this.#host.send({ from: "settled", version: this.#version, moved: this.moved() });
    const waiters = this.#waiters;
    this.#waiters = [];
    for (const resolve of waiters) resolve();
  }

  #send(cell: CellReport): void {
    this.#host.send({ from: "cell", cell });
  }

  #cellReport(id: string): CellReport {
    const cell = this.#cells.get(id);
    const entry = this.#entries.get(id);
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
      if (outcome.state === "blocked") return { ...base, message: `blocked by ${this.#label(outcome.root)}, which failed` };
      if (problem !== null && cell.definition === null) return { ...base, message: problem.message, at: { line: problem.line, column: problem.column, from: problem.from, to: problem.to } };
      return { ...base, message: outcome.message, at: this.#placeOf(cell, outcome.at), notes: outcome.notes, stopped };
    }
    const shown = this.#shown(entry);
    if (shown !== null && shown.fault !== null) return { ...base, state: "failed", message: shown.fault };
    const notes = [...outcome.notes, ...this.#textNotes(text.index), ...this.#droppedNote(id)];
    return { ...base, notes, message: this.#cutWords(id, outcome.cutShort), stopped, show: shown?.parts ?? null, fields: text.name === null || !this.#draw ? null : fieldsOf(text.name, outcome.value) };
  }

  #cutWords(id: string, cut: CutShort | null): string | null {
    if (cut === null) return null;
    const rest = "Claims and live numbers that read it are undecided.";
    return cut.root === id ? `Ended early by hand, ${farOf(cut)}. ${rest}` : `Rests on ${this.#label(cut.root)}, which was ended early by hand, ${farOf(cut)}. ${rest}`;
  }

  #textNotes(index: number): string[] {
    return (this.#notebook?.problems ?? []).filter((each) => each.cell === index && each.severity === "note").map((each) => each.message);
  }

  #droppedNote(id: string): string[] {
    const dropped = this.#dropped.get(id);
    if (dropped === undefined || sameData(dropped.at, this.#controlPart(id)?.kept)) return [];
    const why = dropped.reason === null ? "; its text was edited since" : `, which it cannot take: ${dropped.reason}`;
    return [`It had been moved to ${settingWords(dropped.at)}${why}. It stands as the text says`];
  }

  #shown(entry: Entry): Entry["shown"] {
    const { outcome } = entry;
    const kind = this.#kindOf(this.#cells.get(entry.id));
    if (outcome === null || !outcome.ok || kind === undefined) return null;
    if (!this.#draw && kind.control === undefined) return null;
    if (entry.shown?.outcome === outcome && entry.shown.width === this.#width) return entry.shown;
    try {
      entry.shown = { outcome, width: this.#width, parts: kind.show(outcome.result as never, { name: this.#cells.get(entry.id)?.text.name ?? null, width: this.#width }), fault: null };
    } catch (error) {
      entry.shown = { outcome, width: this.#width, parts: null, fault: `The result could not be drawn: ${messageOf(error)}` };
    }
    return entry.shown;
  }

  #numberReport(id: string): NumberReport {
    const number = this.#numbers.get(id);
    if (number === undefined) throw new Error(`no number ${id}`);
    const { text } = number;
    const outcome = this.#entries.get(id)?.outcome ?? null;
    const base = { index: text.index, line: text.line, from: text.from, to: text.to, expression: text.expression, saved: text.saved, now: null, value: null, state: "undecided" as const };
    if (outcome === null) return { ...base, message: null };
    if (!outcome.ok) return { ...base, message: outcome.message };
    const judged = judge(text, outcome.value);
    return { ...base, ...judged, message: Number.isNaN(outcome.value) ? `${[judged.message ?? "", ...outcome.notes.slice(-1)].join(": ")}${this.#remarksOn(number)}` : judged.message };
  }

  /** What the values that a number reads say about themselves: why a figure of theirs is missing stands there. */
  #remarksOn(number: PlannedNumber): string {
    const said = number.inputs.flatMap((id) => { const notes = notesIn(this.#valueOf(id)); return notes.length === 0 ? [] : [`. ${this.#label(id)} notes: ${notes.join(" ")}`]; });
    return said.join("");
  }

  #placeOf(cell: PlannedCell, at: { readonly option: string | null; readonly from: number; readonly to: number | null } | null): CellReport["at"] {
    if (at === null || this.#notebook === null) return null;
    const option = cell.text.options.find((each) => each.name === at.option);
    if (option === undefined) return null;
    const from = option.expression.from + at.from;
    const to = at.to === null ? option.expression.to : option.expression.from + at.to;
    const before = this.#notebook.text.slice(option.from, from);
    const breaks = before.split(/\r\n|\n|\r/);
    return { line: option.line + breaks.length - 1, column: (breaks.length === 1 ? from - option.from : breaks[breaks.length - 1].length) + 1, from, to };
  }

  #kindOf(cell: PlannedCell | undefined): Kind<never, unknown> | undefined {
    return cell?.definition?.kind ?? this.#language.kinds.find((kind) => kind.name === cell?.text.kind);
  }

  #label(id: string): string {
    const cell = this.#cells.get(id);
    if (cell === undefined) return `\`${id}\``;
    return cell.text.name === null ? `the \`${cell.text.kind}\` in line ${cell.text.line}` : `\`${cell.text.name}\``;
  }
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

function valuesOf(part: Extract<Part, { part: "control" }>): readonly unknown[] {
  switch (part.control) {
    case "slider": return Array.from({ length: Math.max(0, Math.floor((part.to - part.from) / part.step + 1e-9)) + 1 }, (_, i) => Number((part.from + i * part.step).toPrecision(12)));
    case "choice": return part.among;
    case "switch": return [false, true];
    case "window": return [];
  }
}

/** @example settingWords({ from: "2019-01", to: "2020-12" }) // "2019-01 to 2020-12" */
function settingWords(setting: unknown): string {
  const ends = typeof setting === "object" && setting !== null ? Object.values(setting).filter((each) => typeof each === "string") : [];
  return ends.length > 0 ? ends.join(" to ") : JSON.stringify(setting);
}

function sourcesOf(cell: Definition): Readonly<Record<string, string>> {
  return Object.fromEntries(cell.text.options.map((option) => [option.name, option.source]));
}

/** Readers see values only: a control may show another kept setting and still stand where it stood. */
function sameForReaders(a: Outcome, b: Outcome): boolean {
  return a === b || (a.ok && b.ok && Object.is(a.value, b.value));
}

/** How far a run had come that obeyed a stop; null where it ran to its end. */
function cutOf(entry: Entry, stop: Stop): CutShort | null {
  return stop.obeyed ? { root: entry.id, done: entry.progress?.done ?? 0, total: entry.progress?.total ?? 0 } : null;
}

/** What rests on work that was cut short is cut short too. */
function withCut(outcome: Outcome, own: CutShort | null, inputs: readonly Outcome[]): Outcome {
  if (!outcome.ok) return outcome;
  const cutShort = own ?? inputs.reduce<CutShort | null>((found, input) => found ?? (input.ok ? input.cutShort : null), null);
  return cutShort === null ? outcome : { ...outcome, cutShort };
}

/** Dropped by the graph: the run that gave it has been overtaken. */
function overtaken(id: string): Outcome {
  return { ok: false, state: "failed", root: id, message: "overtaken by newer work", at: null, notes: [] };
}
