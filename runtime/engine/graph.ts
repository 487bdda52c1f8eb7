// The door to the graph package: nodes that read one another and run again when what they read has changed.

import { Runtime } from "@observablehq/runtime";

/** What a node is told of itself. */
export interface NodeWatcher<T> {
  /** Its value is out of date; it runs as soon as what it reads is there. */
  stale(): void;
  value(outcome: T): void;
}

export interface GraphNode<T> {
  /** (Re)defines the node. `run` gets the outcomes of `inputs` in their order; it must not reject: faults are outcomes.
   *  `signal` is aborted when newer work has overtaken the run; what it then gives is dropped. */
  define(inputs: readonly string[], run: (inputs: readonly T[], signal: AbortSignal) => T | Promise<T>): void;
  remove(): void;
}

export interface Graph<T> {
  /** A node under an id of its own. Nodes must not read in a circle. */
  node(id: string, watcher: NodeWatcher<T>): GraphNode<T>;
  dispose(): void;
}

/** An empty graph. Redefinitions made in one go are computed together, in the order of reading; only what reads a redefined node runs again. */
export function createGraph<T>(): Graph<T> {
  const runtime = new Runtime(null, () => undefined);
  const module = runtime.module();
  return {
    node(id, watcher) {
      // A removed variable is computed once more, to nothing.
      let removed = false;
      const variable = module.variable({
        pending: () => { if (!removed) watcher.stale(); },
        fulfilled: (value) => { if (!removed) watcher.value(value as T); },
        rejected: (error) => { if (!removed) throw error; },
      });
      return {
        define(inputs, run) {
          variable.define(key(id), [...inputs.map(key), "invalidation"], (...given: never[]) => raced(given, run));
        },
        remove: () => { removed = true; variable.delete(); },
      };
    },
    dispose: () => runtime.dispose(),
  };
}

/** The package keeps names such as "invalidation" for itself. */
function key(id: string): string {
  return `cell ${id}`;
}

/** The package lets a newer definition in only when the older one's promise has settled: so the older one ends when it is invalidated. */
function raced<T>(given: readonly unknown[], run: (inputs: readonly T[], signal: AbortSignal) => T | Promise<T>): Promise<T> {
  const invalidation = given[given.length - 1] as Promise<void>;
  const controller = new AbortController();
  const overtaken = new Promise<T>((_, reject) => { void invalidation.then(() => { controller.abort(); reject(new DOMException("overtaken", "AbortError")); }); });
  // When the run wins, nobody waits for this promise any more.
  overtaken.catch(() => undefined);
  return Promise.race([Promise.resolve(run(given.slice(0, -1) as T[], controller.signal)), overtaken]);
}
