// What is dear and perhaps not needed: made when first asked for, and kept.

/** @returns gives the same value each time; a `make` that throws is asked again */
export function once<T>(make: () => T): () => T {
  let made: { readonly value: T } | null = null;
  return () => (made ??= { value: make() }).value;
}
