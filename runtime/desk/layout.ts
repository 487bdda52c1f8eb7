// The two sides of the desk: either can be hidden, and the divider between them is moved by pointer or keys.

export type View = "both" | "text" | "page";

export interface Layout {
  readonly view: () => View;
  /** Shows or hides one side; the last side that is seen stays. */
  toggle(side: "text" | "page"): void;
  /** Makes a side visible. */
  show(side: "text" | "page"): void;
}

const least = 20, most = 80;

export function layout(desk: HTMLElement, divider: HTMLElement, storage: Storage, changed: (view: View) => void): Layout {
  let view: View = storedView(storage.getItem("lagbook view"));
  const apply = (next: View): void => {
    view = next;
    desk.dataset.view = next;
    storage.setItem("lagbook view", next);
    changed(next);
  };
  const split = (percent: number): void => {
    const held = Math.min(most, Math.max(least, percent));
    desk.style.setProperty("--desk-split", `${held}%`);
    divider.setAttribute("aria-valuenow", String(Math.round(held)));
    storage.setItem("lagbook divider", String(held));
  };
  divider.setAttribute("aria-valuemin", String(least));
  divider.setAttribute("aria-valuemax", String(most));
  const stored = Number(storage.getItem("lagbook divider") ?? Number.NaN);
  split(Number.isFinite(stored) ? stored : 44);
  apply(view);
  drag(desk, divider, split);
  divider.addEventListener("keydown", (event) => {
    const now = Number(divider.getAttribute("aria-valuenow"));
    const moves: Readonly<Record<string, number>> = { ArrowLeft: now - 2, ArrowRight: now + 2, Home: least, End: most };
    const to = moves[event.key];
    if (to === undefined) return;
    event.preventDefault();
    split(to);
  });
  divider.addEventListener("dblclick", () => split(44));
  return {
    view: () => view,
    toggle(side) {
      const other = side === "text" ? "page" : "text";
      if (view === "both") apply(other);
      else if (view === other) apply("both");
    },
    show(side) { if (view !== "both" && view !== side) apply("both"); },
  };
}

function storedView(text: string | null): View { return text === "text" || text === "page" ? text : "both"; }

function drag(desk: HTMLElement, divider: HTMLElement, split: (percent: number) => void): void {
  divider.addEventListener("pointerdown", (event) => {
    event.preventDefault();
    divider.setPointerCapture(event.pointerId);
    // The page's frame would take the pointer's moves for itself.
    desk.classList.add("dragging");
    const move = (moved: PointerEvent): void => { const box = desk.getBoundingClientRect(); split(((moved.clientX - box.left) / box.width) * 100); };
    const end = (): void => {
      desk.classList.remove("dragging");
      divider.removeEventListener("pointermove", move);
      divider.removeEventListener("lostpointercapture", end);
    };
    divider.addEventListener("pointermove", move);
    divider.addEventListener("lostpointercapture", end);
  });
}
