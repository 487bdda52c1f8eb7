// The figures of a cell's value, each with the expression that reads it.

import type { Field } from "./messages.ts";
import { isList, isSeries } from "./values.ts";

/** Numbers, texts and truths found in a value, the nearest first; at most `most`. Lists give their first items.
 *  Series give what describes them, not their values. Cost O(most). */
export function fieldsOf(name: string, value: unknown, most = 80): Field[] {
  const fields: Field[] = [];
  const queue: { expression: string; value: unknown; depth: number }[] = [{ expression: name, value, depth: 0 }];
  const seen = new Set<unknown>();
  for (let i = 0; i < queue.length && fields.length < most && i < 2000; i += 1) {
    const { expression, value: here, depth } = queue[i];
    if (typeof here === "number" || typeof here === "string" || typeof here === "boolean") {
      if (typeof here !== "string" || here.length <= 80) fields.push({ expression, value: here });
      continue;
    }
    if (typeof here !== "object" || here === null || depth >= 4 || seen.has(here)) continue;
    seen.add(here);
    for (const [step, inner] of partsOf(here)) queue.push({ expression: expression + step, value: inner, depth: depth + 1 });
  }
  return fields;
}

const LIST_ITEMS = 12;

function partsOf(value: object): (readonly [string, unknown])[] {
  if (isList(value)) return Array.from({ length: Math.min(value.length, LIST_ITEMS) }, (_, i) => [`[${i}]`, value[i]] as const);
  const keys = isSeries(value) ? ["n", "name", "unit", "every", "start"] : Object.keys(value);
  return keys.flatMap((key) => {
    const own = Object.getOwnPropertyDescriptor(value, key);
    if (own === undefined || !("value" in own) || key === "__proto__") return [];
    return [[/^[\p{ID_Start}$_][\p{ID_Continue}$]*$/u.test(key) ? `.${key}` : `[${JSON.stringify(key)}]`, own.value as unknown] as const];
  });
}
