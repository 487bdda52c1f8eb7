// From a parsed notebook to what the engine keeps running: cells and live numbers with ids, what each reads, and a mark that changes only when it must run anew.

import type { Language } from "../../cells/kind.ts";
import type { CellText, LiveNumber, Notebook, Problem } from "../text/notebook.ts";
import type { NameSource } from "./evaluation.ts";
import type { Definition } from "./runCell.ts";

export interface PlannedCell {
  readonly id: string;
  readonly text: CellText;
  /** null where its own problems keep it from running. */
  readonly definition: Definition | null;
  /** What keeps it from running. */
  readonly problem: Problem | null;
  /** Cells that the graph must have ready for it: what it reads, and for expressions taken unevaluated all that those hang on. */
  readonly inputs: readonly string[];
  readonly mark: string;
}

export interface PlannedNumber {
  readonly id: string;
  readonly text: LiveNumber;
  readonly names: ReadonlyMap<string, NameSource>;
  readonly inputs: readonly string[];
  readonly mark: string;
}

export interface Plan {
  readonly cells: readonly PlannedCell[];
  readonly numbers: readonly PlannedNumber[];
  resolve(name: string): NameSource | null;
}

/** Cost O(cells + reads), and for each `sweep` what it hangs on. */
export function planOf(notebook: Notebook, language: Language): Plan {
  const kinds = new Map(language.kinds.map((kind) => [kind.name, kind]));
  const ids = idsOf(notebook.cells);
  const owners = new Map<string, NameSource>();
  notebook.cells.forEach((cell, i) => {
    for (const part of cell.exports) if (!owners.has(part)) owners.set(part, { id: ids[i], part });
  });
  // A cell's name goes before an export of the same name; both are told so by the text.
  [...notebook.cells.entries()].toReversed().forEach(([i, cell]) => { if (cell.name !== null) owners.set(cell.name, { id: ids[i], part: null }); });
  const problems = problemsByCell(notebook);
  const reads = notebook.cells.map((cell, i) => sourcesOf(cell.reads, owners, kinds.get(cell.kind)?.body === "code" ? ids[i] : null));
  const direct = new Map(notebook.cells.map((cell, i) => [ids[i], cell.broken ? [] : distinct([...reads[i].values()].map((each) => each.id))]));
  const cells = notebook.cells.map((cell, i): PlannedCell => {
    const id = ids[i];
    const kind = kinds.get(cell.kind);
    const problem = problems.get(i) ?? null;
    const body = notebook.text.slice(cell.body.from, cell.body.to);
    const runs = !cell.broken && kind !== undefined;
    const own = direct.get(id) ?? [];
    const wide = runs && cell.options.some((option) => Object.hasOwn(kind.options, option.name) && kind.options[option.name].taken === "expression");
    const inputs = runs ? (wide ? closure(own, direct) : own) : [];
    // What hangs on a control that is tried at other values need not stand at its present one.
    const tried = wide ? cell.options.flatMap((option) => (kind.options[option.name]?.taken === "name" ? [...sourcesOf(cell.reads.filter((name) => option.source.includes(name)), owners, null).values()] : [])).map((source) => source.id) : [];
    const needs = wide ? inputs.filter((input) => !closure([input], direct).some((each) => tried.includes(each)) || tried.includes(input)) : own;
    const definition = runs ? { id, kind, text: cell, body, names: reads[i], reads: own, needs } : null;
    const mark = JSON.stringify([cell.kind, cell.name, body, runs ? null : problem?.code, [...reads[i]].map(([name, source]) => [name, source.id, source.part]), inputs]);
    return { id, text: cell, definition, problem, inputs, mark };
  });
  const counts = new Map<string, number>();
  const numbers = notebook.numbers.map((number): PlannedNumber => {
    const count = (counts.get(number.expression) ?? 0) + 1;
    counts.set(number.expression, count);
    const names = sourcesOf(number.reads, owners, null);
    const inputs = distinct([...names.values()].map((each) => each.id));
    return { id: `number ${number.expression} ${count}`, text: number, names, inputs, mark: JSON.stringify([...names].map(([name, source]) => [name, source.id, source.part])) };
  });
  return { cells, numbers, resolve: (name) => owners.get(name) ?? null };
}

/** Named cells bear their name; others their kind and place among the unnamed of it; a name taken twice is counted. */
function idsOf(cells: readonly CellText[]): string[] {
  const counts = new Map<string, number>();
  return cells.map((cell) => {
    const base = cell.name ?? `${cell.kind}:`;
    const count = (counts.get(base) ?? 0) + 1;
    counts.set(base, count);
    return cell.name === null ? `${base}${count}` : count === 1 ? base : `${base}#${count}`;
  });
}

function sourcesOf(reads: readonly string[], owners: ReadonlyMap<string, NameSource>, self: string | null): Map<string, NameSource> {
  const found = new Map<string, NameSource>();
  for (const name of reads) {
    const source = owners.get(name);
    if (source !== undefined && source.id !== self) found.set(name, source);
  }
  return found;
}

function problemsByCell(notebook: Notebook): ReadonlyMap<number, Problem> {
  const found = new Map<number, Problem>();
  for (const each of notebook.problems) {
    if (each.severity !== "error" || each.cell === null) continue;
    // A missing option is often a misspelt one: that is the better thing to say.
    const known = found.get(each.cell);
    if (known === undefined || (known.code === "missing-option" && each.code !== "missing-option")) found.set(each.cell, each);
  }
  return found;
}

function closure(from: readonly string[], direct: ReadonlyMap<string, readonly string[]>): string[] {
  const found = new Set(from);
  for (const id of found) for (const next of direct.get(id) ?? []) found.add(next);
  return [...found];
}

function distinct<T>(items: readonly T[]): T[] {
  return [...new Set(items)];
}
