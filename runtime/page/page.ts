// The page: starts the engine in a worker, keeps what it says, and draws it.

import type { ParentLink } from "./protocol.ts";

export interface PageOptions {
  /** The element that the page fills. What stands in it (the pre-rendered page) stays until the first answer is complete. */
  readonly root: HTMLElement;
  /** The engine's worker as text: a classic script. */
  readonly workerSource: string;
  /** The window around the page; null where the page stands alone. */
  readonly parent: ParentLink | null;
}

export function startPage(options: PageOptions): void {
  void options;
}
