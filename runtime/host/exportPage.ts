// `lagbook page`: writes a notebook as one HTML file.

import { basename, dirname, extname, join, resolve } from "node:path";
import { language } from "../../cells/index.ts";
import { timeAt } from "../../stdlib/index.ts";
import { stateAfter } from "../page/pageState.ts";
import { renderStill } from "../page/still.ts";
import { stillCharts } from "../page/stillCharts.ts";
import { parse } from "../text/parse.ts";
import type { Setting } from "./arguments.ts";
import { exportDocument, pack } from "./exportDocument.ts";
import type { Provenance } from "./exportDocument.ts";
import { hash } from "./hash.ts";
import type { Computed } from "./headless.ts";
import { exit } from "./io.ts";
import type { Io } from "./io.ts";
import { readPart } from "./parts.ts";
import { readNotebook } from "./store.ts";
import { version } from "./version.ts";
import { computeWithin } from "./within.ts";
import type { Limits } from "./within.ts";
import { writeWhole } from "./write.ts";

/** Pixels that a figure takes across in the still page. */
const figureWidth = 700;

export interface PageCommand { readonly file: string; readonly settings: readonly Setting[]; readonly allowCode: boolean; readonly limits: Limits; readonly out: string | null }

/** @returns 0; 1 where a cell failed, a claim broke or a number moved: the page is written all the same and shows it */
export async function exportPage(command: PageCommand, io: Io): Promise<number> {
  const path = resolve(io.cwd, command.file), out = command.out === null ? join(dirname(path), `${basename(path, extname(path))}.html`) : resolve(io.cwd, command.out);
  const stored = await readNotebook(path);
  const computed = await computeWithin({ text: stored.text, notebook: basename(path), folder: dirname(path), settings: command.settings, allowCode: command.allowCode, width: figureWidth }, command.limits);
  const state = stateAfter(computed.messages);
  const still = renderStill(state, await stillCharts(state, figureWidth));
  const [frame, live, shell, pageCss] = await Promise.all([readPart("frame.html"), readPart("live.txt"), readPart("shell.js"), readPart("page.css")]);
  const provenance: Provenance = { notebook: basename(path), notebookHash: stored.hash, version, made: io.now(), data: dataOf(computed, stored.text), settings: command.settings };
  const text = exportDocument({ title: state.title || basename(path), still, carried: carriedOf(stored.text, computed, command), provenance }, { frame, live, shell, pageCss });
  await writeWhole(out, text);
  io.out(`${out} (${Math.round(Buffer.byteLength(text) / 1000)} kB)\n`);
  if (computed.result.ok) return exit.stands;
  io.error(`lagbook: not everything in ${basename(path)} stands; the page shows what does not. See: lagbook verify ${command.file}\n`);
  return exit.fails;
}

function carriedOf(text: string, computed: Computed, { settings, allowCode }: PageCommand) {
  const files = [...computed.files].map(([file, found]) => [file, "bytes" in found ? { bytes: pack(found.bytes) } : { reason: found.reason }] as const);
  return { text, allowCode, settings, files: Object.fromEntries(files) };
}

/** What each data file held: the periods of its series, their span, and its hash. */
function dataOf(computed: Computed, text: string): Provenance["data"] {
  const notebook = parse(text, language.kinds);
  return [...computed.files].flatMap(([file, found]) => {
    if (!("bytes" in found)) return [];
    const names = notebook.cells.filter((cell) => cell.kind === "load" && cell.options.some((option) => option.name === "file" && option.source.includes(JSON.stringify(file).slice(1, -1)))).map((cell) => cell.name);
    const fields = computed.cells.find((cell) => names.includes(cell.name))?.fields ?? [];
    const field = (end: string): unknown => fields.find(({ expression }) => expression.endsWith(end))?.value;
    const n = field(".n"), start = field(".start"), every = field(".every");
    const rows = typeof n === "number" ? n : null;
    const span = rows === null || typeof start !== "string" ? null : `${start} to ${timeAt(start, typeof every === "string" ? every : null, rows - 1)}`;
    return [{ file, rows, span, hash: hash(found.bytes) }];
  });
}
