import { checkOptions } from "../../cells/check.ts";
import type { Kind, RunContext } from "../../cells/kind.ts";

/** Surroundings of one run: files from memory, notes kept. */
export function contextOf(given: Partial<RunContext> & { readonly files?: Readonly<Record<string, string | Uint8Array>> } = {}): RunContext & { readonly notes: string[] } {
  const notes: string[] = [];
  const { files = {}, ...rest } = given;
  return {
    name: "cell", setting: undefined, source: {}, signal: new AbortController().signal, notes,
    read: async (file) => {
      if (!Object.hasOwn(files, file)) throw new Error(`there is no file ${file} in the notebook's folder`);
      const content = files[file];
      return typeof content === "string" ? new TextEncoder().encode(content) : content;
    },
    progress: () => undefined, breathe: async () => undefined, stopped: () => false, recall: (_key, make) => make(), ahead: () => undefined, note: (text) => { notes.push(text); },
    importCode: async () => ({}), recompute: async () => null,
    control: () => { throw new Error("no control here"); },
    ...rest,
  };
}

/** Checks the options as the engine does, and runs. */
export async function runCell<O, R>(kind: Kind<O, R>, given: Readonly<Record<string, unknown>>, context: RunContext = contextOf()): Promise<R> {
  return kind.run(checkOptions(kind, given) as O, context);
}
