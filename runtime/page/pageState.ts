// What the engine has said so far, in the form that the page draws from. The same in the browser and in Node.

import type { BlockReport, CellReport, FromEngine, NumberReport, ProblemReport } from "../engine/messages.ts";
import type { Root } from "mdast";

export type Node = Root["children"][number];

export interface PageState {
  version: number;
  title: string;
  blocks: readonly BlockReport[];
  /** Nodes of prose by block key: the engine sends each once. */
  readonly nodes: Map<string, Node>;
  definitions: readonly Node[];
  problems: readonly ProblemReport[];
  readonly cells: Map<string, CellReport>;
  readonly numbers: Map<number, NumberReport>;
  /** Settings that differ from the text's. */
  moved: Readonly<Record<string, unknown>>;
  /** Whether everything of this version has been computed. */
  settled: boolean;
}

export function pageState(): PageState {
  return { version: 0, title: "", blocks: [], nodes: new Map(), definitions: [], problems: [], cells: new Map(), numbers: new Map(), moved: {}, settled: false };
}

/** Takes one message in. */
export function hear(state: PageState, message: FromEngine): void {
  switch (message.from) {
    case "outline": hearOutline(state, message); break;
    case "cell": state.cells.set(message.cell.id, keepShown(state.cells.get(message.cell.id), message.cell)); break;
    case "number": state.numbers.set(message.number.index, message.number); break;
    case "settled": state.moved = message.moved; state.settled = true; break;
    default: break;
  }
}

/** The state after all these messages: for Node, where they are collected first. */
export function stateAfter(messages: readonly FromEngine[]): PageState {
  const state = pageState();
  for (const message of messages) hear(state, message);
  return state;
}

function hearOutline(state: PageState, outline: Extract<FromEngine, { from: "outline" }>): void {
  state.version = outline.version; state.title = outline.title; state.blocks = outline.blocks;
  state.definitions = outline.definitions; state.problems = outline.problems; state.settled = false;
  const keys = new Set(outline.blocks.map((block) => block.key));
  for (const block of outline.blocks) if (block.block === "prose" && block.node) state.nodes.set(block.key, block.node);
  for (const key of state.nodes.keys()) if (!keys.has(key)) state.nodes.delete(key);
  const cells = new Set(outline.blocks.map((block) => block.block === "cell" ? block.cell : ""));
  for (const id of state.cells.keys()) if (!cells.has(id)) state.cells.delete(id);
  const count = outline.blocks.reduce((most, block) => block.block === "prose" ? Math.max(most, ...block.numbers.map((i) => i + 1)) : most, 0);
  for (const index of state.numbers.keys()) if (index >= count) state.numbers.delete(index);
}

/** While a cell is at work again its last result stays in view, so that nothing flickers or jumps. */
function keepShown(before: CellReport | undefined, now: CellReport): CellReport {
  if (now.show !== null || !before?.show || (now.state !== "working" && now.state !== "waiting")) return now;
  return { ...now, show: before.show, fields: now.fields ?? before.fields };
}
