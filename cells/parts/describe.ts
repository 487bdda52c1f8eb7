// Any value of a notebook in a few words, for tables of names and values.

import { isSeries } from "../../stdlib/index.ts";
import { plain } from "./format.ts";
import { spanText } from "./seriesParts.ts";
import { count } from "./words.ts";

/** "a series, every month from …", "a list of 12 items", "fit (0,1,1)": what a reader should know of a value that is no single figure. */
export function inWords(value: unknown): string {
  if (value === null || value === undefined) return "not given";
  if (typeof value === "number") return plain(value, 6);
  if (typeof value === "string" || typeof value === "boolean") return String(value);
  if (typeof value === "function") return "a function";
  if (Array.isArray(value) || ArrayBuffer.isView(value)) return listWords(value as ArrayLike<unknown>);
  if (isSeries(value)) return `a series, ${spanText(value)}, ${count(value.n, "period")}`;
  const object = value as Readonly<Record<string, unknown>>;
  if (typeof object["label"] === "string" && ("phi" in object || "rule" in object)) return object["label"];
  const keys = Object.keys(object);
  return keys.length === 0 ? "an empty object" : `an object with ${keys.slice(0, 6).join(", ")}${keys.length > 6 ? ", …" : ""}`;
}

function listWords(list: ArrayLike<unknown>): string {
  const short = list.length > 0 && list.length <= 8 && Array.from(list).every((v) => typeof v === "number" || typeof v === "string");
  return short ? Array.from(list, inWords).join(", ") : `a list of ${count(list.length, "item")}`;
}
