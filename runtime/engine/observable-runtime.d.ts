// The part of the graph package that graph.ts uses; the package brings no types.

declare module "@observablehq/runtime" {
  export interface Observer {
    pending?(): void;
    fulfilled?(value: unknown, name: string | null): void;
    rejected?(error: unknown, name: string | null): void;
  }
  export interface Variable {
    define(name: string, inputs: readonly string[], definition: (...inputs: never[]) => unknown): Variable;
    delete(): Variable;
  }
  export interface Module {
    variable(observer?: Observer): Variable;
  }
  export class Runtime {
    constructor(builtins?: Readonly<Record<string, unknown>> | null, global?: (name: string) => unknown);
    module(): Module;
    dispose(): void;
  }
}
