// The door to the Markdown parser: CommonMark with GFM and TeX mathematics, every node with its exact place.

import type { Nodes, Root } from "mdast";
import { fromMarkdown } from "mdast-util-from-markdown";
import { gfmFromMarkdown } from "mdast-util-gfm";
import { mathFromMarkdown } from "mdast-util-math";
import { toString } from "mdast-util-to-string";
import { gfm } from "micromark-extension-gfm";
import { math } from "micromark-extension-math";

/** Made once, for a text is read in many pieces. */
const marks: Parameters<typeof fromMarkdown>[1] & object = { extensions: [gfm(), math()], mdastExtensions: [gfmFromMarkdown(), mathFromMarkdown()] };

/** The tree of a Markdown text; places are UTF-16 offsets into that text. Never throws. Cost O(length). */
export function markdownTree(text: string): Root {
  // A byte order mark is not counted by the parser; a space in its place keeps every offset true.
  const counted = text.startsWith("\uFEFF") ? ` ${text.slice(1)}` : text;
  const money = moneyOf(counted);
  const tree = fromMarkdown(money === null ? counted : money.text, marks);
  if (money !== null) walk(tree, (node) => { putBack(node, money.stand); });
  return tree;
}

/** What looks like a live number: its saved text, its destination (bare, or in `<…>`) and its title. Bounded, so that no text takes time by its square. */
export const LIVE = /\[([^\][\n\r]{0,200})\]\([ \t]{0,9}(?:<=[^<>\n\r]{0,2000}>|=[^\s<>]{0,2000})(?:[ \t]{1,9}(?:"[^"\n\r]{0,200}"|'[^'\n\r]{0,200}'))?[ \t]{0,9}\)/g;

/** The sign of a currency, in a live number and its pattern, would begin mathematics: `[$1,204](=sum "$,.0f")`. There another sign stands in
 *  for it while the text is read, of the same length, so that every place stays true. null where there is nothing to do. */
function moneyOf(text: string): { readonly text: string; readonly stand: string } | null {
  if (!text.includes("$") || !text.includes("](")) return null;
  let code = 0xe000;
  while (text.includes(String.fromCharCode(code))) code += 1;
  const stand = String.fromCharCode(code);
  // Two signs in the saved text are mathematics; one behind a backslash is a sign already.
  const read = text.replace(LIVE, (link: string, saved: string) => (/\$.*\$/.test(saved) ? link : link.replace(/(?<!\\)\$/g, stand)));
  return read === text ? null : { text: read, stand };
}

function putBack(node: Nodes, stand: string): void {
  for (const [key, value] of Object.entries(node)) if (typeof value === "string" && value.includes(stand)) Reflect.set(node, key, value.replaceAll(stand, "$"));
}

/** The words of a node without their marks. */
export function plainText(node: Nodes): string {
  return toString(node, { includeImageAlt: false });
}

/** Offsets of a node; null for a node that the parser made up without a place. */
export function placeOf(node: Nodes): { readonly from: number; readonly to: number } | null {
  const from = node.position?.start.offset;
  const to = node.position?.end.offset;
  return from === undefined || to === undefined ? null : { from, to };
}

/** Calls `visit` on a node and all below it, in the order of the text; a `visit` that gives false is not followed below. */
export function walk(node: Nodes, visit: (node: Nodes) => boolean | void): void {
  if (visit(node) === false || !("children" in node)) return;
  for (const child of node.children) walk(child, visit);
}
