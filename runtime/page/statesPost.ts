// Tells the window around the page how cells and live numbers stand, a few times a second at most.

import type { CellNote, FromPage } from "./protocol.ts";
import type { PageState } from "./pageState.ts";
import type { CellReport, FromEngine } from "../engine/messages.ts";

export function statesPost(state: PageState, post: (message: FromPage) => void): { note(message: FromEngine): void } {
  const cells = new Set<string>(); const numbers = new Set<number>();
  let all = false; let timer = 0;
  const send = (): void => {
    timer = 0;
    const spoken = all ? [...state.cells.values()] : [...cells].map((id) => state.cells.get(id)).filter((cell) => cell !== undefined);
    const said = all ? [...state.numbers.values()] : [...numbers].map((index) => state.numbers.get(index)).filter((number) => number !== undefined);
    post({ page: "states", version: state.version, all, cells: spoken.map(noteOf), numbers: said });
    cells.clear(); numbers.clear(); all = false;
  };
  return {
    note(message) {
      if (message.from === "outline") all = true;
      else if (message.from === "cell") cells.add(message.cell.id);
      else if (message.from === "number") numbers.add(message.number.index);
      else return;
      // A timer, not an animation frame: those stand still while the desk hides the page.
      if (timer === 0) timer = window.setTimeout(send, 16);
    },
  };
}

function noteOf({ id, name, kind, line, from, to, state, message, at }: CellReport): CellNote { return { id, name, kind, line, from, to, state, message, at }; }
