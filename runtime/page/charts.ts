// All charts of the page: made when first near to the view, kept while their shape stays, redrawn only while they are near.

import { chartCompiler, makeChart } from "./chart.ts";
import type { Chart } from "./chart.ts";
import { shapeOf } from "./chartSpec.ts";
import type { Reading } from "./chartReading.ts";
import { chartPointer } from "./chartPointer.ts";
import type { ChartPart } from "../../cells/parts/part.ts";

export interface Charts {
  mounted(key: string, element: HTMLElement): void;
  unmounted(key: string): void;
  /** What a chart should show now; drawn at once if it is near. */
  want(key: string, part: ChartPart): void;
  part(key: string): ChartPart | null;
  svg(key: string): Promise<string | null>;
  /** Draws those out of sight too: the page is about to be printed. */
  drawAll(): void;
  /** Resolves when every chart near the view shows what it should. */
  drawn(): Promise<void>;
}

interface Place {
  readonly element: HTMLElement; part: ChartPart | null; near: boolean; width: number;
  chart: Chart | null; shape: string; shown: ChartPart | null; shownWidth: number;
  /** Set while drawing; a newer wish waits for it, and only the newest is drawn. */
  busy: Promise<void> | null;
  readonly pointer: { forget(): void; leave(): void };
}

/** @param announce speaks to a screen reader */
export function charts(announce: (words: string) => void): Charts {
  const places = new Map<string, Place>();
  const compiled = chartCompiler();
  const byElement = new WeakMap<Element, Place>();
  const near = new IntersectionObserver((entries) => {
    for (const entry of entries) { const place = byElement.get(entry.target); if (place) { place.near = entry.isIntersecting; void draw(place); } }
  }, { rootMargin: "400px 0px" });
  // Widths are taken from here only: asking an element for its width in the middle of a drawing makes the browser lay the page out at once.
  const sizes = new ResizeObserver((entries) => { for (const entry of entries) { const place = byElement.get(entry.target); if (place) { place.width = Math.floor(entry.contentRect.width); void draw(place); } } });

  async function draw(place: Place): Promise<void> {
    if (place.busy) return place.busy;
    place.busy = redraw(place).finally(() => { place.busy = null; });
    return place.busy;
  }

  async function redraw(place: Place): Promise<void> {
    // At most a few rounds in one go: each takes the newest wish.
    while (place.near && place.part !== null && place.element.isConnected) {
      const { part, width } = place;
      if (width < 40 || (part === place.shown && width === place.shownWidth)) return;
      try { await show(place, part, width); } catch (error) { fail(place, error); }
      place.shown = part; place.shownWidth = width;
      place.pointer.forget();
    }
  }

  async function show(place: Place, part: ChartPart, width: number): Promise<void> {
    const shape = shapeOf(part);
    if (place.chart && place.shape === shape) { await place.chart.update(part, width); return; }
    place.chart?.destroy();
    place.chart = null;
    place.chart = await makeChart(place.element, compiled(shape, part), part, width);
    place.shape = shape;
    place.element.querySelector("svg")?.setAttribute("aria-hidden", "true");
  }

  function fail(place: Place, error: unknown): void {
    place.chart?.destroy(); place.chart = null; place.shape = "";
    const words = document.createElement("p");
    words.className = "chart-fault";
    words.textContent = `This chart cannot be drawn: ${error instanceof Error ? error.message : String(error)}`;
    place.element.replaceChildren(words);
  }

  return {
    mounted(key, element) {
      const place: Place = { element, part: null, near: false, width: 0, chart: null, shape: "", shown: null, shownWidth: 0, busy: null,
        pointer: chartPointer(element, (): readonly Reading[] => places.get(key)?.chart?.readings() ?? [], announce) };
      places.set(key, place); byElement.set(element, place);
      near.observe(element); sizes.observe(element);
    },
    unmounted(key) {
      const place = places.get(key);
      if (!place) return;
      near.unobserve(place.element); sizes.unobserve(place.element);
      place.pointer.leave(); place.chart?.destroy(); places.delete(key);
    },
    want(key, part) { const place = places.get(key); if (place && place.part !== part) { place.part = part; void draw(place); } },
    part: (key) => places.get(key)?.part ?? null,
    async svg(key) { const place = places.get(key); if (!place) return null; await place.busy; return place.chart ? place.chart.svg() : null; },
    drawAll() { for (const place of places.values()) { place.near = true; void draw(place); } },
    async drawn() {
      // A new place is measured, and found to be near, with one of the next frames; a page that is hidden has none.
      if ([...places.values()].some((place) => place.width === 0)) await new Promise((resolve) => { requestAnimationFrame(() => requestAnimationFrame(resolve)); setTimeout(resolve, 100); });
      await Promise.all([...places.values()].map((place) => place.busy));
    },
  };
}
