// Shows which lines of the text are cells, and where live numbers stand.

import { syntaxTree } from "@codemirror/language";
import { RangeSetBuilder } from "@codemirror/state";
import type { EditorState, Extension } from "@codemirror/state";
import { Decoration, ViewPlugin } from "@codemirror/view";
import type { DecorationSet, EditorView, ViewUpdate } from "@codemirror/view";
import type { Catalogue } from "../catalogue.ts";

const line = Decoration.line({ class: "cm-cellLine" }), head = Decoration.mark({ class: "cm-cellHead" }), live = Decoration.mark({ class: "cm-live" });

export function cellBlocks(catalogue: Catalogue): Extension {
  const kinds = new Set(catalogue.kinds.map((kind) => kind.name));
  return ViewPlugin.fromClass(class {
    decorations: DecorationSet;
    constructor(view: EditorView) { this.decorations = decorate(view, kinds); }
    update(update: ViewUpdate): void {
      if (update.docChanged || update.viewportChanged || syntaxTree(update.startState) !== syntaxTree(update.state)) this.decorations = decorate(update.view, kinds);
    }
  }, { decorations: (plugin) => plugin.decorations });
}

function decorate(view: EditorView, kinds: ReadonlySet<string>): DecorationSet {
  const builder = new RangeSetBuilder<Decoration>();
  let done = -1;
  for (const { from, to } of view.visibleRanges) {
    syntaxTree(view.state).iterate({ from, to, enter: (node) => {
      if (node.name === "FencedCode" && node.from > done) { done = node.to; fence(view.state, node.from, node.to, kinds, builder); return false; }
      if (node.name === "Link" && node.from > done && /\]\(<?=/.test(view.state.sliceDoc(node.from, node.to))) { done = node.to; builder.add(node.from, node.to, live); return false; }
      return true;
    } });
  }
  return builder.finish();
}

function fence(state: EditorState, from: number, to: number, kinds: ReadonlySet<string>, builder: RangeSetBuilder<Decoration>): void {
  const first = state.doc.lineAt(from), last = state.doc.lineAt(to);
  const info = /^(`{3,}|~{3,})(\s*)([A-Za-z]+):[ \t]*(\S*)/.exec(first.text);
  if (!info || !kinds.has(info[3])) return;
  for (let number = first.number; number <= last.number; number++) {
    builder.add(state.doc.line(number).from, state.doc.line(number).from, line);
    if (number === first.number) builder.add(first.from + info[1].length + info[2].length, first.from + info[0].length, head);
  }
}
