// What the reader does on the page: one set of listeners, told apart by `data-act`.

import type { Span } from "./windowControl.ts";

export interface Actions {
  source(from: number, to: number): void;
  /** A block of prose was double-clicked. */
  sourceOfBlock(block: string): void;
  accept(index: number): void;
  /** A slider's number, a choice's index, a switch's truth. */
  input(name: string, given: number | boolean): void;
  windowTyped(name: string, end: "from" | "to", text: string): void;
  /** Moves a window's grip by so many periods from where it stood at `start`. */
  windowMoved(name: string, grip: "from" | "to" | "both", steps: number, start: Span): void;
  windowAt(name: string): { readonly span: Span; readonly periods: number; readonly season: number } | null;
  back(name: string): void;
  allBack(): void;
  keep(name: string): void;
  strip(): void;
  copy(text: string, button: HTMLElement): void;
  stop(cell: string): void;
  /** A stopped cell is to run again. */
  goOn(cell: string): void;
  startAgain(): void;
  save(key: string, as: "svg" | "png" | "csv"): void;
  asTable(key: string): void;
  /** A chart's pick was moved. */
  pick(key: string, at: number): void;
  fields(cell: string, open: boolean): void;
  /** A link to the outside; true when it was taken care of. */
  link(href: string): boolean;
  key(event: KeyboardEvent): boolean;
}

/** Listens on the page's root for as long as it stands. */
export function listen(root: HTMLElement, actions: Actions): void {
  root.addEventListener("click", (event) => onClick(event, root, actions));
  root.addEventListener("dblclick", (event) => {
    const block = (event.target as Element).closest<HTMLElement>(".prose[data-block]");
    if (block?.dataset.block !== undefined) actions.sourceOfBlock(block.dataset.block);
  });
  root.addEventListener("input", (event) => onInput(event, actions));
  root.addEventListener("toggle", (event) => { const { fields } = (event.target as HTMLDetailsElement).dataset; if (fields !== undefined) actions.fields(fields, (event.target as HTMLDetailsElement).open); }, true);
  root.addEventListener("change", (event) => {
    const field = event.target as HTMLInputElement;
    const end = field.dataset?.act === "window-from" ? "from" : field.dataset?.act === "window-to" ? "to" : null;
    if (end !== null) { delete field.dataset.typing; actions.windowTyped(field.dataset.name ?? "", end, field.value); }
  });
  root.addEventListener("focusout", (event) => { const field = event.target as HTMLElement; if (field.dataset?.typing) delete field.dataset.typing; });
  // On the whole document: after a button that was pressed has gone, the focus is on the body.
  root.ownerDocument.addEventListener("keydown", (event) => onKey(event, actions));
  root.addEventListener("pointerdown", (event) => onGrip(event, actions));
}

function onClick(event: MouseEvent, root: HTMLElement, actions: Actions): void {
  const target = event.target as Element;
  const link = target.closest<HTMLAnchorElement>("a[href]");
  if (link) { onLink(event, link, root, actions); return; }
  const open = target.closest("details.menu");
  for (const menu of root.querySelectorAll<HTMLDetailsElement>("details.menu[open]")) if (menu !== open) menu.open = false;
  const element = target.closest<HTMLElement>("[data-act]");
  if (!element) return;
  const { act, name = "", key = "" } = element.dataset;
  const inMenu = element.closest<HTMLDetailsElement>("details.menu");
  if (inMenu) { inMenu.open = false; inMenu.querySelector<HTMLElement>("summary")?.focus(); }
  switch (act) {
    case "source": if (!selecting(target, element)) actions.source(Number(element.dataset.from), Number(element.dataset.to)); break;
    case "accept": actions.accept(Number(element.dataset.index)); break;
    case "back": actions.back(name); break;
    case "all-back": actions.allBack(); break;
    case "keep": actions.keep(name); break;
    case "strip": actions.strip(); break;
    case "copy": actions.copy(element.dataset.text ?? "", element); break;
    case "stop": actions.stop(element.dataset.cell ?? ""); break;
    case "go-on": actions.goOn(element.dataset.cell ?? ""); break;
    case "start-again": actions.startAgain(); break;
    case "save-svg": actions.save(key, "svg"); break;
    case "save-png": actions.save(key, "png"); break;
    case "save-csv": actions.save(key, "csv"); break;
    case "as-table": actions.asTable(key); break;
    default: break;
  }
}

/** A click that ends a selection, or lands on something of its own inside an output, is not a wish to go to the source. */
function selecting(target: Element, outlet: Element): boolean {
  if (outlet.tagName === "BUTTON") return false;
  const inner = target.closest("button, summary, details, input, select, a");
  return (inner !== null && outlet.contains(inner)) || (document.getSelection()?.toString() ?? "") !== "";
}

function onLink(event: MouseEvent, link: HTMLAnchorElement, root: HTMLElement, actions: Actions): void {
  const href = link.getAttribute("href") ?? "";
  if (href.startsWith("#")) {
    event.preventDefault();
    const goal = root.querySelector<HTMLElement>(`[id="${CSS.escape(href.slice(1))}"]`);
    if (!goal) return;
    goal.scrollIntoView({ block: "start" });
    if (!goal.matches("a, button, input")) goal.tabIndex = -1;
    goal.focus({ preventScroll: true });
  } else if (event.isTrusted && actions.link(href)) event.preventDefault();
}

function onInput(event: Event, actions: Actions): void {
  const field = event.target as HTMLInputElement | HTMLSelectElement;
  const { act, name = "", control } = field.dataset ?? {};
  if (act === "window-from" || act === "window-to") { field.dataset.typing = "yes"; return; }
  if (act === "pick") actions.pick(field.dataset.key ?? "", Number(field.value));
  if (act !== "set") return;
  actions.input(name, control === "switch" ? (field as HTMLInputElement).checked : Number(field.value));
}

function onKey(event: KeyboardEvent, actions: Actions): void {
  const target = event.target as HTMLElement;
  const grip = target.dataset?.grip as "from" | "to" | "both" | undefined;
  if (event.key === "Escape") { const menu = target.closest<HTMLDetailsElement>("details.menu[open]"); if (menu) { menu.open = false; menu.querySelector<HTMLElement>("summary")?.focus(); } }
  if (target.matches?.("input.date") && event.key === "Enter") { target.blur(); target.focus(); }
  if (grip && !event.ctrlKey && !event.metaKey && !event.altKey) {
    const name = target.dataset.name ?? "";
    const now = actions.windowAt(name);
    if (!now) return;
    const long = event.shiftKey ? now.season : 1;
    const steps = ({ ArrowRight: long, ArrowUp: long, ArrowLeft: -long, ArrowDown: -long, PageUp: now.season, PageDown: -now.season, Home: -now.periods, End: now.periods } as Record<string, number>)[event.key];
    if (steps !== undefined) { event.preventDefault(); actions.windowMoved(name, grip, steps, now.span); }
    return;
  }
  if (actions.key(event)) event.preventDefault();
}

/** Dragging a window's handle, or the whole range. */
function onGrip(event: PointerEvent, actions: Actions): void {
  const handle = (event.target as Element).closest<HTMLElement>("[data-grip]");
  const picture = handle?.closest<HTMLElement>("[data-window]");
  if (!handle || !picture || event.button !== 0) return;
  const name = handle.dataset.name ?? "";
  const grip = handle.dataset.grip as "from" | "to" | "both";
  const start = actions.windowAt(name);
  if (!start) return;
  event.preventDefault();
  handle.focus({ preventScroll: true });
  handle.setPointerCapture(event.pointerId);
  const perPeriod = picture.clientWidth / Math.max(1, start.periods - 1);
  let last = 0;
  const move = (moved: PointerEvent): void => {
    const steps = Math.round((moved.clientX - event.clientX) / perPeriod);
    if (steps === last) return;
    last = steps;
    actions.windowMoved(name, grip, steps, start.span);
  };
  const end = (): void => {
    handle.removeEventListener("pointermove", move); handle.removeEventListener("pointerup", end); handle.removeEventListener("pointercancel", end);
  };
  handle.addEventListener("pointermove", move); handle.addEventListener("pointerup", end); handle.addEventListener("pointercancel", end);
}
