// `lagbook begin`: looks at a data file and writes a first notebook about it, one that verifies clean.

import { access } from "node:fs/promises";
import { basename, dirname, extname, join, relative, resolve, sep } from "node:path";
import { language } from "../../cells/index.ts";
import { decode } from "../../cells/load/decode.ts";
import { numericColumns, timeColumns } from "../../cells/load/columns.ts";
import { sheetOf } from "../../cells/load/sheet.ts";
import { acceptedText } from "./accept.ts";
import { anyForm, claimsSection, conclusions, fourDigits, loadCell, ordersCell, periodWords, sections, steadyCell } from "./beginText.ts";
import type { Orders, Plan, Recognised, Section } from "./beginText.ts";
import { NoFile, readInside } from "./folder.ts";
import { compute } from "./headless.ts";
import { CannotRun, exit } from "./io.ts";
import type { Io } from "./io.ts";
import { writeWhole } from "./write.ts";

export async function begin(command: { readonly file: string; readonly out: string | null }, io: Io): Promise<number> {
  const data = resolve(io.cwd, command.file);
  const out = command.out === null ? join(dirname(data), `${basename(data, extname(data))}.md`) : resolve(io.cwd, command.out);
  const shown = relative(io.cwd, out) || out;
  if (await access(out).then(() => true, () => false)) throw new CannotRun(`${shown} is there already and is left as it is. Open it (lagbook open ${shown}), or give another name with --out NAME.md.`);
  const folder = dirname(out), file = relative(folder, data).split(sep).join("/");
  if (file.startsWith("../") || file === "..") throw new CannotRun(`A notebook reads only files inside its own folder, and ${command.file} is not inside ${folder}. Leave --out away, or copy the data there.`);
  const recognised = await recognise(folder, file);
  const plan = await makePlan(folder, recognised);
  const text = await write(folder, title(recognised, data), recognised, plan);
  await writeWhole(out, text);
  const [, many] = periodWords(recognised.every);
  io.out(`${shown} written: ${recognised.name}, ${many === "periods" ? "numbered values" : `one value a ${periodWords(recognised.every)[0]}`}.\nRead and edit it with: lagbook open ${shown}\n`);
  return exit.stands;
}

async function recognise(folder: string, file: string): Promise<Recognised> {
  let bytes: Uint8Array;
  try { bytes = await readInside(folder, file); } catch (error) { throw error instanceof NoFile ? new CannotRun(error.message) : error; }
  const { times, numbers } = columnsOf(bytes, file);
  const column = numbers.length > 1 ? numbers[0] : null;
  const name = identifier(numbers[0] ?? "", file);
  const [every] = await ask(folder, [loadCell({ name, file, column })], [`${name}.every`], name);
  const spacing = typeof every === "string" ? every : null;
  return { name, file, column, otherColumns: numbers.slice(1, 9), timeColumns: times, every: spacing, notes: await notesOf(folder, { name, file, column }) };
}

function columnsOf(bytes: Uint8Array, file: string): { readonly times: readonly string[]; readonly numbers: readonly string[] } {
  try {
    const sheet = sheetOf(decode(bytes, file), file, undefined);
    const times = timeColumns(sheet, undefined);
    return { times: times.map((column) => sheet.columns[column]), numbers: numericColumns(sheet, times).map((column) => sheet.columns[column]) };
  } catch (error) {
    throw new CannotRun(error instanceof Error ? error.message : String(error));
  }
}

async function notesOf(folder: string, load: Pick<Recognised, "name" | "file" | "column">): Promise<readonly string[]> {
  const { cells } = await compute({ text: loadCell(load), folder, settings: [], allowCode: false });
  return cells.find((cell) => cell.name === load.name)?.notes ?? [];
}

/** Steps, season and horizon by the usual rules of thumb; the notebook's own tests and pictures then show whether they served. */
async function makePlan(folder: string, data: Recognised): Promise<Plan> {
  const { name } = data, load = loadCell(data);
  const usual: Readonly<Record<string, number>> = { P1M: 12, P3M: 4, P1D: 7, PT1H: 24, P1W: 52 };
  const length = usual[data.every ?? ""] ?? 0;
  const [n, least, lambda] = await ask(folder, [load], [`${name}.n`, `min(${name})`, `estimateLambda(${name}, "guerrero")`], name);
  const count = typeof n === "number" ? n : 0;
  const logs = typeof least === "number" && least > 0 && typeof lambda === "number" && lambda < 0.5;
  const level = logs ? `log(${name})` : name;
  // Longer seasons than 24 periods are left to the naive rule: their models take long, and weeks do not fit a year.
  const seasonal = length > 1 && length <= 24 && count >= 4 * length;
  const [atSeason] = seasonal ? await ask(folder, [load], [`acf(difference(${level}, 1), ${length})[${length}]`], name) : [null];
  const season = seasonal ? length : 0, seasonalDifference = seasonal && typeof atSeason === "number" && atSeason > 0.3;
  const [kpss] = await ask(folder, [load], [`kpss(${seasonalDifference ? `difference(${level}, ${length})` : level}).p`], name);
  const difference = typeof kpss === "number" && kpss < 0.05 ? 1 : 0;
  const horizon = Math.max(1, Math.min(season > 0 ? season : data.every === "P1Y" ? 5 : 12, Math.floor(count / 6)));
  return {
    logs, difference, seasonalDifference, season, horizon, origins: Math.max(2, Math.min(24, Math.floor(count / 6))),
    lags: Math.max(2, Math.min(season > 0 ? 2 * season : 20, Math.floor(count / 4))),
  };
}

async function write(folder: string, heading: string, data: Recognised, plan: Plan): Promise<string> {
  const orders = await bestOrders(folder, data, plan);
  let kept = sections(heading, data, plan, orders);
  // A section whose cell the data cannot answer (a series too short for it) is left out, with those that build on it.
  for (let round = 0; round < 8; round++) {
    const failed = await failing(folder, kept);
    if (failed.size === 0) break;
    if (failed.has("data")) throw new CannotRun(`No notebook could be written: ${failed.get("data")}`);
    kept = without(kept, new Set(failed.keys()));
  }
  const ids = new Set(kept.map((section) => section.id)), body = kept.map((section) => section.text);
  const possible = conclusions.filter((conclusion) => ids.has(conclusion.needs));
  const holds = await ask(folder, body, possible.map((conclusion) => conclusion.condition), null);
  const claims = possible.length === 0 ? [] : [claimsSection(possible.filter((_, i) => holds[i] === true), possible.filter((_, i) => holds[i] === false).map(({ claim }) => claim))];
  const text = `${[...body, ...claims].join("\n\n").trimEnd()}\n`;
  const { numbers } = await compute({ text, folder, settings: [], allowCode: false });
  return acceptedText(text, numbers, anyForm, fourDigits);
}

async function bestOrders(folder: string, data: Recognised, plan: Plan): Promise<Orders> {
  const parts = ["phi", "theta", "seasonalPhi", "seasonalTheta"].map((part) => `orders.best.fit.${part}.length`);
  const found = await ask(folder, [loadCell(data), steadyCell(data.name, plan, null), ordersCell(plan)], parts, null);
  const [ar, ma, seasonalAr, seasonalMa] = found.map((value) => typeof value === "number" ? value : null);
  return ar === null ? { ar: 1, ma: 0, seasonalAr: 0, seasonalMa: plan.season > 0 ? 1 : 0 } : { ar, ma: ma ?? 0, seasonalAr: seasonalAr ?? 0, seasonalMa: seasonalMa ?? 0 };
}

/** Sections with a failed cell, and why. */
async function failing(folder: string, kept: readonly Section[]): Promise<ReadonlyMap<string, string>> {
  const text = kept.map((section) => section.text).join("\n\n");
  const { cells, numbers } = await compute({ text, folder, settings: [], allowCode: false });
  const found = new Map<string, string>();
  let from = 0;
  for (const section of kept) {
    const to = from + section.text.length;
    const bad = cells.find((cell) => cell.from >= from && cell.from < to && cell.state === "failed")?.message ?? numbers.find((number) => number.from >= from && number.from < to && number.state === "undecided")?.message;
    if (bad !== undefined) found.set(section.id, bad ?? "a cell failed");
    from = to + 2;
  }
  return found;
}

function without(kept: readonly Section[], gone: Set<string>): readonly Section[] {
  const left = kept.filter((section) => {
    if (!gone.has(section.id) && !section.needs.some((need) => gone.has(need))) return true;
    gone.add(section.id);
    return false;
  });
  return left;
}

/** Values of expressions beside some cells; null where one could not be computed.
 *  @param mustRun  name of a cell without which nothing can be said */
async function ask(folder: string, cells: readonly string[], expressions: readonly string[], mustRun: string | null): Promise<readonly (number | string | boolean | null)[]> {
  const text = [...cells, ...expressions.map((expression) => `[0](<=${expression.replace(/[\\<>]/g, "\\$&")}>)`)].join("\n\n");
  const computed = await compute({ text, folder, settings: [], allowCode: false });
  const failed = mustRun === null ? undefined : computed.cells.find((cell) => cell.name === mustRun && cell.state === "failed");
  if (failed) throw new CannotRun(failed.message ?? "The data could not be read.");
  return computed.numbers.slice(-expressions.length).map((number) => number.value);
}

/** A name for the series: its column's, or the file's where the column says nothing. */
function identifier(column: string, file: string): string {
  const taken = new Set([...language.kinds.map((kind) => kind.name), ...language.library.map((entry) => entry.name.split(".")[0]), ...Object.keys(language.constants), "sample", "steady", "tests", "shape", "orders", "p", "q", "model", "leftover", "contest", "ahead"]);
  const stem = basename(file, extname(file));
  const general = /^(value|values|y|x|data|v|number|amount|count|)$/i.test(column.trim());
  for (const words of general ? [stem, column] : [column, stem]) {
    const [first = "", ...rest] = words.normalize("NFKD").replace(/[\u0300-\u036f]/g, "").split(/[^A-Za-z0-9]+/).filter((part) => part !== "");
    const name = [first.charAt(0).toLowerCase() + first.slice(1), ...rest.map((part) => part.charAt(0).toUpperCase() + part.slice(1))].join("");
    if (/^[A-Za-z]\w*$/.test(name) && !taken.has(name) && isFree(name)) return name;
  }
  return "observed";
}

/** Words that ECMAScript keeps for itself make no names. */
function isFree(name: string): boolean {
  return !new Set("break case catch class const continue debugger default delete do else enum export extends false finally for function if import in instanceof new null return super switch this throw true try typeof var void while with let static yield await async of free undefined".split(" ")).has(name);
}

function title({ name }: Recognised, data: string): string {
  const words = basename(data, extname(data)).replace(/[-_]+/g, " ").trim() || name;
  return words.charAt(0).toUpperCase() + words.slice(1);
}
