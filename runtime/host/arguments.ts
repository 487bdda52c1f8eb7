// The command line, read: which command, on which file, with which options.

import { parseArgs } from "node:util";
import { CannotRun } from "./io.ts";
import { usualLimits } from "./within.ts";
import type { Limits } from "./within.ts";

export interface Setting { readonly name: string; readonly value: unknown }

export type Command =
  | { readonly command: "help" } | { readonly command: "version" }
  | { readonly command: "begin"; readonly file: string; readonly out: string | null }
  | { readonly command: "open"; readonly file: string; readonly port: number | null }
  | { readonly command: "verify"; readonly file: string; readonly json: boolean; readonly accept: boolean; readonly settings: readonly Setting[]; readonly allowCode: boolean; readonly limits: Limits }
  | { readonly command: "page"; readonly file: string; readonly settings: readonly Setting[]; readonly allowCode: boolean; readonly limits: Limits; readonly out: string | null };

const options = {
  help: { type: "boolean", short: "h" }, version: { type: "boolean" }, json: { type: "boolean" }, accept: { type: "boolean" },
  set: { type: "string", multiple: true }, "allow-code": { type: "boolean" }, out: { type: "string" }, port: { type: "string" },
  seconds: { type: "string" }, megabytes: { type: "string" },
} as const;

const takes: Readonly<Record<string, readonly string[]>> = { begin: ["out"], open: ["port"], verify: ["json", "accept", "set", "allow-code", "seconds", "megabytes"], page: ["set", "allow-code", "out", "seconds", "megabytes"] };

/** @throws CannotRun where the line makes no command */
export function readArguments(argv: readonly string[]): Command {
  const { values, positionals } = parsed(argv);
  if (values.help || positionals[0] === "help") return { command: "help" };
  if (values.version) return { command: "version" };
  const [command, file, ...rest] = positionals;
  if (command === undefined) throw new CannotRun("Say what to do: begin, open, verify or page. `lagbook --help` explains them.");
  if (!Object.hasOwn(takes, command)) throw new CannotRun(`There is no command "${command}". There are: begin, open, verify, page.`);
  if (file === undefined) throw new CannotRun(`lagbook ${command} needs a file: lagbook ${command} ${command === "begin" ? "DATA.csv" : "NOTEBOOK.md"}`);
  if (rest.length > 0) throw new CannotRun(`lagbook ${command} takes one file; "${rest[0]}" is one too many.`);
  for (const name of Object.keys(values)) {
    if (!takes[command].includes(name)) throw new CannotRun(`--${name} does not go with lagbook ${command}.${takes[command].length > 0 ? ` What goes with it: ${takes[command].map((it) => `--${it}`).join(", ")}.` : ""}`);
  }
  const settings = (values.set ?? []).map(readSetting), allowCode = values["allow-code"] ?? false, out = values.out ?? null;
  if (command === "begin") return { command, file, out };
  if (command === "open") return { command, file, port: values.port === undefined ? null : readPort(values.port) };
  const limits = { seconds: readLimit("seconds", values.seconds, 86_400), megabytes: readLimit("megabytes", values.megabytes, 1_048_576) };
  if (command === "page") return { command, file, settings, allowCode, limits, out };
  const accept = values.accept ?? false;
  if (accept && settings.length > 0) throw new CannotRun("--accept writes numbers into the text as its own settings give them, so it does not go with --set. Change the control's `at` in the text instead.");
  return { command: "verify", file, json: values.json ?? false, accept, settings, allowCode, limits };
}

function parsed(argv: readonly string[]) {
  try {
    return parseArgs({ args: [...argv], options, allowPositionals: true, strict: true });
  } catch (error) {
    const message = error instanceof Error ? error.message : String(error);
    const unknown = /Unknown option '(-[^']*)'/.exec(message)?.[1], empty = /Option '([^']*)'? ?.*argument missing/.exec(message)?.[1];
    if (unknown) throw new CannotRun(`There is no option ${unknown}. \`lagbook --help\` lists them.`);
    throw new CannotRun(empty ? `${empty.replace(/^-., /, "").replace(/ <value>$/, "")} needs a value after it.` : message);
  }
}

/** A setting as typed: a JSON literal, else a text; a window as an ISO 8601 interval, which stays a text here.
 *  @example readSetting("q=2") // { name: "q", value: 2 } */
export function readSetting(typed: string): Setting {
  const at = typed.indexOf("=");
  if (at <= 0) throw new CannotRun(`--set ${typed}: write NAME=VALUE, such as --set q=2`);
  const name = typed.slice(0, at).trim(), text = typed.slice(at + 1);
  try {
    return { name, value: JSON.parse(text) as unknown };
  } catch {
    return { name, value: text };
  }
}

function readLimit(name: keyof Limits, typed: string | undefined, most: number): number {
  const given = typed === undefined ? usualLimits[name] : Number(typed);
  if (typed !== undefined && (!/^\d+(\.\d+)?$/.test(typed) || given <= 0 || given > most)) throw new CannotRun(`--${name} ${typed}: give a number above 0, up to ${most}.`);
  return given;
}

function readPort(typed: string): number {
  const port = Number(typed);
  if (!/^\d+$/.test(typed) || port > 65535) throw new CannotRun(`--port ${typed}: give a number from 0 to 65535 (0 takes any free port).`);
  return port;
}
