// The engine in its worker: messages to and fro, and a heartbeat that notices when it no longer answers.

import type { FromEngine, ToEngine } from "../engine/messages.ts";

export interface EngineLink {
  send(message: ToEngine): void;
  /** Ends the worker, whatever it is doing, and starts another. Nothing said to the old one is known to it. */
  restart(): void;
  close(): void;
}

export interface EngineEars {
  hear(message: FromEngine): void;
  /** It has not answered for so many milliseconds. Called again while that lasts. */
  silent(ms: number): void;
  answered(running: string | null): void;
  /** The worker's program failed outright. */
  broken(message: string): void;
}

const beatMs = 500;

/** @param source the worker's program: a classic script
 *  @param first  a worker that runs it already, and to which nothing has been said */
export function engineLink(source: string, first: Worker, ears: EngineEars): EngineLink {
  const address = URL.createObjectURL(new Blob([source], { type: "text/javascript" }));
  let worker: Worker;
  let beat = 0;
  /** When the oldest unanswered beat was sent; null when all are answered. */
  let asked: number | null = null;

  const start = (mine: Worker): void => {
    worker = mine; asked = null;
    mine.addEventListener("message", (event: MessageEvent) => {
      if (mine !== worker) return;
      const message = event.data as FromEngine;
      if (typeof message !== "object" || message === null) return;
      if (message.from === "pong") { asked = null; ears.answered(message.running); } else ears.hear(message);
    });
    mine.addEventListener("error", (event) => { if (mine === worker) { event.preventDefault(); ears.broken(event.message || "The computing part of this page stopped."); } });
  };
  start(first);
  const timer = setInterval(() => {
    const now = performance.now();
    if (asked !== null) { ears.silent(now - asked); return; }
    asked = now; beat += 1;
    worker.postMessage({ to: "ping", beat } satisfies ToEngine, []);
  }, beatMs);

  return {
    send(message) { worker.postMessage(message, []); },
    restart() { worker.terminate(); start(new Worker(address)); },
    close() { clearInterval(timer); worker.terminate(); URL.revokeObjectURL(address); },
  };
}
