// The engine in a worker: messages in, messages out. The host bundles it with the language.
// oxlint-disable unicorn/require-post-message-target-origin -- a worker's postMessage takes no origin

import type { Language } from "../../cells/kind.ts";
import { createEngine } from "./engine.ts";
import type { Engine } from "./engine.ts";
import { importIsolated } from "./isolated.ts";
import { createHelped } from "./helpers.ts";
import type { FromHelper, Helper, ToHelper } from "./helpers.ts";
import type { FromEngine, ToEngine } from "./messages.ts";

/** The part of a worker's global scope that this needs; tests give their own. */
export interface WorkerScope {
  postMessage(message: FromEngine | FromHelper): void;
  addEventListener(type: "message", listener: (event: { readonly data: ToEngine | ToHelper }) => void): void;
}

/** Answers messages with an engine for one notebook.
 *  Files are asked for by message and kept, so that a file is sent once and again only when it has changed. */
export function serveEngine(language: Language, scope: WorkerScope, importCode = importIsolated): Engine {
  const files = createFiles((file) => scope.postMessage({ from: "need", file }));
  const engine = createEngine(language, { send: (message) => scope.postMessage(message), read: files.read, importCode, helpers: startHelpers });
  const helped = createHelped(language);
  scope.addEventListener("message", ({ data }) => { if (data.to === "help") scope.postMessage(helped(data)); else receive(data, engine, files, scope); });
  return engine;
}

function receive(message: ToEngine, engine: Engine, files: Files, scope: WorkerScope): void {
  switch (message.to) {
    case "text": return engine.setText(message.text, message.version);
    case "set": return engine.set(message.name, message.value);
    case "unset": return engine.unset(message.name);
    case "file": if (files.arrived(message.file, message.bytes, message.reason)) engine.fileChanged(message.file); return;
    case "width": return engine.setWidth(message.width);
    case "allowCode": return engine.setAllowCode(message.allow, message.reason);
    case "hold": return engine.hold(message.cell);
    case "stop": return engine.stop(message.cell);
    case "goOn": return engine.goOn(message.cell);
    case "ping": return scope.postMessage({ from: "pong", beat: message.beat, running: engine.running() });
  }
}

/** As many as there are other cores, within reason. A worker of this worker's own program: the page's policy lets it start blobs. */
function startHelpers(): readonly Helper[] {
  const others = Math.min(mostHelpers, Math.max(0, (navigator.hardwareConcurrency || 1) - 1));
  return Array.from({ length: others }, () => {
    const worker = new Worker(location.href);
    return {
      post: (message) => worker.postMessage(message),
      listen(hear) {
        worker.addEventListener("message", ({ data }: MessageEvent<FromHelper | FromEngine>) => { if (data.from === "helped") hear(data); });
        worker.addEventListener("error", (event) => { event.preventDefault(); hear(null); });
      },
      end: () => worker.terminate(),
    } satisfies Helper;
  });
}

/** Each holds a copy of the data and its own compiled program. */
const mostHelpers = 6;

interface Files {
  read(file: string): Promise<Uint8Array>;
  /** True where the file had been here before: what read it must read it again. */
  arrived(file: string, bytes: Uint8Array | null, reason: string | undefined): boolean;
}

type Arrived = { readonly bytes: Uint8Array } | { readonly reason: string };

function createFiles(ask: (file: string) => void): Files {
  const here = new Map<string, Arrived>();
  const waiting = new Map<string, ((arrived: Arrived) => void)[]>();
  const given = (arrived: Arrived): Uint8Array => {
    if ("reason" in arrived) throw new Error(arrived.reason);
    return arrived.bytes;
  };
  return {
    async read(file) {
      const known = here.get(file);
      if (known !== undefined) return given(known);
      return given(await new Promise<Arrived>((resolve) => {
        const others = waiting.get(file);
        if (others !== undefined) { others.push(resolve); return; }
        waiting.set(file, [resolve]);
        ask(file);
      }));
    },
    arrived(file, bytes, reason) {
      const arrived = bytes === null ? { reason: reason ?? `There is no file "${file}" in the notebook's folder` } : { bytes };
      const known = here.has(file);
      here.set(file, arrived);
      for (const resolve of waiting.get(file) ?? []) resolve(arrived);
      waiting.delete(file);
      return known;
    },
  };
}
