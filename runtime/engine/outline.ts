// The outline of a notebook for the page: blocks with keys that change only when their content does.

import type { Root } from "mdast";
import type { Notebook } from "../text/notebook.ts";
import type { BlockReport, FromEngine } from "./messages.ts";
import type { Plan } from "./plan.ts";

type Node = Root["children"][number];

/** Makes outlines; remembers which prose was sent, since each node goes out once a key. */
export function createOutliner(): (notebook: Notebook, plan: Plan, version: number) => Extract<FromEngine, { from: "outline" }> {
  let sent = new Map<string, string>();
  let count = 0;
  return (notebook, plan, version) => {
    const definitions = notebook.tree.children.filter((node): node is Node => node.type === "definition" || node.type === "footnoteDefinition");
    // References read otherwise once their label is defined, with the same text.
    const labels = definitions.map((node) => ("label" in node ? String(node.label) : "")).join("\n");
    const seen = new Map<string, number>();
    const keys = new Map<string, string>();
    const blocks = notebook.blocks.map((block): BlockReport => {
      if (block.block === "cell") return { block: "cell", key: `cell ${plan.cells[block.cell].id}`, from: block.from, to: block.to, cell: plan.cells[block.cell].id };
      const source = notebook.text.slice(block.from, block.to);
      const content = `${block.node.type}\n${source.includes("[") ? labels : ""}\n${source}`;
      const nth = (seen.get(content) ?? 0) + 1;
      seen.set(content, nth);
      const place = `${nth}\n${content}`;
      const known = sent.get(place);
      count += known === undefined ? 1 : 0;
      const key = known ?? `prose ${count}`;
      keys.set(place, key);
      return { block: "prose", key, from: block.from, to: block.to, numbers: block.numbers, ...(known === undefined ? { node: block.node } : {}) };
    });
    sent = keys;
    return {
      from: "outline", version, title: notebook.title, blocks, definitions,
      problems: notebook.problems.map(({ code, severity, from, to, line, column, message }) => ({ code, severity, from, to, line, column, message })),
    };
  };
}
