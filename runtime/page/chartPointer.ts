// Reading a chart's points: a label beside the pointer, and the arrow keys.

import type { Reading } from "./chartReading.ts";

/** @param readings asked for once a drawing
 *  @param announce  speaks the point that the keys came to */
export function chartPointer(element: HTMLElement, readings: () => readonly Reading[], announce: (words: string) => void): { forget(): void; leave(): void } {
  let known: readonly Reading[] | null = null;
  let at = -1;
  let label: HTMLElement | null = null;
  let marker: HTMLElement | null = null;
  const list = (): readonly Reading[] => (known ??= readings());

  const hide = (): void => { label?.remove(); marker?.remove(); label = null; marker = null; };
  const show = (reading: Reading): void => {
    hide();
    const svg = element.querySelector("svg");
    if (!svg) return;
    const box = element.getBoundingClientRect(); const inner = svg.getBoundingClientRect();
    const x = inner.left - box.left + reading.x; const y = inner.top - box.top + reading.y;
    marker = element.appendChild(Object.assign(document.createElement("div"), { className: "chart-marker" }));
    marker.style.left = `${x}px`;
    label = element.appendChild(Object.assign(document.createElement("div"), { className: "chart-label" }));
    for (const line of reading.lines) {
      const row = label.appendChild(document.createElement("div"));
      row.appendChild(Object.assign(document.createElement("span"), { textContent: line.label }));
      row.appendChild(Object.assign(document.createElement("strong"), { textContent: line.value }));
    }
    const left = x + 12 + label.offsetWidth > box.width ? Math.max(0, x - 12 - label.offsetWidth) : x + 12;
    label.style.left = `${left}px`;
    label.style.top = `${Math.max(0, Math.min(y - 10, box.height - label.offsetHeight))}px`;
  };

  const nearest = (px: number, py: number): number => {
    let best = -1; let least = 30;
    list().forEach((reading, i) => {
      // Panels lie one above another: the one whose points are nearest up or down is meant.
      const gap = Math.abs(reading.x - px) + (samePanels() ? 0 : Math.abs(reading.y - py) / 4);
      if (gap < least) { least = gap; best = i; }
    });
    return best;
  };
  const samePanels = (): boolean => list().length === 0 || list()[0].panel === list()[list().length - 1].panel;

  const onMove = (event: PointerEvent): void => {
    const svg = element.querySelector("svg");
    if (!svg || event.pointerType === "touch" && event.type === "pointermove") return;
    const inner = svg.getBoundingClientRect();
    const i = nearest(event.clientX - inner.left, event.clientY - inner.top);
    if (i < 0) { hide(); return; }
    at = i; show(list()[i]);
  };
  const onKey = (event: KeyboardEvent): void => {
    const all = list();
    if (all.length === 0 || event.ctrlKey || event.metaKey || event.altKey) return;
    const step = ({ ArrowRight: 1, ArrowLeft: -1, PageDown: 12, PageUp: -12 } as Record<string, number>)[event.key];
    if (event.key === "Escape") { hide(); return; }
    if (event.key === "Home") at = 0;
    else if (event.key === "End") at = all.length - 1;
    else if (event.key === "ArrowDown" || event.key === "ArrowUp") at = otherPanel(all, at, event.key === "ArrowDown" ? 1 : -1);
    else if (step !== undefined) at = at < 0 ? (step > 0 ? 0 : all.length - 1) : Math.max(0, Math.min(all.length - 1, at + step));
    else return;
    event.preventDefault();
    show(all[at]);
    announce(`${all[at].lines.map((line) => `${line.label} ${line.value}`).join(", ")}. ${at + 1} of ${all.length}.`);
  };
  element.addEventListener("pointermove", onMove);
  element.addEventListener("pointerdown", onMove);
  element.addEventListener("pointerleave", hide);
  element.addEventListener("keydown", onKey);
  element.addEventListener("blur", hide);
  return {
    forget() { known = null; hide(); },
    leave() {
      hide();
      element.removeEventListener("pointermove", onMove); element.removeEventListener("pointerdown", onMove);
      element.removeEventListener("pointerleave", hide); element.removeEventListener("keydown", onKey); element.removeEventListener("blur", hide);
    },
  };
}

/** The point nearest across in the next panel up or down; the same one where there is no other panel. */
function otherPanel(all: readonly Reading[], at: number, by: number): number {
  const here = all[Math.max(0, at)];
  const panels = [...new Set(all.map(({ panel }) => panel))];
  const panel = panels[panels.indexOf(here.panel) + by];
  if (panel === undefined) return Math.max(0, at);
  let best = -1; let least = Infinity;
  all.forEach((reading, i) => { const gap = Math.abs(reading.x - here.x); if (reading.panel === panel && gap < least) { least = gap; best = i; } });
  return best < 0 ? Math.max(0, at) : best;
}
