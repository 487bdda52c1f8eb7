// Scripts at work, remembered in the browser: one that takes all memory ends the page once, not at each opening.
// A browser may end the page's frame alone or the whole tab, so the page is also asked whether it still lives.

import type { FromPage, ToPage } from "../page/protocol.ts";
import type { DraftStorage } from "./drafts.ts";

export interface ScriptWatchOptions {
  readonly storage: DraftStorage;
  /** The notebook's path. */
  readonly notebook: string;
  /** This tab's own mark. */
  readonly tab: string;
  readonly post: (message: ToPage) => void;
  readonly now: () => number;
  /** Called when the page falls silent while scripts are at work, and when it answers again. */
  readonly silent: (silent: boolean) => void;
}

/** A page silent for so many milliseconds is taken to have ended. */
export const silenceMs = 6000;

export class ScriptWatch {
  readonly #options: ScriptWatchOptions;
  readonly #prefix: string;
  readonly #atWork = new Set<string>();
  /** When the oldest unanswered question was put to the page. */
  #asked: number | null = null;
  #silent = false;
  #held = false;

  constructor(options: ScriptWatchOptions) {
    this.#options = options;
    this.#prefix = `lagbook scripts ${encodeURIComponent(options.notebook)} `;
  }

  /** Whether scripts wait until the reader lets them run. */
  get held(): boolean { return this.#held; }

  /** Holds scripts where some were at work at the last sign of a page in this tab, or in one that is gone. */
  start(isOpen: (tab: string) => boolean): void {
    const { storage, tab } = this.#options;
    const left = Array.from({ length: storage.length }, (_, index) => storage.key(index)).filter((key): key is string => key?.startsWith(this.#prefix) === true)
      .filter((key) => { const of = key.slice(this.#prefix.length); return of === tab || !isOpen(of); });
    for (const key of left) storage.removeItem(key);
    if (left.length > 0) this.hold();
  }

  /** The mark stays until scripts have run to their end. */
  hold(): void { this.#held = true; this.#asked = null; this.#atWork.clear(); this.#mark(true); this.#say(false); }
  run(): void { this.#held = false; }

  hear(message: FromPage): void {
    if (message.page === "alive") { this.#asked = null; this.#say(false); }
    if (message.page !== "states") return;
    if (message.all) this.#atWork.clear();
    for (const { id, kind, state } of message.cells) if (kind === "script" && state === "working") this.#atWork.add(id); else this.#atWork.delete(id);
    if (!this.#held) this.#mark(this.#atWork.size > 0);
  }

  /** Called every second or so. */
  beat(): void {
    if (this.#atWork.size === 0) { this.#asked = null; this.#say(false); return; }
    if (this.#asked === null) { this.#asked = this.#options.now(); this.#options.post({ to: "alive" }); }
    else if (this.#options.now() - this.#asked > silenceMs) this.#say(true);
  }

  /** The reader leaves: only a page that answers was well. */
  leave(): void {
    if (!this.#held && (this.#asked === null || this.#options.now() - this.#asked < silenceMs / 3)) this.#mark(false);
  }

  #mark(atWork: boolean): void {
    const { storage, tab } = this.#options, key = this.#prefix + tab;
    if (atWork === (storage.getItem(key) !== null)) return;
    if (atWork) storage.setItem(key, "at work"); else storage.removeItem(key);
  }

  #say(silent: boolean): void {
    if (silent === this.#silent) return;
    this.#silent = silent;
    this.#options.silent(silent);
  }
}
