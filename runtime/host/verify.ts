// `lagbook verify`: computes a notebook without a browser and says what does not stand.

import { basename, dirname, resolve } from "node:path";
import type { Setting } from "./arguments.ts";
import { CannotRun, exit } from "./io.ts";
import type { Io } from "./io.ts";
import { reportText } from "./report.ts";
import { Store } from "./store.ts";
import { computeWithin } from "./within.ts";
import type { Limits } from "./within.ts";

export interface VerifyCommand { readonly file: string; readonly json: boolean; readonly accept: boolean; readonly settings: readonly Setting[]; readonly allowCode: boolean; readonly limits: Limits }

export async function verify(command: VerifyCommand, io: Io): Promise<number> {
  const path = resolve(io.cwd, command.file), store = new Store(path);
  const stored = await store.read();
  const task = { notebook: basename(path), folder: dirname(path), settings: command.settings, allowCode: command.allowCode };
  let computed = await computeWithin({ ...task, text: stored.text }, command.limits), accepted = 0;
  if (command.accept) {
    const { acceptedText } = await import("./accept.ts");
    const text = acceptedText(stored.text, computed.numbers);
    accepted = computed.numbers.filter((number) => number.state === "moved").length;
    if (text !== stored.text) {
      const saved = await store.save(text, stored.hash);
      if ("found" in saved) throw new CannotRun(`${command.file} was changed by another program while it was computed, so nothing was written into it. Run the command again.`);
      computed = await computeWithin({ ...task, text }, command.limits);
    }
  }
  const { result } = computed;
  io.out(command.json ? `${JSON.stringify(result, plainNumbers, 2)}\n` : reportText(command.file, result, command.accept ? accepted : null));
  return result.ok ? exit.stands : exit.fails;
}

/** JSON has no NaN: an undecided value is null there, as `agrees` is. */
function plainNumbers(_key: string, value: unknown): unknown {
  return typeof value === "number" && !Number.isFinite(value) ? null : value;
}
