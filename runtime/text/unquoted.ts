// A text written without its quotes: `file: data/sales.csv` is a division to the expression language.

import type { Expression } from "./acorn.ts";

/** Words, numbers and what stands between the parts of a path or a date: nothing that only an expression has. */
const BARE = /^[\p{L}\p{N}_][\p{L}\p{N}_$ ./\\:%-]*$/u;

/** What to write for an option's source that cannot be meant as it stands; null where it can.
 *  @param type  the option's type in its table
 *  @param tree  the source's tree; null where it cannot be read */
export function unquotedText(source: string, type: unknown, tree: Expression | null): string | null {
  if (takes(type) !== "texts" || !BARE.test(source)) return null;
  // A sum may join two texts; a difference, product or quotient never is one.
  const never = tree === null || (tree.type === "BinaryExpression" && tree.operator !== "+");
  return never ? JSON.stringify(source) : null;
}

/** What to write where a bare name is unknown, and a text may stand in its place; null elsewhere. */
export function perhapsText(source: string, type: unknown, tree: Expression): string | null {
  const bare = tree.type === "Identifier" || (tree.type === "MemberExpression" && BARE.test(source));
  return bare && takes(type) !== "others" ? JSON.stringify(source) : null;
}

/** Whether an option takes nothing but texts (or lists of them), among others texts, or none. */
function takes(type: unknown): "texts" | "some" | "others" {
  if (type === "text") return "texts";
  if (type === "any" || type === "time") return "some";
  if (typeof type !== "object" || type === null) return "others";
  if ("listOf" in type) return takes(type.listOf);
  const parts = "anyOf" in type && Array.isArray(type.anyOf) ? type.anyOf.map(takes) : "oneOf" in type && Array.isArray(type.oneOf) ? type.oneOf.map((each: unknown) => (typeof each === "string" ? "texts" : "others")) : [];
  return parts.length > 0 && parts.every((each) => each === "texts") ? "texts" : parts.some((each) => each !== "others") ? "some" : "others";
}
