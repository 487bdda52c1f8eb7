// Finds the live numbers in prose: inline links whose destination starts with `=`.

import type { Link, Nodes, RootContent } from "mdast";
import { parseExpression } from "./expression.ts";
import type { LiveNumber } from "./notebook.ts";
import { LIVE, placeOf, plainText, walk } from "./markdown.ts";

export interface NumberProblem { readonly code: string; readonly message: string; readonly from: number; readonly to: number }
export interface FoundNumbers { readonly numbers: readonly Omit<LiveNumber, "index" | "line" | "column">[]; readonly problems: readonly NumberProblem[] }

/** The live numbers of one top-level block, and what is wrong with any. Cost O(length of the block). */
export function liveNumbersOf(text: string, block: RootContent): FoundNumbers {
  const place = placeOf(block);
  if (place === null || block.type === "code") return { numbers: [], problems: [] };
  const source = text.slice(place.from, place.to);
  if (!/\][(:]/.test(source) || !source.includes("=")) return { numbers: [], problems: [] };
  const numbers: Omit<LiveNumber, "index" | "line" | "column">[] = [];
  const problems: NumberProblem[] = [];
  const quiet: { from: number; to: number }[] = [];
  walk(block, (node) => {
    const at = placeOf(node);
    if (at === null) return;
    if (["inlineCode", "code", "math", "inlineMath", "html"].includes(node.type)) quiet.push(at);
    if (node.type === "inlineMath" && text.slice(at.from, at.to).search(LIVE) >= 0) problems.push({ code: "live-number-in-mathematics", message: "A live number stands between two `$`, which make mathematics of it: write `\\$` for the sign of a currency", from: at.from, to: at.from + 1 });
    if (node.type === "definition" && node.url.startsWith("=")) problems.push({ code: "live-number-reference", message: "A live number is an inline link: write `[value](=expression)` where it stands in the text", ...at });
    if (node.type === "link" && node.url.startsWith("=") && text[at.from] === "[") {
      quiet.push(at);
      readLink(node, at, numbers, problems);
      return false;
    }
    return;
  });
  for (const match of source.matchAll(/\]\(\s*<?=/g)) {
    const at = place.from + match.index;
    if (quiet.some((each) => at >= each.from && at < each.to) || escaped(text, at)) continue;
    const lineEnd = text.slice(at).search(/[\n\r]/);
    problems.push({ code: "live-number-not-link", message: `This is not read as a link: ${match[0].includes("<") ? "inside `<…>`, write `\\<` and `\\>` for the signs" : "wrap the expression in `<…>`"}, as in \`[${match[0].includes("<") ? "yes](<=checks.p \\> 0.05" : "0.31](<=ljungBox(airline, 24).p"}>)\``, from: at, to: lineEnd < 0 ? place.to : Math.min(place.to, at + Math.min(lineEnd, 60)) });
  }
  return { numbers, problems };
}

function readLink(link: Link, at: { from: number; to: number }, numbers: Omit<LiveNumber, "index" | "line" | "column">[], problems: NumberProblem[]): void {
  const first = link.children[0];
  const last = link.children.at(-1);
  const savedFrom = first === undefined ? at.from + 1 : placeOf(first)?.from ?? at.from + 1;
  const savedTo = last === undefined ? savedFrom : placeOf(last)?.to ?? savedFrom;
  if (link.children.some((each: Nodes) => each.type !== "text")) {
    problems.push({ code: "live-number-not-plain", message: "The text of a live number is plain: put emphasis around the whole link, not inside it", from: savedFrom, to: savedTo });
    return;
  }
  const expression = link.url.slice(1);
  const parsed = parseExpression(expression);
  const fault = parsed.faults[0];
  if (fault !== undefined) problems.push({ code: fault.code === "empty" ? "live-number-empty" : fault.code, message: `In the live number \`${shorten(expression)}\`: ${fault.message}`, ...at });
  numbers.push({ from: at.from, to: at.to, expression, reads: parsed.reads, saved: plainText(link), savedPlace: { from: savedFrom, to: savedTo }, pattern: link.title ?? null });
}

function escaped(text: string, at: number): boolean {
  let backslashes = 0;
  while (text[at - 1 - backslashes] === "\\") backslashes += 1;
  return backslashes % 2 === 1;
}

function shorten(text: string): string {
  return text.length > 40 ? `${text.slice(0, 40)}…` : text;
}
