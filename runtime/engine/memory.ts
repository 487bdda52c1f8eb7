// What a cell computed in its last few runs, by what it was computed from: a run that needs it again takes it from here.

export interface Memory {
  /** What was computed under this key before, or what `make` gives, which is then kept. A `make` that throws keeps nothing. */
  recall<T>(key: string, make: () => T): T;
  has(key: string): boolean;
  /** Keeps what was made elsewhere. */
  put(key: string, value: unknown): void;
  /** A run has come to its end: what none of the last few used is forgotten. */
  ended(): void;
}

/** Runs whose results stay: a slider moved there and back finds its places as it left them. */
const runsKept = 6;

export function createMemory(): Memory {
  const kept = new Map<string, { readonly value: unknown; usedIn: number }>();
  let run = 0;
  return {
    recall<T>(key: string, make: () => T): T {
      const known = kept.get(key);
      if (known !== undefined) { known.usedIn = run; return known.value as T; }
      const value = make();
      kept.set(key, { value, usedIn: run });
      return value;
    },
    has: (key) => kept.has(key),
    put(key, value) { if (!kept.has(key)) kept.set(key, { value, usedIn: run }); },
    ended() {
      for (const [key, each] of kept) if (each.usedIn <= run - runsKept) kept.delete(key);
      run += 1;
    },
  };
}
