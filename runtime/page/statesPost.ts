// Tells the window around the page how cells and live numbers stand, a few times a second at most.

import type { CellNote, FromPage } from "./protocol.ts";
import type { PageState } from "./pageState.ts";
import type { CellReport, FromEngine, NumberReport } from "../engine/messages.ts";

export function statesPost(state: PageState, post: (message: FromPage) => void): { note(message: FromEngine): void } {
  const cells = new Set<string>(); const numbers = new Set<number>();
  /** What was said last, as text: a cell that ran and stands as it stood is nothing to tell. */
  const said = new Map<string | number, string>();
  let all = false; let timer: ReturnType<typeof setTimeout> | null = null;
  const news = (note: CellNote | NumberReport): boolean => {
    const key = "id" in note ? note.id : note.index, now = JSON.stringify(note);
    if (said.get(key) === now) return false;
    // Of numbers only what is wrong is told, and that it no longer is: a long text has thousands, at every key.
    if (!("id" in note) && note.state !== "undecided") return said.delete(key);
    said.set(key, now);
    return true;
  };
  const send = (): void => {
    timer = null;
    if (all) said.clear();
    const spoken = (all ? [...state.cells.values()] : [...cells].flatMap((id) => state.cells.get(id) ?? [])).map(noteOf).filter(news);
    const counted = (all ? [...state.numbers.values()] : [...numbers].flatMap((index) => state.numbers.get(index) ?? [])).filter(news);
    if (all || spoken.length + counted.length > 0) post({ page: "states", version: state.version, all, cells: spoken, numbers: counted });
    cells.clear(); numbers.clear(); all = false;
  };
  return {
    note(message) {
      if (message.from === "outline") all = true;
      else if (message.from === "cell") cells.add(message.cell.id);
      else if (message.from === "number") numbers.add(message.number.index);
      else return;
      // A timer, not an animation frame: those stand still while the desk hides the page.
      timer ??= setTimeout(send, 40);
    },
  };
}

function noteOf({ id, name, kind, line, from, to, state, message, at }: CellReport): CellNote { return { id, name, kind, line, from, to, state, message, at }; }
