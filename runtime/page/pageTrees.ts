// The whole page as described elements, from what the engine said. The same in the browser and in Node.

import { cellTree } from "./cell.ts";
import type { CellContext, PartTrees } from "./cell.ts";
import { h } from "./tree.ts";
import type { Tree } from "./tree.ts";
import type { Node, PageState } from "./pageState.ts";
import { anchor, headingPrefix, prose, wordsOf } from "./prose.ts";
import type { ProseContext } from "./prose.ts";
import type { CellReport, NumberReport } from "../engine/messages.ts";

type Definition = Extract<Node, { type: "definition" }>;
type Footnote = Extract<Node, { type: "footnoteDefinition" }>;

/** Keeps the tree of every block whose inputs stayed the same, so that only what changed is drawn. */
export interface PageTrees {
  /** @param later whether a cell may stay as it was drawn before, for now */
  blocks(state: PageState, context: CellContext, later?: (cell: CellReport) => boolean): readonly Tree[];
}

interface Kept { readonly inputs: readonly unknown[]; readonly tree: Tree }

export function pageTrees(): PageTrees {
  let kept = new Map<string, Kept>();
  let shared: Shared | null = null;
  let sharedFor: unknown = null;
  const parts: PartTrees = new WeakMap();
  return {
    blocks(state, context, later = () => false) {
      // A new outline is a new list: only then can definitions, notes and anchors differ.
      if (shared === null || sharedFor !== state.blocks) { shared = sharedContext(state); sharedFor = state.blocks; }
      const common = shared;
      const next = new Map<string, Kept>();
      /** The tree as it was, when all that it was made from is the same. */
      const keep = (key: string, inputs: readonly unknown[], make: () => Tree): Tree => {
        const old = kept.get(key);
        const entry = old && old.inputs.length === inputs.length && old.inputs.every((input, i) => input === inputs[i]) ? old : { inputs, tree: make() };
        next.set(key, entry);
        return entry.tree;
      };
      const canAccept = context.canEdit && Object.keys(state.moved).length === 0;
      const trees: Tree[] = [];
      const notes: Tree[] = [];
      let titled = false;
      for (const block of state.blocks) {
        if (block.block === "cell") {
          const cell = state.cells.get(block.cell);
          if (!cell) continue;
          const key = `cell ${cell.id}`, before = kept.get(key);
          if (before && later(cell)) { next.set(key, before); trees.push(before.tree); continue; }
          const name = cell.name ?? "";
          const tables = (cell.show ?? []).map((_, i) => [context.asTable(`${cell.id}/${i}`), context.pickedAt(`${cell.id}/${i}`)].join(" ")).join();
          trees.push(keep(key, [cell, context.canEdit, context.pending(name), context.fault(name), tables, context.fieldsOpen(cell.id), context.canStop(cell.id)], () => cellTree(cell, key, context, parts)));
          continue;
        }
        const node = state.nodes.get(block.key);
        if (!node || node.type === "definition") continue;
        const numbers = block.numbers.map((i) => state.numbers.get(i)).filter((number) => number !== undefined);
        const own: ProseContext = { ...common, numbers, canAccept, canEdit: context.canEdit };
        if (node.type === "footnoteDefinition") {
          const mark = common.footnotes.get(node.identifier);
          if (mark !== undefined) notes[mark - 1] = keep(`note ${mark}`, [node, ...numbers, canAccept, context.canEdit], () => noteTree(node, mark, own));
          continue;
        }
        trees.push(keep(`prose ${block.key}`, [node, common.signature, ...numbers, canAccept, context.canEdit], () => h("div", { class: `prose prose-${node.type}`, key: `prose ${block.key}`, "data-block": block.key, "data-from": context.still ? block.from : null }, prose(node, own))));
        if (!titled && node.type === "heading") { titled = true; const list = contentsTree(common.anchors); if (list) trees.push(keep("contents", [JSON.stringify(list)], () => list)); }
      }
      const ends = notes.filter((note) => note !== undefined);
      if (ends.length > 0) trees.push(keep("notes", ends, () => h("section", { class: "notes", key: "notes", "aria-label": "Notes" }, h("ol", {}, ends))));
      kept = next;
      return trees;
    },
  };
}

interface Shared extends Omit<ProseContext, "numbers" | "canAccept" | "canEdit"> { readonly signature: string }

/** What prose anywhere may refer to: definitions, footnotes and anchors. */
function sharedContext(state: PageState): Shared {
  const definitions = new Map<string, { url: string; title: string | null }>();
  const noted = new Set<string>();
  const nodes = state.blocks.map((block) => block.block === "prose" ? state.nodes.get(block.key) : undefined).filter((node) => node !== undefined);
  for (const node of [...state.definitions, ...nodes]) {
    if (node.type === "definition") { const { identifier, url, title } = node as Definition; if (!definitions.has(identifier)) definitions.set(identifier, { url, title: title ?? null }); }
    if (node.type === "footnoteDefinition") noted.add((node as Footnote).identifier);
  }
  const footnotes = new Map<string, number>();
  for (const node of nodes) if (node.type !== "footnoteDefinition") eachReference(node, (identifier) => { if (noted.has(identifier) && !footnotes.has(identifier)) footnotes.set(identifier, footnotes.size + 1); });
  const anchors = new Map<unknown, string>();
  const taken = new Map<string, number>();
  for (const node of nodes) {
    if (node.type !== "heading") continue;
    const base = anchor(wordsOf(node));
    const times = taken.get(base) ?? 0;
    taken.set(base, times + 1);
    // Cells, notes and the exported file have ids of their own, which no heading may take.
    anchors.set(node, `${headingPrefix}${times === 0 ? base : `${base}-${times}`}`);
  }
  return { definitions, footnotes, anchors, signature: JSON.stringify([[...definitions], [...footnotes], [...anchors.values()]]) };
}

function eachReference(node: unknown, found: (identifier: string) => void): void {
  const { type, identifier, children } = node as { type: string; identifier?: string; children?: readonly unknown[] };
  if (type === "footnoteReference" && identifier) found(identifier);
  for (const child of children ?? []) eachReference(child, found);
}

function noteTree(node: Footnote, mark: number, context: ProseContext): Tree {
  return h("li", { id: `note-${mark}`, key: `note ${mark}` }, node.children.map((child) => prose(child as Node, context)),
    h("a", { href: `#note-from-${mark}`, class: "note-back", "aria-label": `back to the text, note ${mark}` }, "↑"));
}

/** A list of contents where there are at least four headings below the title. */
function contentsTree(anchors: ReadonlyMap<unknown, string>): Tree | null {
  const headings = [...anchors].map(([node, id]) => ({ node: node as Extract<Node, { type: "heading" }>, id })).slice(1).filter(({ node }) => node.depth <= 3);
  if (headings.length < 4) return null;
  const top = Math.min(...headings.map(({ node }) => node.depth));
  return h("nav", { class: "contents", "aria-label": "Contents", key: "contents" }, h("details", { open: true }, h("summary", {}, "Contents"),
    h("ol", {}, headings.map(({ node, id }) => h("li", { class: node.depth > top ? "below" : null }, h("a", { href: `#${id}` }, wordsOf(node)))))));
}

/** Every live number that has moved, for "accept all". */
function movedNumbers(state: PageState): readonly NumberReport[] {
  return [...state.numbers.values()].filter((number) => number.state === "moved" && number.now !== null);
}

/** One sentence on how things stand, for a screen reader. */
export function summary(state: PageState): string {
  const cells = [...state.cells.values()];
  const count = (n: number, one: string, many: string): string => n === 0 ? "" : `${n} ${n === 1 ? one : many}. `;
  const claims = cells.flatMap((cell) => (cell.show ?? []).flatMap((part) => part.part === "claims" ? part.claims : []));
  const words = count(cells.filter((cell) => cell.state === "failed").length, "cell failed", "cells failed")
    + count(claims.filter((claim) => claim.holds === false).length, "claim is broken", "claims are broken")
    + count(movedNumbers(state).length, "number has moved", "numbers have moved");
  return words === "" ? "Up to date." : `Up to date. ${words.trim()}`;
}
