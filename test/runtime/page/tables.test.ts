import { describe, expect, it } from "vitest";
import { tableTree } from "../../../runtime/page/partTrees.ts";
import type { Tree } from "../../../runtime/page/tree.ts";

/** Classes of all cells of a column, by their text. */
function classes(rows: readonly string[]): Record<string, unknown> {
  const found: Record<string, unknown> = {};
  const walk = (tree: Tree | string): void => {
    if (typeof tree === "string") return;
    if (tree.tag === "td") found[String(tree.children[0])] = tree.attributes.class ?? null;
    for (const child of tree.children) walk(child as Tree | string);
  };
  walk(tableTree({ part: "table", columns: [{ title: "period" }], rows: rows.map((row) => [row]) }, null));
  return found;
}

describe("a table's first column", () => {
  it("keeps times on one line, and lets spans and words break", () => {
    expect(classes(["2025", "2025-03", "2025-W07", "2025-Q1", "2025-03-05T14:00Z", "2025, total", "2025-03 to 2025-06", "same month last year"])).toEqual({
      "2025": "time", "2025-03": "time", "2025-W07": "time", "2025-Q1": "time", "2025-03-05T14:00Z": "time", "2025, total": "time", "2025-03 to 2025-06": null, "same month last year": null,
    });
  });
});
