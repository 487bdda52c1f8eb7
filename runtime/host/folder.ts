// Reads for a notebook: files inside the notebook's own folder and nothing else, however the path is written.

import { constants } from "node:fs";
import { open, readdir, realpath, stat } from "node:fs/promises";
import { basename, dirname, join, sep } from "node:path";

/** Largest file a notebook may read, in bytes: beyond it the page would run out of memory before it said why. */
const largestFile = 256 * 1024 * 1024;

/** The file is not to be had; the message is for the notebook's author. */
export class NoFile extends Error {
  constructor(message: string) { super(message); this.name = "NoFile"; }
}

/** The bytes of a file inside `folder`.
 *  @param folder  the notebook's folder
 *  @param file    relative path with `/` between its parts, as the notebook says it
 *  @throws NoFile where the path leads out of the folder (also by a symbolic link), or there is no such file */
export async function readInside(folder: string, file: string): Promise<Uint8Array> {
  const path = await placeInside(folder, file);
  // NOFOLLOW: the path has no links left, so one that appears now was put there between the check and the read.
  const handle = await open(path, constants.O_RDONLY | constants.O_NOFOLLOW);
  try {
    return new Uint8Array(await handle.readFile());
  } finally {
    await handle.close();
  }
}

/** The real path of a file inside `folder`, checked as in `readInside`. */
export async function placeInside(folder: string, file: string): Promise<string> {
  refuseByForm(file);
  const home = await realpath(folder);
  let path: string;
  try {
    path = await realpath(join(home, file));
  } catch (error) {
    if (isMissing(error)) throw new NoFile(await missing(home, file));
    throw new NoFile(`"${file}" cannot be read (${reason(error)}).`);
  }
  if (!isInside(home, path)) {
    throw new NoFile(`"${file}" leads out of the notebook's folder by a link. A notebook reads only files inside its own folder: put a copy of the file there.`);
  }
  const found = await stat(path);
  if (found.isDirectory()) throw new NoFile(`"${file}" is a folder. Name a file in it: ${await listing(path, file) || "it is empty"}.`);
  if (!found.isFile()) throw new NoFile(`"${file}" is not an ordinary file.`);
  if (found.size > largestFile) throw new NoFile(`"${file}" has ${Math.round(found.size / 1048576)} MB; a notebook reads files up to ${largestFile / 1048576} MB. Aggregate it first, or split it.`);
  return path;
}

/** Whether a real path is the folder's own or inside it. */
export function isInside(home: string, path: string): boolean {
  return path === home || path.startsWith(home.endsWith(sep) ? home : home + sep);
}

function refuseByForm(file: string): void {
  if (file.trim() === "") throw new NoFile(`The file's name is empty. Give a name such as "data.csv".`);
  if (file.includes("\0")) throw new NoFile("The file's name holds a character that no file name can hold (code 0).");
  const tail = "A notebook reads only files inside its own folder";
  if (/^[a-z][a-z0-9+.-]+:\/\//i.test(file)) throw new NoFile(`"${file}" is an address on a network. ${tail}: save the file there first and give its name.`);
  if (/^([/\\]|[a-z]:)/i.test(file)) throw new NoFile(`"${file}" is an absolute path. ${tail}: put the file there and give its name, such as "${file.split(/[/\\]/).at(-1) || "data.csv"}".`);
  if (file.includes("\\")) throw new NoFile(`"${file}" has a backslash. Write "/" between the parts of a path: "${file.replaceAll("\\", "/")}".`);
  if (file.split("/").includes("..")) throw new NoFile(`"${file}" goes up out of a folder with "..". ${tail}: put the file there, or move the notebook.`);
}

async function missing(home: string, file: string): Promise<string> {
  const folder = dirname(file) === "." ? home : join(home, dirname(file));
  const others = await listing(folder, dirname(file) === "." ? "" : dirname(file)).catch(() => "");
  const where = dirname(file) === "." ? "the notebook's folder" : `the folder "${dirname(file)}"`;
  return `There is no file "${basename(file)}" in ${where}.${others ? ` What is there: ${others}.` : ""}`;
}

/** Up to six names of a folder that look like data, as a notebook would write them. */
async function listing(folder: string, prefix: string): Promise<string> {
  const entries = await readdir(folder, { withFileTypes: true });
  const names = entries.filter((entry) => entry.isFile() && /\.(csv|tsv|txt|xlsx)$/i.test(entry.name)).map((entry) => entry.name).sort();
  const shown = names.slice(0, 6).map((name) => `"${prefix ? `${prefix}/` : ""}${name}"`).join(", ");
  return names.length > 6 ? `${shown} and ${names.length - 6} more` : shown;
}

function isMissing(error: unknown): boolean {
  const code = error instanceof Error && "code" in error ? error.code : null;
  return code === "ENOENT" || code === "ENOTDIR";
}

function reason(error: unknown): string {
  const code = error instanceof Error && "code" in error ? String(error.code) : "";
  if (code === "EACCES" || code === "EPERM") return "you may not read it: change its permissions";
  if (code === "ELOOP") return "its links run in a circle";
  return error instanceof Error ? error.message : String(error);
}
