// Estimates that another core may make before they are needed. All of it is plain data, so that it can be sent there.

import type { Series } from "../series/series.ts";
import type { Forecaster } from "../forecast/model.ts";
import type { Recall } from "./contentKey.ts";
import { estimatesOf, type Estimated, type Seen } from "./estimates.ts";

/** One estimate, and the key under which `recall` will ask for it. */
export interface AheadItem { readonly key: string; readonly model: number; readonly seen: Seen }

/** What will be recalled, in the order of need. */
export interface Ahead {
  /** What the items share; sent once. */
  readonly shared: { readonly models: readonly { readonly model: Forecaster; readonly earliest: number }[]; readonly data?: Series; readonly slides: boolean };
  readonly items: readonly AheadItem[];
}

/** Gives the function that makes one item: the same estimate as would be made where it is needed. */
export function estimateAhead({ models, data, slides }: Ahead["shared"]): (item: AheadItem) => Estimated {
  const kept = new Map<string, unknown>();
  const recall: Recall = <T>(key: string, make: () => T): T => { if (!kept.has(key)) kept.set(key, make()); return kept.get(key) as T; };
  const each = models.map(({ model, earliest }) => estimatesOf(model, { ...(data === undefined ? {} : { data }), slides, earliest, recall }));
  return ({ model, seen }) => each[model].estimate(seen);
}
