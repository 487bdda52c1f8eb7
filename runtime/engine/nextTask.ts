// Lets messages and timers in between two pieces of work.

import { Overtaken } from "./values.ts";

/** Resolves in a later task, as soon as may be: timers are held back by browsers, messages are not. */
export function nextTask(): Promise<void> {
  if (typeof setImmediate === "function") return new Promise((resolve) => { setImmediate(resolve); });
  return new Promise((resolve) => {
    const { port1, port2 } = new MessageChannel();
    port1.addEventListener("message", () => { port1.close(); resolve(); });
    port1.start();
    port2.postMessage(null);
  });
}

export interface Pace {
  /** Lets others in if work has gone on for `sliceMs`. @throws Overtaken where the signal has been aborted */
  breathe(signal: AbortSignal): Promise<void>;
}

/** One pace for all the work of an engine: what counts is the time since others were last let in. */
export function createPace(sliceMs = 6): Pace {
  let last = performance.now();
  return {
    async breathe(signal) {
      if (performance.now() - last >= sliceMs) {
        await nextTask();
        last = performance.now();
      }
      if (signal.aborted) throw new Overtaken("overtaken by newer work");
    },
  };
}
