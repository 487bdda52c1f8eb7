// Finds the cells among the fenced code blocks of a text.

import type { Code } from "mdast";
import { placeOf } from "./markdown.ts";

/** A top-level fenced code block. Places are in the text. */
export interface Fence {
  readonly from: number; readonly to: number;
  /** First word of the info string, and the rest. */
  readonly word: string; readonly rest: string;
  readonly infoFrom: number; readonly infoTo: number;
  readonly bodyFrom: number; readonly bodyTo: number;
  readonly indent: number;
  readonly fence: string;
  /** False where the end of the file closes it. */
  readonly closed: boolean;
}

/** Reads a code node as a fence; null for indented code. */
export function fenceOf(text: string, node: Code): Fence | null {
  const place = placeOf(node);
  if (place === null) return null;
  // The node may begin after its indentation; look at the whole line.
  const lineFrom = startOfLine(text, place.from);
  const opening = /^(\uFEFF?[ \t]{0,3})(`{3,}|~{3,})[ \t]*([^\n\r]*)/.exec(text.slice(lineFrom, endOfLine(text, place.from)));
  if (opening === null) return null;
  const fence = opening[2];
  const lineTo = endOfLine(text, place.from);
  const bodyFrom = Math.min(afterBreak(text, lineTo), text.length);
  const info = opening[3].trimEnd();
  const infoFrom = lineFrom + opening[0].length - opening[3].length;
  const lastFrom = startOfLine(text, place.to);
  const closing = lastFrom >= bodyFrom && place.to > lastFrom ? /^[ \t]{0,3}(`{3,}|~{3,})[ \t]*$/.exec(text.slice(lastFrom, place.to)) : null;
  const closed = closing !== null && closing[1][0] === fence[0] && closing[1].length >= fence.length;
  const words = /^(\S*)\s*([\s\S]*)$/.exec(info);
  return {
    from: place.from, to: place.to, word: words?.[1] ?? "", rest: words?.[2] ?? "", infoFrom, infoTo: infoFrom + info.length,
    bodyFrom: Math.min(bodyFrom, place.to), bodyTo: closed ? lastFrom : Math.max(place.to, Math.min(bodyFrom, place.to)),
    indent: opening[1].replace("\uFEFF", "").length, fence, closed,
  };
}

/** Looked for step by step: a search for a sign that is nowhere in the text would go through all of it. */
function startOfLine(text: string, from: number): number {
  let at = from;
  while (at > 0 && text[at - 1] !== "\n" && text[at - 1] !== "\r") at -= 1;
  return at;
}

function endOfLine(text: string, from: number): number {
  const match = /[\n\r]/g;
  match.lastIndex = from;
  return match.exec(text)?.index ?? text.length;
}

function afterBreak(text: string, at: number): number {
  if (text[at] === "\r" && text[at + 1] === "\n") return at + 2;
  return at < text.length ? at + 1 : at;
}
