// The notebook's file: read whole, written whole, and never over a text that the writer has not seen.

import { readFileSync } from "node:fs";
import { readFile, stat } from "node:fs/promises";
import { writeWhole } from "./write.ts";
import { hash } from "./hash.ts";
import { CannotRun } from "./io.ts";

export interface Stored { readonly text: string; readonly hash: string }

/** What came of a save: written, or not, because the file holds something else by now (null: it is gone). */
export type SaveResult = { readonly saved: Stored } | { readonly found: Stored | null };

/** The notebook's text, to the byte: a byte-order mark and the line ends stay in it.
 *  @throws CannotRun with words for the user where there is no such text */
export async function readNotebook(path: string): Promise<Stored> {
  let bytes: Uint8Array;
  try {
    if ((await stat(path)).isDirectory()) throw new CannotRun(`${path} is a folder. Name a notebook, a Markdown file such as forecast.md.`);
    bytes = await readFile(path);
  } catch (error) {
    if (error instanceof CannotRun) throw error;
    const code = error instanceof Error && "code" in error ? error.code : null;
    if (code === "ENOENT") throw new CannotRun(`There is no file ${path}. Check the name, or make a first notebook from data with: lagbook begin DATA.csv`);
    throw new CannotRun(`${path} cannot be read: ${error instanceof Error ? error.message : String(error)}`);
  }
  return { text: decode(bytes, path), hash: hash(bytes) };
}

function decode(bytes: Uint8Array, path: string): string {
  try {
    return new TextDecoder("utf-8", { fatal: true, ignoreBOM: true }).decode(bytes);
  } catch {
    throw new CannotRun(`${path} is not UTF-8 text. A notebook is a Markdown file in UTF-8: save it again in that encoding.`);
  }
}

/** One notebook's file, its writes one after another. */
export class Store {
  readonly path: string;
  #last: Promise<unknown> = Promise.resolve();

  constructor(path: string) { this.path = path; }

  read(): Promise<Stored> { return readNotebook(this.path); }

  /** Writes `text` if the file still has the hash `seen`; `null` means that it must not be there. */
  save(text: string, seen: string | null): Promise<SaveResult> {
    const turn = this.#last.then(() => this.#save(text, seen));
    this.#last = turn.catch(() => undefined);
    return turn;
  }

  async #save(text: string, seen: string | null): Promise<SaveResult> {
    const found = await this.#found();
    if ((found?.hash ?? null) !== seen) return { found };
    // Replacing a file asks the folder's leave, not the file's: a file that was protected would be written all the same.
    if (found && ((await stat(this.path)).mode & 0o222) === 0) throw new CannotRun(`${this.path} is read-only, so nothing was written into it. Make it writable, or copy the text elsewhere.`);
    // Flushing a text to the disk takes a while, in which another program may have written its own.
    if (!await writeWhole(this.path, text, () => this.#hashNow() === seen)) return { found: await this.#found() };
    return { saved: { text, hash: hash(text) } };
  }

  #hashNow(): string | null {
    try {
      return hash(readFileSync(this.path));
    } catch (error) {
      if (isMissing(error)) return null;
      throw error;
    }
  }

  async #found(): Promise<Stored | null> {
    try {
      await stat(this.path);
    } catch (error) {
      // Only what is not there may be written anew; what cannot be looked at may well be there.
      if (isMissing(error)) return null;
      throw new CannotRun(`${this.path} cannot be read: ${error instanceof Error ? error.message : String(error)}`);
    }
    return this.read();
  }
}

function isMissing(error: unknown): boolean { return error instanceof Error && "code" in error && error.code === "ENOENT"; }
