// Keeps the text in the editor and the file on disk together: saving, changes made meanwhile by others, drafts.
// It knows no document and no editor package, so every way that two writers can meet is tested by itself.

import type { Edit } from "../text/notebook.ts";
import type { Draft, Drafts } from "./drafts.ts";
import type { Files, Stored } from "./files.ts";
import { editsBetween, mergeTexts, mergedText } from "./merge.ts";
import type { Region } from "./merge.ts";

export interface KeeperOptions {
  readonly files: Pick<Files, "open" | "save">;
  readonly drafts: Drafts;
  readonly base: Stored;
  readonly editor: { text(): string; change(edits: readonly Edit[]): void };
  /** Lets the author choose where two texts conflict; null: not now. */
  readonly choose: (regions: readonly Region[]) => Promise<string | null>;
  readonly tell: (what: Told) => void;
  readonly now: () => number;
}

/** What the author should see. */
export type Told =
  | { readonly told: "state"; readonly dirty: boolean }
  | { readonly told: "saved" }
  | { readonly told: "reread" }
  | { readonly told: "merged" }
  | { readonly told: "undecided" }
  | { readonly told: "gone" }
  | { readonly told: "draft"; readonly time: number }
  | { readonly told: "trouble"; readonly message: string };

export class Keeper {
  readonly #options: KeeperOptions;
  #base: Stored;
  #gone = false;
  #busy: Promise<unknown> = Promise.resolve();

  constructor(options: KeeperOptions) { this.#options = options; this.#base = options.base; }

  get dirty(): boolean { return this.#gone || this.#options.editor.text() !== this.#base.text; }
  get base(): Stored { return this.#base; }

  /** Called after each change of the text, a little later. */
  changed(): void {
    const text = this.#options.editor.text();
    if (text === this.#base.text) this.#options.drafts.drop();
    else this.#keepDraft({ text, base: this.#base.text, baseHash: this.#base.hash, time: this.#options.now() });
    this.#options.tell({ told: "state", dirty: this.dirty });
  }

  /** Brings back a draft: as one change of the text, merged with what the file has become. */
  async restore(draft: Draft): Promise<void> {
    this.#options.drafts.adopt(draft);
    if (draft.text === this.#base.text) { this.#options.drafts.drop(); return; }
    this.#options.tell({ told: "draft", time: draft.time });
    const merged = draft.baseHash === this.#base.hash ? draft.text : await this.#merge(draft.base, draft.text, this.#base.text);
    // Not decided: the author's unsaved text is what must not be lost; the file's text is safe on disk.
    this.#put(merged ?? draft.text);
    if (merged === null) this.#base = { text: draft.base, hash: draft.baseHash };
    this.changed();
  }

  /** Forgets the draft and shows the file as it is. */
  revert(): void {
    this.#put(this.#base.text);
    this.changed();
  }

  /** The file changed on disk; `hash` null: it is gone. */
  onDisk(hash: string | null): Promise<void> { return this.#inTurn(() => this.#onDisk(hash)); }

  save(): Promise<boolean> { return this.#inTurn(() => this.#save()); }

  async #onDisk(hash: string | null): Promise<void> {
    if (hash === null) { this.#gone = true; this.#options.tell({ told: "gone" }); this.#options.tell({ told: "state", dirty: true }); return; }
    if (hash === this.#base.hash) { this.#gone = false; this.#options.tell({ told: "state", dirty: this.dirty }); return; }
    await this.#take(await this.#options.files.open());
  }

  /** Takes in another text of the file; false where the author has not decided. */
  async #take(theirs: Stored): Promise<boolean> {
    const mine = this.#options.editor.text();
    this.#gone = false;
    if (theirs.text === this.#base.text || theirs.text === mine) { this.#base = theirs; this.changed(); return true; }
    if (mine === this.#base.text) {
      this.#base = theirs;
      this.#put(theirs.text);
      this.#options.tell({ told: "reread" });
      this.changed();
      return true;
    }
    const merged = await this.#merge(this.#base.text, mine, theirs.text);
    if (merged === null) { this.#options.tell({ told: "undecided" }); return false; }
    this.#base = theirs;
    this.#put(merged);
    this.#options.tell({ told: "merged" });
    this.changed();
    return true;
  }

  async #save(): Promise<boolean> {
    // Another writer may come in between again and again; after a few rounds it is better to say so.
    for (let round = 0; round < 4; round++) {
      const text = this.#options.editor.text();
      const result = await this.#options.files.save(text, this.#gone ? null : this.#base.hash);
      if ("hash" in result) {
        this.#base = { text, hash: result.hash };
        this.#gone = false;
        this.changed();
        this.#options.tell({ told: "saved" });
        return true;
      }
      if (result.found === null) { this.#gone = true; this.#options.tell({ told: "gone" }); return false; }
      if (!await this.#take(result.found)) return false;
    }
    this.#options.tell({ told: "trouble", message: "Another program keeps writing this file, so the text was not saved. It is kept here: save again when that program has ended." });
    return false;
  }

  async #merge(base: string, mine: string, theirs: string): Promise<string | null> {
    const regions = mergeTexts(base, mine, theirs);
    return mergedText(regions) ?? await this.#options.choose(regions);
  }

  #put(text: string): void { this.#options.editor.change(editsBetween(this.#options.editor.text(), text)); }

  #keepDraft(draft: Draft): void {
    try {
      this.#options.drafts.keep(draft);
    } catch (error) {
      this.#options.tell({ told: "trouble", message: `This browser could not keep a copy of the unsaved text (${error instanceof Error ? error.message : String(error)}). Save before you leave.` });
    }
  }

  #inTurn<T>(work: () => Promise<T>): Promise<T> {
    const turn = this.#busy.then(work);
    this.#busy = turn.catch(() => undefined);
    return turn.catch((error: unknown) => {
      this.#options.tell({ told: "trouble", message: error instanceof Error ? error.message : String(error) });
      throw error;
    });
  }
}
