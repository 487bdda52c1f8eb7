// What an engine needs of the program around it.

import type { Helper } from "./helpers.ts";
import type { FromEngine } from "./messages.ts";

export interface EngineHost {
  /** Reads a file inside the notebook's folder. Rejects with a message for the reader. */
  read(file: string): Promise<Uint8Array>;
  send(message: FromEngine): void;
  /** Another worker of this program, to make ahead what long work needs; left out where there is none. */
  helpers?(): readonly Helper[];
  /** Runs a script isolated and gives its exports; left out where scripts cannot run. Aborted with its signal. */
  importCode?(source: string, inputs: Readonly<Record<string, unknown>>, signal: AbortSignal): Promise<Readonly<Record<string, unknown>>>;
}
