// Tells the shell of an exported file how the page would be printed now: the same still page that it was exported with.

import type { ChartPart } from "../../cells/parts/part.ts";
import type { PageState } from "./pageState.ts";
import type { FromPage } from "./protocol.ts";
import { renderStill } from "./still.ts";
import { stillCharts } from "./stillCharts.ts";

export interface StillPost {
  /** Stills are wanted from now on. */
  ask(): void;
  /** Everything has settled: a still is due, a little later. */
  settled(): void;
}

/** Quiet time before a still is made: not at every step of a slider on the move. */
const quietMs = 400;
/** Pixels that a figure takes across on paper. */
const figureWidth = 700;

export function stillPost(state: PageState, post: (message: FromPage) => void): StillPost {
  const known = new WeakMap<ChartPart, string>();
  let wanted = false, timer: ReturnType<typeof setTimeout> | undefined, turn = 0;
  const send = async (): Promise<void> => {
    const mine = ++turn;
    const charts = await stillCharts(state, figureWidth, { known, breathe: () => new Promise((resolve) => { setTimeout(resolve, 0); }) });
    // A newer one is on its way, or the page is at work again.
    if (mine !== turn || !state.settled) return;
    post({ page: "still", html: renderStill(state, charts) });
  };
  const later = (): void => { clearTimeout(timer); timer = setTimeout(() => { void send(); }, quietMs); };
  return {
    ask() { wanted = true; if (state.settled) later(); },
    settled() { if (wanted) later(); },
  };
}
