// The door to the editor package (with the files beside it): one text, its changes, problems, help and keys.
// The rest of the desk sees this interface and nothing of the package.

import { autocompletion, closeBrackets, closeBracketsKeymap, completionKeymap } from "@codemirror/autocomplete";
import { defaultKeymap, history, historyKeymap, indentWithTab, redo, undo } from "@codemirror/commands";
import { bracketMatching, syntaxHighlighting } from "@codemirror/language";
import { lintGutter, lintKeymap, setDiagnostics } from "@codemirror/lint";
import { highlightSelectionMatches, searchKeymap } from "@codemirror/search";
import { EditorState } from "@codemirror/state";
import { drawSelection, highlightActiveLine, keymap, lineNumbers } from "@codemirror/view";
import { EditorView } from "codemirror";
import type { ProblemReport } from "../../engine/messages.ts";
import type { Edit } from "../../text/notebook.ts";
import type { Catalogue } from "../catalogue.ts";
import type { NamedCell } from "../suggest.ts";
import { cellBlocks } from "./cellBlocks.ts";
import { completeFrom } from "./complete.ts";
import { hoverHelp } from "./hover.ts";
import { keepLineEnds } from "./lineEnds.ts";
import { notebookLanguage } from "./notebookLanguage.ts";
import { deskHighlight, deskTheme } from "./theme.ts";

export interface EditorOptions {
  readonly parent: HTMLElement;
  readonly text: string;
  readonly catalogue: Catalogue;
  /** The cells as last reported. */
  readonly cells: () => readonly NamedCell[];
  readonly changed: () => void;
  /** The author clicked here, or asked by key to see this place on the page. */
  readonly pointed: (position: number) => void;
}

export interface Editor {
  text(): string;
  /** Applies edits as one change that can be undone by itself. */
  change(edits: readonly Edit[]): void;
  /** Takes a whole other text, through these edits to the present one, and forgets how it came. */
  goTo(from: number, to: number, focus: boolean): void;
  underline(problems: readonly ProblemReport[]): void;
  undo(): void;
  redo(): void;
  focus(): void;
  cursor(): number;
  /** Line and column of the cursor, from 1. */
  place(): { readonly line: number; readonly column: number };
}

export function createEditor(options: EditorOptions): Editor {
  const view = new EditorView({ parent: options.parent, state: EditorState.create({ doc: options.text, extensions: extensionsOf(options) }) });
  return {
    text: () => view.state.doc.toString(),
    change(edits) {
      if (edits.length === 0) return;
      view.dispatch({ changes: edits.map(({ from, to, insert }) => ({ from, to, insert })), userEvent: "input.apply", scrollIntoView: false });
    },
    goTo(from, to, focus) {
      const end = view.state.doc.length;
      const at = Math.min(from, end);
      view.dispatch({ selection: { anchor: at }, effects: [EditorView.scrollIntoView(at, { y: "center" })] });
      flash(view, at, Math.min(to, end));
      if (focus) view.focus();
    },
    underline(problems) {
      const end = view.state.doc.length;
      view.dispatch(setDiagnostics(view.state, problems.map((problem) => ({
        from: Math.min(problem.from, end), to: Math.min(Math.max(problem.to, problem.from), end),
        severity: problem.severity === "error" ? "error" as const : "info" as const, message: problem.message,
      }))));
    },
    undo: () => { undo(view); },
    redo: () => { redo(view); },
    focus: () => view.focus(),
    cursor: () => view.state.selection.main.head,
    place() {
      const head = view.state.selection.main.head, line = view.state.doc.lineAt(head);
      return { line: line.number, column: head - line.from + 1 };
    },
  };
}

function extensionsOf(options: EditorOptions) {
  return [
    // Line ends other than "\n" stay as characters of their lines: places then agree with the text's, and bytes are kept.
    EditorState.lineSeparator.of("\n"), keepLineEnds(options.text),
    history({ newGroupDelay: 400 }), lineNumbers(), highlightActiveLine(), drawSelection(), bracketMatching(), closeBrackets(), highlightSelectionMatches(),
    EditorView.lineWrapping, notebookLanguage(options.catalogue), syntaxHighlighting(deskHighlight), deskTheme, cellBlocks(options.catalogue), lintGutter(),
    autocompletion({ override: [completeFrom(options.catalogue, options.cells)], icons: false }), hoverHelp(options.catalogue, options.cells),
    keymap.of([
      { key: "Alt-Enter", run: (view) => { options.pointed(view.state.selection.main.head); return true; } },
      ...closeBracketsKeymap, ...completionKeymap, ...lintKeymap, ...searchKeymap, ...historyKeymap, ...defaultKeymap, indentWithTab,
    ]),
    EditorView.contentAttributes.of({ "aria-label": "Text of the notebook", spellcheck: "true", tabindex: "0" }),
    EditorView.updateListener.of((update) => { if (update.docChanged) options.changed(); }),
    EditorView.domEventHandlers({
      click: (event, view) => {
        if (event.button === 0 && view.state.selection.main.empty) options.pointed(view.state.selection.main.head);
        return false;
      },
    }),
  ];
}

/** Marks the lines of a place for a moment, so that the eye finds them. */
function flash(view: EditorView, from: number, to: number): void {
  requestAnimationFrame(() => {
    const first = view.state.doc.lineAt(from).number, last = view.state.doc.lineAt(Math.max(from, to - 1)).number;
    for (let number = first; number <= Math.min(last, first + 40); number++) {
      const { node } = view.domAtPos(view.state.doc.line(number).from);
      const line = (node instanceof Element ? node : node.parentElement)?.closest(".cm-line");
      line?.animate([{ backgroundColor: "var(--desk-flash)" }, { backgroundColor: "transparent" }], { duration: 900, easing: "ease-out" });
    }
  });
}
