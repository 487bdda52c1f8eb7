// The door to the Markdown parser: CommonMark with GFM and TeX mathematics, every node with its exact place.

import type { Nodes, Root } from "mdast";
import { fromMarkdown } from "mdast-util-from-markdown";
import { gfmFromMarkdown } from "mdast-util-gfm";
import { mathFromMarkdown } from "mdast-util-math";
import { toString } from "mdast-util-to-string";
import { gfm } from "micromark-extension-gfm";
import { math } from "micromark-extension-math";

/** The tree of a Markdown text; places are UTF-16 offsets into that text. Never throws. Cost O(length). */
export function markdownTree(text: string): Root {
  // A byte order mark is not counted by the parser; a space in its place keeps every offset true.
  const counted = text.startsWith("\uFEFF") ? ` ${text.slice(1)}` : text;
  return fromMarkdown(counted, { extensions: [gfm(), math()], mdastExtensions: [gfmFromMarkdown(), mathFromMarkdown()] });
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
