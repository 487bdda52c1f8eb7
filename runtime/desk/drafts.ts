// Unsaved text, kept in the browser from key to key, so that a reload or a crash of the tab loses nothing.

/** A text that was not saved, with the saved text that it grew from. */
export interface Draft { readonly text: string; readonly base: string; readonly baseHash: string; readonly time: number }

export type DraftStorage = Pick<Storage, "getItem" | "setItem" | "removeItem" | "key" | "length">;

export interface Drafts {
  /** Keeps this tab's draft. Throws where the browser has no room for it. */
  keep(draft: Draft): void;
  drop(): void;
  /** The newest draft of this notebook that belongs to this tab or to none that is open; null where there is none. */
  find(isOpen: (tab: string) => boolean): Draft | null;
  /** Takes a found draft out of the store of the tab that left it. */
  adopt(draft: Draft): void;
}

/** @param notebook  the notebook's path
 *  @param tab       this tab's own mark */
export function drafts(storage: DraftStorage, notebook: string, tab: string): Drafts {
  // Encoded, so that the path ends at the space: another notebook's path may go on from this one's.
  const prefix = `lagbook draft ${encodeURIComponent(notebook)} `;
  const own = `${prefix}${tab}`;
  const all = (): { key: string; draft: Draft }[] => {
    const keys = Array.from({ length: storage.length }, (_, index) => storage.key(index)).filter((key): key is string => key?.startsWith(prefix) === true);
    return keys.flatMap((key) => { const draft = parsed(storage.getItem(key)); return draft ? [{ key, draft }] : []; });
  };
  return {
    keep: (draft) => storage.setItem(own, JSON.stringify(draft)),
    drop: () => storage.removeItem(own),
    find(isOpen) {
      const free = all().filter(({ key }) => key === own || !isOpen(key.slice(prefix.length)));
      return free.sort((a, b) => b.draft.time - a.draft.time)[0]?.draft ?? null;
    },
    adopt(draft) {
      for (const entry of all()) if (entry.key !== own && entry.draft.text === draft.text && entry.draft.time === draft.time) storage.removeItem(entry.key);
    },
  };
}

function parsed(text: string | null): Draft | null {
  if (text === null) return null;
  try {
    const draft = JSON.parse(text) as Partial<Draft>;
    return typeof draft.text === "string" && typeof draft.base === "string" && typeof draft.baseHash === "string" && typeof draft.time === "number" ? draft as Draft : null;
  } catch {
    return null;
  }
}
