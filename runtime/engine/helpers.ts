// Other workers of the same program, which make ahead of time what a long run will recall. The run goes forward through its
// items and the helpers come to meet it from the end: neither waits for the other, and what is there is the same either way.

import type { Language } from "../../cells/kind.ts";

/** To a helper. `shared` comes with a job's first item. */
export type ToHelper = { readonly to: "help"; readonly task: string; readonly shared?: unknown; readonly item: { readonly key: string } };
/** From a helper. Without a value the item could not be made there: it is made where it is needed, which tells why. */
export type FromHelper = { readonly from: "helped"; readonly key: string; readonly made: { readonly value: unknown } | null };

export interface Helper {
  post(message: ToHelper): void;
  /** Called for each answer; once, with null, where the helper cannot be had or has broken down. */
  listen(hear: (message: FromHelper | null) => void): void;
  end(): void;
}

export interface Job { readonly task: string; readonly shared: unknown; readonly items: readonly { readonly key: string }[] }

/** What is left of a run must be longer than this for helpers to be worth their start: each reads the program, and meets its
 *  first estimates unpractised. */
export const worthMs = 1500;

/** Sends the items of a job out, the last first, one at a time to each helper.
 *  @param known  whether an item is there by now
 *  @param put    takes what was made
 *  @returns ends the job and its helpers */
export function sendOut(job: Job, helpers: readonly Helper[], known: (key: string) => boolean, put: (key: string, value: unknown) => void): () => void {
  const left = [...job.items];
  const nextInto = (helper: Helper, first: boolean): void => {
    let item = left.pop();
    while (item !== undefined && known(item.key)) item = left.pop();
    if (item !== undefined) helper.post({ to: "help", task: job.task, item, ...(first ? { shared: job.shared } : {}) });
  };
  for (const helper of helpers) {
    helper.listen((message) => {
      if (message === null) { helper.end(); return; }
      if (message.made !== null) put(message.key, message.made.value);
      nextInto(helper, false);
    });
    nextInto(helper, true);
  }
  return () => { left.length = 0; for (const helper of helpers) helper.end(); };
}

/** The helper's side: answers messages with what was made. */
export function createHelped(language: Language): (message: ToHelper) => FromHelper {
  let make: ((item: never) => unknown) | null = null;
  return ({ task, shared, item }) => {
    try {
      if (shared !== undefined) make = language.ahead?.[task]?.(shared as never) ?? null;
      return { from: "helped", key: item.key, made: make === null ? null : { value: make(item as never) } };
    } catch {
      // The run meets the same fault where it needs the item, and has the words and the place for it.
      return { from: "helped", key: item.key, made: null };
    }
  };
}
