// The Markdown tree of a text, taking over from the tree before an edit what the edit did not touch.

import type { Node, Root, RootContent } from "mdast";
import { liveNumbersOf } from "./liveNumbers.ts";
import type { FoundNumbers } from "./liveNumbers.ts";
import { linesOf } from "./lines.ts";
import { markdownTree, placeOf, walk } from "./markdown.ts";
import { segmentStarts } from "./segments.ts";

/** One segment of a text, as it reads with some labels defined elsewhere; places are in `text`. */
export interface Segment {
  readonly text: string;
  readonly nodes: readonly RootContent[];
  readonly numbers: readonly FoundNumbers[];
  /** Labels that it defines, for links (`a`) and footnotes (`^a`). */
  readonly labels: readonly string[];
}

export type SegmentMemory = ReadonlyMap<string, Segment>;

export interface SegmentedTree {
  readonly root: Root;
  /** For each child of the root: its live numbers, with places counted from `at`. */
  readonly numbers: readonly { readonly at: number; readonly found: FoundNumbers }[];
  readonly memory: SegmentMemory;
}

/** The tree of `text`. Cost O(length) with a small factor for what `before` holds, the Markdown parser's for the rest. */
export function segmentedTree(text: string, before: SegmentMemory): SegmentedTree {
  const starts = segmentStarts(text);
  const memory = new Map<string, Segment>();
  const read = (source: string, foreign: readonly string[]): Segment => {
    const key = foreign.length === 0 ? source : `${foreign.join("\n")}\n\n\0${source}`;
    const known = memory.get(key) ?? before.get(key) ?? readSegment(source, foreign);
    memory.set(key, known);
    return known;
  };
  const plain = starts.map((start, i) => read(text.slice(start, starts[i + 1] ?? text.length), []));
  const labels = [...new Set(plain.flatMap((each) => each.labels))];
  const openings = labels.map((label) => `[${folded(label)}`);
  const segments = labels.length === 0 ? plain : plain.map((each) => {
    if (!each.text.includes("[")) return each;
    const text = folded(each.text).replaceAll("[ ", "[");
    const foreign = labels.filter((label, k) => text.includes(openings[k]) && !each.labels.includes(label));
    return foreign.length === 0 ? each : read(each.text, foreign);
  });
  const lineAt = linesOf(text);
  const children: RootContent[] = [];
  const numbers: { at: number; found: FoundNumbers }[] = [];
  segments.forEach((segment, i) => {
    const line = lineAt(starts[i]).line - 1;
    segment.nodes.forEach((node, k) => {
      children.push(starts[i] === 0 ? node : shifted(node, starts[i], line));
      numbers.push({ at: starts[i], found: segment.numbers[k] });
    });
  });
  return { root: { type: "root", children, position: { start: { line: 1, column: 1, offset: 0 }, end: { ...lineAt(text.length), offset: text.length } } }, numbers, memory };
}

/** Labels defined elsewhere are defined again before the segment while it is read, since CommonMark reads `[a]` as a reference only where `a` is defined.
 *  Before, not behind: a fence left open at the end would take in what follows. */
function readSegment(text: string, foreign: readonly string[]): Segment {
  const stubs = foreign.length === 0 ? "" : `${foreign.map((label) => `[${label}]: ${label.startsWith("^") ? "x" : "<#>"}\n\n`).join("")}***\n\n`;
  const lines = stubs.split("\n").length - 1;
  const all = markdownTree(stubs + text).children;
  const nodes = stubs === "" ? all : all.filter((node) => (placeOf(node)?.from ?? 0) >= stubs.length).map((node) => shifted(node, -stubs.length, -lines));
  const labels: string[] = [];
  for (const node of nodes) {
    walk(node, (each) => {
      if (each.type === "definition") labels.push(each.label ?? each.identifier);
      else if (each.type === "footnoteDefinition") labels.push(`^${each.label ?? each.identifier}`);
    });
  }
  return { text, nodes, numbers: nodes.map((node) => liveNumbersOf(text, node)), labels };
}

/** As labels are compared: letter case and the amount of white space do not count. */
function folded(text: string): string {
  return text.toLowerCase().toUpperCase().replace(/\s+/g, " ").trim();
}

function shifted<N extends Node>(node: N, offset: number, lines: number): N {
  const copy: N & { children?: Node[] } = { ...node };
  const at = node.position;
  if (at !== undefined) {
    copy.position = {
      start: { line: at.start.line + lines, column: at.start.column, offset: (at.start.offset ?? 0) + offset },
      end: { line: at.end.line + lines, column: at.end.column, offset: (at.end.offset ?? 0) + offset },
    };
  }
  if (copy.children !== undefined) copy.children = copy.children.map((child) => shifted(child, offset, lines));
  return copy;
}
