// Everything that is wrong with the present text, from what the page reports of it: for underlining, and to be counted.

import type { NumberReport, ProblemReport } from "../engine/messages.ts";
import type { CellNote, FromPage } from "../page/protocol.ts";
import type { NamedCell } from "./suggest.ts";

export class Problems {
  #outline: readonly ProblemReport[] = [];
  #cells = new Map<string, CellNote>();
  #numbers = new Map<number, NumberReport>();
  #version = -1;

  /** The version of the text that the reports speak of. */
  get version(): number { return this.#version; }

  hear(message: FromPage): void {
    if (message.page === "outline") { this.#outline = message.problems; this.#version = message.version; }
    if (message.page !== "states") return;
    if (message.all) { this.#cells = new Map(); this.#numbers = new Map(); }
    for (const cell of message.cells) this.#cells.set(cell.id, cell);
    for (const number of message.numbers) this.#numbers.set(number.index, number);
    this.#version = message.version;
  }

  /** Cells that have a name, for completion and help. */
  named(): readonly NamedCell[] {
    return [...this.#cells.values()].flatMap(({ name, kind, state }) => name === null ? [] : [{ name, kind, state }]);
  }

  /** Problems of the text and faults of cells, each place once, in the order of the text.
   *  A cell's fault without a place of its own is put on its first line. */
  list(text: string): readonly ProblemReport[] {
    const found = [...this.#outline];
    for (const cell of this.#cells.values()) {
      if (cell.state !== "failed" || cell.message === null) continue;
      const at = cell.at ?? { line: cell.line, column: 1, from: cell.from, to: endOfLine(text, cell.from) };
      if (found.some((other) => other.message === cell.message || (cell.at !== null && other.severity === "error" && other.from <= at.to && other.to >= at.from))) continue;
      found.push({ code: "cell-failed", severity: "error", ...at, message: cell.message });
    }
    for (const number of this.#numbers.values()) {
      if (number.state !== "undecided" || number.message === null || found.some((other) => other.from < number.to && other.to > number.from)) continue;
      if (this.#blocked(number.message)) continue;
      found.push({ code: "number-undecided", severity: "error", from: number.from, to: number.to, line: number.line, column: 1, message: number.message });
    }
    return found.sort((a, b) => a.from - b.from);
  }

  /** A number that only waits for a failed cell repeats what stands at that cell already. */
  #blocked(message: string): boolean {
    return [...this.#cells.values()].some((cell) => (cell.state === "failed" || cell.state === "blocked") && cell.name !== null && message.includes(cell.name));
  }
}

function endOfLine(text: string, from: number): number {
  const end = text.indexOf("\n", from);
  return end < 0 ? text.length : end;
}
