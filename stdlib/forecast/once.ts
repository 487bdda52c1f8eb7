// What is dear and perhaps not needed: made when first asked for, and kept.

export function once<T>(make: () => T): () => T {
  let made: { readonly value: T } | null = null;
  return () => (made ??= { value: make() }).value;
}
