// A run context for tests of kinds: nothing outside answers unless the test says so.

import type { RunContext } from "../../cells/kind.ts";

export function madeContext(changes: Partial<RunContext> = {}): RunContext & { readonly said: string[]; readonly steps: [number, number][] } {
  const said: string[] = [], steps: [number, number][] = [];
  const refuse = (what: string) => (): never => { throw new Error(`the test gave no ${what}`); };
  return {
    name: "made", setting: undefined, source: {}, signal: new AbortController().signal, said, steps,
    read: refuse("file"), importCode: refuse("script"), recompute: refuse("recomputation"), control: refuse("control"),
    progress: (done, total) => { steps.push([done, total]); }, breathe: async () => {}, stopped: () => false, recall: (_key, make) => make(), ahead: () => undefined, note: text => { said.push(text); }, ...changes,
  };
}
