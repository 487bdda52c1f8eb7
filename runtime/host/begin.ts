// `lagbook begin`: looks at a data file and writes a first notebook about it, one that verifies clean.

import { access } from "node:fs/promises";
import { basename, dirname, extname, join, relative, resolve, sep } from "node:path";
import type { CellReport, NumberReport } from "../engine/messages.ts";
import { acceptedText } from "./accept.ts";
import { asNumber, ask } from "./ask.ts";
import { anyForm, claimsSection, conclusions, fourDigits, leftOutSection, loadCell, ordersCell, sections, spacingWords, steadyCell } from "./beginText.ts";
import type { Orders, Plan, Recognised, Section } from "./beginText.ts";
import { compute } from "./headless.ts";
import { CannotRun, exit } from "./io.ts";
import type { Io } from "./io.ts";
import { recognise } from "./recognise.ts";
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
  io.out(`${shown} written: ${recognised.name}, ${spacingWords(recognised)}.\nRead and edit it with: lagbook open ${shown}\n`);
  return exit.stands;
}

/** Steps, season and horizon by the usual rules of thumb; the notebook's own tests and pictures then show whether they served. */
async function makePlan(folder: string, data: Recognised): Promise<Plan> {
  const { name } = data, load = loadCell(data);
  const usual: Readonly<Record<string, number>> = { P1M: 12, P3M: 4, P1D: 7, PT1H: 24, PT30M: 48, PT15M: 96, P1W: 52 };
  const length = data.week ?? usual[data.every ?? ""] ?? 0;
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
    logs, difference, seasonalDifference, levelTested: typeof kpss === "number" && !Number.isNaN(kpss), season, cycle: length > 1 && count >= 3 * length ? length : 0, horizon, origins: Math.max(2, Math.min(24, Math.floor(count / 6))),
    lags: Math.max(2, Math.min(season > 0 ? 2 * season : 20, Math.floor(count / 4))),
  };
}

async function write(folder: string, heading: string, data: Recognised, plan: Plan): Promise<string> {
  let kept = sections(heading, data, plan, await bestOrders(folder, data, plan));
  const left = new Map<string, string>();
  // A section whose cell the data cannot answer (a series too short for it) is left out, with those that build on it.
  for (let round = 0; round < 8; round++) {
    const done = await whole(folder, kept, left);
    if (typeof done === "string") return done;
    if (done.has("data")) throw new CannotRun(`No notebook could be written: ${done.get("data")}`);
    for (const [id, why] of done) left.set(id, why);
    kept = without(kept, new Set(done.keys()));
  }
  throw new CannotRun("No notebook could be written: its sections fail whatever is left out.");
}

/** The text of these sections with their numbers as they are, the conclusions that hold, and what was left out and why;
 *  or the sections that have failed. All is asked at once, for a comparison takes long. */
async function whole(folder: string, kept: readonly Section[], left: ReadonlyMap<string, string>): Promise<string | ReadonlyMap<string, string>> {
  const body = kept.map((section) => section.text);
  const possible = conclusions.filter((conclusion) => kept.some((section) => section.id === conclusion.needs));
  const asked = [...possible.map(({ condition }) => condition), `${kept.some((section) => section.id === "tests") ? "tests.kpss?.bound ?? " : ""}"inside"`];
  const { cells, numbers } = await compute({ text: [...body, ...asked.map(asNumber)].join("\n\n"), folder, settings: [], allowCode: false });
  const failed = failing(kept, cells, numbers);
  if (failed.size > 0) return failed;
  const holds = numbers.slice(-asked.length).map((number) => number.value), end = holds.at(-1);
  const claims = possible.length === 0 ? [] : [claimsSection(possible.filter((_, i) => holds[i] === true), possible.filter((_, i) => holds[i] === false).map(({ claim }) => claim))];
  const text = `${[...body, ...(left.size === 0 ? [] : [leftOutSection(left)]), ...claims].join("\n\n").trimEnd()}\n`;
  const own = numbers.slice(0, -asked.length);
  if (end !== "below" && end !== "above") return acceptedText(text, own, anyForm, fourDigits);
  // Where the printed table ends, only a bound of the p-value is known.
  const p = own.find((number) => number.expression === "tests.kpss.p")?.value;
  const bounded = text.replace("[0.00](=tests.kpss.p)", `[${end === "below" ? "<" : ">"}${Number(p).toFixed(2)}](=tests.kpss.p)`);
  return acceptedText(bounded, own.filter((number) => number.expression !== "tests.kpss.p"), anyForm, fourDigits);
}

async function bestOrders(folder: string, data: Recognised, plan: Plan): Promise<Orders> {
  const parts = ["phi", "theta", "seasonalPhi", "seasonalTheta"].map((part) => `orders.best.fit.${part}.length`);
  const found = await ask(folder, [loadCell(data), steadyCell(data.name, plan, null), ordersCell(plan)], parts, null);
  const [ar, ma, seasonalAr, seasonalMa] = found.map((value) => typeof value === "number" ? value : null);
  return ar === null ? { ar: 1, ma: 0, seasonalAr: 0, seasonalMa: plan.season > 0 ? 1 : 0 } : { ar, ma: ma ?? 0, seasonalAr: seasonalAr ?? 0, seasonalMa: seasonalMa ?? 0 };
}

/** Sections with a failed cell, or a number that cannot be had, and why. */
function failing(kept: readonly Section[], cells: readonly CellReport[], numbers: readonly NumberReport[]): ReadonlyMap<string, string> {
  const found = new Map<string, string>();
  let from = 0;
  for (const section of kept) {
    const to = from + section.text.length, inside = (each: { readonly from: number }): boolean => each.from >= from && each.from < to;
    const bad = cells.find((cell) => inside(cell) && cell.state === "failed") ?? numbers.find((number) => inside(number) && number.state === "undecided" && !cells.some((cell) => cell.state === "failed"));
    if (bad !== undefined) found.set(section.id, (bad.message ?? "a cell failed").replace(/^Undecided: /, ""));
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

function title({ name }: Recognised, data: string): string {
  const words = basename(data, extname(data)).replace(/[-_]+/g, " ").trim() || name;
  return words.charAt(0).toUpperCase() + words.slice(1);
}
