// Names across the notebook: twice defined, unknown, in a circle, taken from the library.

import type { NameRead } from "./cellBody.ts";
import { circles } from "./circles.ts";
import { FIXED } from "./names.ts";
import { suggestion } from "./nearest.ts";
import type { CellText, LiveNumber } from "./notebook.ts";

/** What this needs of a cell besides its text. */
export interface CellReads { readonly nameReads: readonly NameRead[]; readonly code: boolean }
export interface NameProblem { readonly code: string; readonly message: string; readonly from: number; readonly to: number; readonly cell: number | null; readonly severity: "error" | "note" }

/** @param names  what expressions may use besides cells; null = do not look for unknown names
 *  @returns the cells as the notebook lists them, and what is wrong. Cost O(cells + reads). */
export function checkNames(found: readonly (CellText & CellReads)[], numbers: readonly LiveNumber[], names: readonly string[] | null): { readonly cells: readonly CellText[]; readonly faults: readonly NameProblem[] } {
  const faults: NameProblem[] = [];
  const owners = ownersOf(found);
  for (const [name, cells] of owners) {
    if (cells.length > 1) cells.forEach((cell, k) => faults.push(twice(name, cells, k, cell)));
    else if (names?.includes(name)) faults.push({ code: "library-name", severity: "note", cell: cells[0].index, ...placeOfDefinition(cells[0]), message: `\`${name}\` is also a library function: in this notebook the name means this cell` });
  }
  findCircles(found, owners, faults);
  if (names !== null) findUnknown(found, numbers, new Set([...owners.keys(), ...names, ...FIXED]), faults);
  return { cells: found.map(({ nameReads: _reads, code: _code, ...cell }) => cell), faults };
}

type Owners = ReadonlyMap<string, readonly (CellText & CellReads)[]>;

function ownersOf(cells: readonly (CellText & CellReads)[]): Owners {
  const owners = new Map<string, (CellText & CellReads)[]>();
  for (const cell of cells) {
    for (const name of new Set([...(cell.name === null ? [] : [cell.name]), ...cell.exports])) {
      const list = owners.get(name);
      if (list === undefined) owners.set(name, [cell]); else list.push(cell);
    }
  }
  return owners;
}

function twice(name: string, cells: readonly CellText[], k: number, cell: CellText): NameProblem {
  const others = cells.filter((_, i) => i !== k).map((each) => `line ${each.line}`);
  return { code: "duplicate-name", severity: "error", cell: cell.index, ...placeOfDefinition(cell), message: `\`${name}\` is defined twice, here and in ${others.join(", ")}: give one of them another name` };
}

function placeOfDefinition(cell: CellText): { from: number; to: number } {
  return cell.namePlace === null ? { from: cell.from, to: Math.min(cell.to, cell.body.from) } : { from: cell.namePlace.from, to: cell.namePlace.to };
}

function findCircles(cells: readonly (CellText & CellReads)[], owners: Owners, faults: NameProblem[]): void {
  const reads = cells.map((cell) => [...new Set(cell.reads.flatMap((name) => {
    const read = owners.get(name) ?? [];
    // A script's own exports are its own business.
    return read.filter((each) => each.index !== cell.index || !cell.code).map((each) => each.index);
  }))]);
  for (const circle of circles(reads)) {
    const words = circle.map((index) => label(cells[index]));
    const way = words.length === 1 ? `${words[0]} reads itself` : `${words.join(" reads ")} reads ${words[0]}`;
    for (const index of circle) {
      const cell = cells[index];
      const read = cell.nameReads.find((each) => (owners.get(each.name) ?? []).some((owner) => circle.includes(owner.index)));
      faults.push({ code: "circle", severity: "error", cell: index, ...(read === undefined || read.to <= read.from ? placeOfDefinition(cell) : { from: read.from, to: read.to }), message: `A circle: ${way}. Break it by letting one of them read something else` });
    }
  }
}

function findUnknown(cells: readonly (CellText & CellReads)[], numbers: readonly LiveNumber[], known: ReadonlySet<string>, faults: NameProblem[]): void {
  for (const cell of cells) {
    if (cell.code) continue;
    for (const read of cell.nameReads) {
      if (!known.has(read.name)) faults.push({ code: "unknown-name", severity: "error", cell: cell.index, from: read.from, to: read.to, message: unknown(read.name, known, read.quoted) });
    }
  }
  for (const number of numbers) {
    for (const name of number.reads) {
      if (!known.has(name)) faults.push({ code: "unknown-name", severity: "error", cell: null, from: number.from, to: number.to, message: unknown(name, known) });
    }
  }
}

function unknown(name: string, known: ReadonlySet<string>, quoted?: string): string {
  if (name === "Math") return "There is no `Math`: its functions stand alone here, as in `sqrt(2)`";
  const near = suggestion(name, known);
  return `There is no \`${name}\`${near === "" ? ": no cell and no library function has this name" : near}${quoted === undefined ? "" : `${near === "" ? "." : ""} If a text is meant, put it in quotes: ${quoted}`}`;
}

function label(cell: CellText): string {
  return cell.name === null ? `the ${cell.kind} in line ${cell.line}` : `\`${cell.name}\``;
}
