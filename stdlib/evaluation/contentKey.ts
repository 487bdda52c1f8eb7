// A short text that stands for plain data: the same for the same content, wherever it came from.

import { isSeries } from "../series/series.ts";

/** What was computed from the same content before, or what `make` gives, which is then kept. */
export type Recall = <T>(key: string, make: () => T) => T;

/** Computes everything, keeps nothing. */
export const recallNothing: Recall = (_key, make) => make();

/** Typed arrays enter by a hash of 64 bits, everything else as it is written. Two different contents share a key with a
 *  probability of about 5e-20 a pair.
 *  @param value  plain data: numbers, texts, truths, lists, objects, typed arrays
 *  Cost: one pass over the content. */
export function contentKey(value: unknown): string {
  if (typeof value !== "object" || value === null) return typeof value === "string" ? JSON.stringify(value) : String(value);
  if (value instanceof Float64Array) return `#${hashOf(value)}`;
  if (ArrayBuffer.isView(value)) return contentKey(Float64Array.from(value as unknown as ArrayLike<number>));
  if (Array.isArray(value)) return `[${value.map(contentKey).join(",")}]`;
  // The times of a series follow from its start, spacing and length.
  const implied = isSeries(value) ? "times" : null;
  return `{${Object.entries(value).flatMap(([name, inner]) => (name === implied || inner === undefined ? [] : [`${/^\w+$/.test(name) ? name : JSON.stringify(name)}:${contentKey(inner)}`])).join(",")}}`;
}

/** Two hashes of the doubles' bits in one pass, by the multiply-and-xor scheme of Fowler, Noll & Vo with a rotation, so that
 *  high bits reach low ones too. */
function hashOf(values: Float64Array): string {
  // No copy: doubles stand at multiples of 8 bytes in their buffer, so that words of 4 begin where they do.
  const words = new Uint32Array(values.buffer, values.byteOffset, 2 * values.length);
  let a = 0x811c9dc5, b = 0x9e3779b9;
  for (let i = 0; i < words.length; i++) {
    a = Math.imul(a ^ words[i], 0x01000193);
    a ^= a >>> 15;
    b = Math.imul((b ^ words[i]) + i, 0x85ebca6b);
    b ^= b >>> 13;
  }
  return `${values.length}.${(a >>> 0).toString(36)}.${(b >>> 0).toString(36)}`;
}
