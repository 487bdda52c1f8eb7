// A notebook computed without a browser: what `verify`, `page` and `begin` stand on.

import { language } from "../../cells/index.ts";
import { createEngine } from "../engine/engine.ts";
import type { Engine } from "../engine/engine.ts";
import type { EngineHost } from "../engine/host.ts";
import type { CellReport, FromEngine, NumberReport } from "../engine/messages.ts";
import { resultOf } from "../engine/result.ts";
import type { VerifyResult } from "../engine/result.ts";
import type { Setting } from "./arguments.ts";
import { NoFile, readInside } from "./folder.ts";
import { CannotRun } from "./io.ts";
import { runScript } from "./script.ts";

export interface Task {
  readonly text: string;
  /** The notebook's file name, for the result. */
  readonly notebook?: string;
  /** The notebook's folder. */
  readonly folder: string;
  readonly settings: readonly Setting[];
  readonly allowCode: boolean;
  /** Pixels that a figure may take across. */
  readonly width?: number;
}

export interface Computed {
  readonly result: VerifyResult;
  /** All that the engine said, in order. */
  readonly messages: readonly FromEngine[];
  readonly cells: readonly CellReport[];
  readonly numbers: readonly NumberReport[];
  /** Files that were read, or the reason why one could not be. */
  readonly files: ReadonlyMap<string, { readonly bytes: Uint8Array } | { readonly reason: string }>;
}

export interface ComputeOptions {
  /** Runs the code of a script, where that is allowed. */
  readonly importCode?: NonNullable<EngineHost["importCode"]>;
  /** Other threads for long work. */
  readonly helpers?: NonNullable<EngineHost["helpers"]>;
  /** Told what the engine says, as it says it. */
  readonly heard?: (message: FromEngine) => void;
}

/** Computes everything and waits until it stands.
 *  @throws CannotRun where a setting names no control, or one that cannot take it */
export async function compute(task: Task, { importCode = runScript, helpers, heard }: ComputeOptions = {}): Promise<Computed> {
  const files = new Map<string, { readonly bytes: Uint8Array } | { readonly reason: string }>();
  const messages: FromEngine[] = [];
  const engine = createEngine(language, {
    read: (file) => readAndKeep(task.folder, file, files),
    send: (message) => { messages.push(message); heard?.(message); },
    importCode, ...(helpers === undefined ? {} : { helpers }),
  }, { allowCode: task.allowCode, ...(task.width === undefined ? {} : { width: task.width }) });
  try {
    engine.setText(task.text);
    checkSettings(engine, task.settings);
    for (const { name, value } of task.settings) engine.set(name, value);
    await engine.settle();
    for (const [name, reason] of Object.entries(engine.refused())) throw new CannotRun(`--set ${name}: ${reason}.`);
    return { result: resultOf(engine, task.notebook ?? ""), messages, cells: engine.cells(), numbers: engine.numbers(), files };
  } finally {
    engine.dispose();
  }
}

async function readAndKeep(folder: string, file: string, files: Map<string, { readonly bytes: Uint8Array } | { readonly reason: string }>): Promise<Uint8Array> {
  try {
    const bytes = await readInside(folder, file);
    files.set(file, { bytes });
    return bytes;
  } catch (error) {
    if (error instanceof NoFile) files.set(file, { reason: error.message });
    throw error;
  }
}

function checkSettings(engine: Engine, settings: readonly Setting[]): void {
  const controls = (engine.notebook()?.cells ?? []).filter((cell) => language.kinds.some((kind) => kind.name === cell.kind && kind.control !== undefined) && cell.name !== null);
  for (const { name } of settings) {
    if (controls.some((control) => control.name === name)) continue;
    const list = controls.map((control) => `${control.name} (${control.kind})`).join(", ");
    throw new CannotRun(`--set ${name}: the notebook has no control of that name.${list === "" ? " It has no controls." : ` Its controls: ${list}.`}`);
  }
}
