// From the text of a notebook to prose, cells, options, live numbers and problems. Every text parses to something.

import type { Root, RootContent } from "mdast";
import { readBody } from "./cellBody.ts";
import type { CellBody, NameRead } from "./cellBody.ts";
import { checkNames } from "./checkNames.ts";
import type { CellReads } from "./checkNames.ts";
import { fenceOf } from "./fences.ts";
import type { Fence } from "./fences.ts";
import { linesOf } from "./lines.ts";
import { placeOf, plainText, walk } from "./markdown.ts";
import { nameFault } from "./names.ts";
import { suggestion } from "./nearest.ts";
import type { Block, CellText, LiveNumber, Notebook, OptionText, Problem, Shape } from "./notebook.ts";
import { segmentedTree } from "./tree.ts";
import type { SegmentedTree, SegmentMemory } from "./tree.ts";

export interface ParseSurroundings {
  /** Names that expressions may use besides the cells' (library functions by their first part, constants, function forms of kinds);
   *  left out, names are not checked. */
  readonly names?: readonly string[];
  /** The notebook as it was before an edit: what did not change is taken over from it. */
  readonly before?: Notebook;
}

/** A notebook that remembers how its parts were read, for the parse after the next edit. */
export interface ParsedNotebook extends Notebook { readonly memory: Memory }
interface Memory { readonly segments: SegmentMemory; readonly bodies: ReadonlyMap<string, CellBody> }

/** Reads a notebook. Never throws; cost O(length), with a small factor for what did not change since `before`.
 *  @param shapes  the kinds of cell that there are */
export function parse(text: string, shapes: readonly Shape[], around: ParseSurroundings = {}): ParsedNotebook {
  const before = memoryOf(around.before);
  const tree = segmentedTree(text, before.segments);
  const reading = startReading(text, shapes, before);
  tree.root.children.forEach((node, i) => readBlock(node, tree.numbers[i], reading));
  const { cells, faults } = checkNames(reading.cells, reading.numbers, around.names ?? null);
  for (const fault of faults) problem(reading, fault.code, fault.message, fault.from, fault.to, fault.cell, fault.severity);
  reading.problems.sort((a, b) => a.from - b.from || a.to - b.to);
  const broken = new Set(reading.problems.filter((each) => each.severity === "error" && each.cell !== null && !inOneClaim(each, cells[each.cell], reading)).map((each) => each.cell));
  return {
    text, tree: tree.root, title: titleOf(tree.root), blocks: reading.blocks,
    cells: cells.map((each) => ({ ...each, broken: broken.has(each.index) })),
    numbers: reading.numbers, problems: reading.problems, memory: { segments: tree.memory, bodies: reading.bodies },
  };
}

/** Claims are decided one by one, so a fault in the condition of one leaves the others standing. */
function inOneClaim(fault: Problem, cell: CellText, reading: Reading): boolean {
  return reading.shapes.get(cell.kind)?.body === "claims" && cell.options.some(({ expression }) => fault.from >= expression.from && fault.to <= expression.to);
}

function memoryOf(before: Notebook | undefined): Memory {
  return before !== undefined && "memory" in before ? (before as ParsedNotebook).memory : { segments: new Map(), bodies: new Map() };
}

interface Reading {
  readonly text: string;
  readonly shapes: ReadonlyMap<string, Shape>;
  readonly kinds: ReadonlySet<string>;
  readonly bodiesBefore: ReadonlyMap<string, CellBody>;
  readonly bodies: Map<string, CellBody>;
  readonly lineAt: (offset: number) => { readonly line: number; readonly column: number };
  readonly blocks: Block[];
  readonly cells: (CellText & CellReads)[];
  readonly numbers: LiveNumber[];
  readonly problems: Problem[];
}

function startReading(text: string, shapes: readonly Shape[], before: Memory): Reading {
  return {
    text, shapes: new Map(shapes.map((shape) => [shape.name, shape])), kinds: new Set(shapes.map((shape) => shape.name)),
    bodiesBefore: before.bodies, bodies: new Map(), lineAt: linesOf(text), blocks: [], cells: [], numbers: [], problems: [],
  };
}

function readBlock(node: RootContent, { at, found }: SegmentedTree["numbers"][number], reading: Reading): void {
  const stands = placeOf(node);
  if (stands === null) return;
  // The Markdown parser lets an underlined heading begin with the definitions before it.
  const place = { from: Math.max(stands.from, reading.blocks.at(-1)?.to ?? 0), to: stands.to };
  const fence = node.type === "code" ? fenceOf(reading.text, node) : null;
  if (fence !== null && isCell(fence, reading)) {
    reading.blocks.push({ block: "cell", ...place, cell: reading.cells.length });
    readCell(fence, reading);
    return;
  }
  if (fence !== null && !fence.closed) unterminated(fence, reading, null);
  nestedCells(node, reading);
  const indexes = found.numbers.map((each) => {
    const index = reading.numbers.length;
    const savedPlace = { from: at + each.savedPlace.from, to: at + each.savedPlace.to };
    reading.numbers.push({ ...each, from: at + each.from, to: at + each.to, savedPlace, index, ...reading.lineAt(at + each.from) });
    return index;
  });
  for (const each of found.problems) problem(reading, each.code, each.message, at + each.from, at + each.to, null);
  reading.blocks.push({ block: "prose", ...place, node, numbers: indexes });
}

/** A first word that ends in a colon makes a cell; one that only lacks the space after it is told so. */
function isCell(fence: Fence, reading: Reading): boolean {
  if (fence.word.endsWith(":")) return true;
  const glued = /^([\p{ID_Start}$_][\p{ID_Continue}$]*):\S+$/u.exec(fence.word);
  if (glued !== null && reading.kinds.has(glued[1])) {
    problem(reading, "missing-space", `This is read as prose, not as a cell: put a space after the colon, \`${glued[1]}: ${fence.word.slice(glued[1].length + 1)}\``, fence.infoFrom, fence.infoTo, null);
  } else if (reading.kinds.has(fence.word)) {
    problem(reading, "missing-colon", `This is read as prose: for a cell, write \`${fence.word}:\` with a colon`, fence.infoFrom, fence.infoTo, null, "note");
  }
  return false;
}

function readCell(fence: Fence, reading: Reading): void {
  const index = reading.cells.length;
  const kind = fence.word.slice(0, -1);
  const shape = reading.shapes.get(kind);
  const { line } = reading.lineAt(fence.from);
  const name = fence.rest === "" ? null : fence.rest;
  const nameFrom = fence.infoTo - fence.rest.length;
  const fault = name === null ? null : nameFault(name, reading.kinds);
  const base = { index, kind, name: fault === null ? name : null, namePlace: name === null ? null : { from: nameFrom, to: fence.infoTo }, line, from: fence.from, to: fence.to, body: { from: fence.bodyFrom, to: fence.bodyTo } };
  if (fault !== null) problem(reading, "bad-name", fault[0].toUpperCase() + fault.slice(1), nameFrom, fence.infoTo, index);
  if (!fence.closed) unterminated(fence, reading, index);
  if (shape === undefined) {
    const known = [...reading.kinds];
    const near = suggestion(kind, known);
    problem(reading, "unknown-kind", kind === "" ? "A kind of cell stands before the colon" : `There is no kind of cell \`${kind}\`${near !== "" ? near : `; there are ${known.join(", ")}`}`, fence.infoFrom, fence.infoFrom + fence.word.length, index);
    reading.cells.push({ ...base, options: [], exports: [], reads: [], broken: true, nameReads: [], code: false });
    return;
  }
  if (shape.control && name === null) problem(reading, "name-needed", `A \`${kind}\` needs a name, so that others can read it: write \`${kind}: name\``, fence.infoFrom, fence.infoTo, index);
  const body = bodyOf(reading.text.slice(fence.bodyFrom, fence.bodyTo), shape, fence.indent, reading);
  for (const each of body.problems) {
    const [from, to] = each.from < 0 ? [fence.infoFrom, fence.infoTo] : [fence.bodyFrom + each.from, fence.bodyFrom + each.to];
    problem(reading, each.code, each.message, from, to, index);
  }
  reading.cells.push({
    ...base, options: body.options.map((each) => shiftOption(each, fence.bodyFrom, reading)), exports: body.exports, reads: body.reads.map((each) => each.name), broken: false,
    nameReads: shift(body.reads, fence.bodyFrom), code: shape.body === "code",
  });
}

function shiftOption(option: CellBody["options"][number], by: number, reading: Reading): OptionText {
  return {
    name: option.name, namePlace: { from: by + option.nameFrom, to: by + option.nameTo }, source: option.source,
    expression: { from: by + option.expressionFrom, to: by + option.expressionTo }, reads: option.reads.map((each) => each.name),
    from: by + option.from, to: by + option.to, line: reading.lineAt(by + option.from).line,
  };
}

function shift(reads: readonly NameRead[], by: number): NameRead[] {
  return reads.map((each) => ({ ...each, from: by + each.from, to: by + each.to }));
}

function unterminated(fence: Fence, reading: Reading, cell: number | null): void {
  const { line } = reading.lineAt(fence.from);
  problem(reading, "unterminated-fence", `The fence opened in line ${line} is never closed, so everything down to the end of the file belongs to it: close it with a line of ${fence.fence} after its body`, fence.from, Math.max(fence.infoTo, fence.from + fence.fence.length), cell);
}

/** A cell inside a list or a quotation is not one: say so. */
function nestedCells(node: RootContent, reading: Reading): void {
  if (!("children" in node) || node.type === "paragraph" || node.type === "heading" || node.type === "table") return;
  walk(node, (each) => {
    if (each.type !== "code" || !each.lang?.endsWith(":") || !reading.kinds.has(each.lang.slice(0, -1))) return;
    const at = placeOf(each);
    if (at !== null) problem(reading, "nested-cell", "A cell stands at the top level of the text, not inside a list or a quotation: move it out", at.from, Math.min(at.to, at.from + 3 + each.lang.length), null);
  });
}

function problem(reading: Reading, code: string, message: string, from: number, to: number, cell: number | null, severity: "error" | "note" = "error"): void {
  reading.problems.push({ code, severity, from, to, ...reading.lineAt(from), cell, message });
}

function titleOf(tree: Root): string {
  const headings = tree.children.filter((each) => each.type === "heading");
  const first = headings.find((each) => each.depth === 1) ?? headings[0];
  return first === undefined ? "" : plainText(first);
}

/** Shapes are taken to be the same from one parse to the next. */
function bodyOf(body: string, shape: Shape, indent: number, reading: Reading): CellBody {
  const key = `${shape.name} ${indent}\n${body}`;
  const read = reading.bodies.get(key) ?? reading.bodiesBefore.get(key) ?? readBody(body, shape, indent);
  reading.bodies.set(key, read);
  return read;
}
