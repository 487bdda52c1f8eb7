// The page: starts the engine in a worker, keeps what it says, draws it once a frame, and speaks with the window around it.

import { listen } from "./actions.ts";
import { charts as chartsOf } from "./charts.ts";
import { chartKey } from "./cell.ts";
import { drawing } from "./dom.ts";
import { engineLink } from "./engineLink.ts";
import { focusKeeper } from "./focus.ts";
import { hear, pageState } from "./pageState.ts";
import { pageActions } from "./pageActions.ts";
import type { PageUi } from "./pageActions.ts";
import { picked } from "./pick.ts";
import { paces } from "./paces.ts";
import { pageTrees, summary } from "./pageTrees.ts";
import { outOfSight } from "./sight.ts";
import { controlOf, settings as settingsOf } from "./settings.ts";
import { stripTree } from "./strip.ts";
import { h } from "./tree.ts";
import type { Tree } from "./tree.ts";
import { watchdog } from "./watchdog.ts";
import type { FromPage, ParentLink, ToPage } from "./protocol.ts";
import { stillPost } from "./stillPost.ts";
import { statesPost } from "./statesPost.ts";
import type { CellReport, FromEngine, ToEngine } from "../engine/messages.ts";
import css from "./page.css";

export interface PageOptions {
  /** The element that the page fills. */
  readonly root: HTMLElement;
  /** The engine's worker as text: a classic script. */
  readonly workerSource: string;
  /** A worker that was started with it. */
  readonly worker: Worker;
  /** The window around the page; null where the page stands alone. */
  readonly parent: ParentLink | null;
}

export function startPage({ root, workerSource, worker, parent }: PageOptions): void {
  const post = (message: FromPage): void => parent?.post(message);
  addStyle();
  const live = root.appendChild(Object.assign(document.createElement("div"), { className: "live-page" }));
  const article = live.appendChild(Object.assign(document.createElement("article"), { className: "page" }));
  const rest = live.appendChild(Object.assign(document.createElement("div"), { className: "rest" }));
  const voice = live.appendChild(Object.assign(document.createElement("div"), { className: "unseen" }));
  voice.setAttribute("aria-live", "polite"); voice.setAttribute("role", "status");

  const state = pageState();
  const ui: PageUi = { canEdit: false, stripOpen: !matchMedia("(max-width: 640px)").matches, tables: new Set(), fields: new Set(), picks: new Map(), faults: new Map(), broken: null };
  const files = new Map<string, Extract<ToEngine, { to: "file" }>>();
  /** Cells that the reader stopped, with their source then: one that was edited since may run again. */
  const held = new Map<string, string>();
  let text: Extract<ToPage, { to: "text" }> | null = null;
  let allow: Extract<ToPage, { to: "allowCode" }> | null = null;

  const announce = (words: string): void => { voice.textContent = words; };
  const charts = chartsOf(announce);
  const trees = pageTrees();
  const owner = { mounted: (key: string, element: Element) => charts.mounted(key, element as HTMLElement), unmounted: (key: string) => charts.unmounted(key) };
  const drawArticle = drawing(article, owner); const drawRest = drawing(rest, owner);
  const keepFocus = focusKeeper(root);
  const states = statesPost(state, post);
  const stills = stillPost(state, post);
  const pace = paces(draw), away = outOfSight(article);
  const dog = watchdog(state, pace.frame);
  const engine = engineLink(workerSource, worker, {
    hear: fromEngine, silent: (ms) => dog.silent(ms), answered: (running) => dog.answered(running),
    broken: (message) => { ui.broken = message; pace.frame(); },
  });
  const settings = settingsOf((message) => { root.dataset.drawn = "no"; engine.send(message); });

  function fromEngine(message: FromEngine): void {
    if (message.from === "need") {
      const known = files.get(message.file);
      if (known) engine.send(known); else post({ page: "needFile", file: message.file });
      return;
    }
    hear(state, message);
    if (message.from === "cell") { settings.answered(message.cell); dog.reported(message.cell); }
    if (message.from === "outline") { document.title = message.title; post({ page: "outline", version: message.version, title: message.title, problems: message.problems }); }
    if (message.from === "settled") { settings.settled(message.moved); post({ page: "settled", version: message.version, moved: message.moved }); sayLater(); stills.settled(); }
    states.note(message);
    if (message.from === "outline") pace.frame();
    else { if (message.from === "cell" && !waits(message.cell)) pace.sight(); pace.rest(); }
  }

  /** Not worth a drawing of its own: out of sight, or at work for what mostly is a few frames. The strip shows controls wherever the reader is. */
  const waits = (cell: CellReport): boolean => cell.state === "working" || cell.state === "waiting" || (away(cell.id) && controlOf(cell) === null);
  function draw(only: "sight" | "all"): void {
    const later = only === "sight" ? waits : () => false;
    keepFocus(() => {
      drawArticle(trees.blocks(state, { canEdit: ui.canEdit, still: false, pending: settings.pending, fault: (name) => ui.faults.get(name) ?? null, asTable: (key) => ui.tables.has(key), fieldsOpen: (id) => ui.fields.has(id), pickedAt: (key) => ui.picks.get(key), canStop: (id) => dog.canStop(id) }, later));
      const controls = [...state.cells.values()].flatMap((cell) => { const part = controlOf(cell); return part && cell.name !== null ? [{ name: cell.name, part, pending: settings.pending(cell.name), fault: ui.faults.get(cell.name) ?? null, from: cell.from }] : []; }).sort((a, b) => a.from - b.from);
      drawRest([noticeTree(dog.notice(), ui.broken), stripTree(controls, ui.stripOpen, Object.keys(state.moved), ui.canEdit)].filter((tree) => tree !== null));
    });
    for (const cell of state.cells.values()) if (!later(cell)) for (const [index, part] of (cell.show ?? []).entries()) if (part.part === "chart") charts.want(chartKey(cell.id, index), picked(part, ui.picks.get(chartKey(cell.id, index))));
    if (only === "all" && state.settled && state.version === (text?.version ?? 0)) void charts.drawn().then(complete);
  }

  /** Everything is drawn as the text and the controls say: whoever waits for it may look. */
  function complete(): void {
    root.dataset.drawn = "yes";
    post({ page: "drawn" });
  }

  let saying = 0;
  function sayLater(): void { clearTimeout(saying); saying = window.setTimeout(() => announce(summary(state)), 800); }

  function sayAllAgain(): void {
    ui.broken = null; dog.fresh();
    if (allow !== null) engine.send(allow);
    engine.send({ to: "width", width: figureWidth(article) });
    for (const [cell, source] of held) if (text?.text.includes(source)) engine.send({ to: "hold", cell }); else held.delete(cell);
    for (const message of settings.again()) engine.send(message);
    if (text) engine.send({ to: "text", version: text.version, text: text.text });
  }

  function fromParent(message: ToPage): void {
    switch (message.to) {
      case "text": text = message; root.dataset.drawn = "no"; engine.send({ to: "text", version: message.version, text: message.text }); break;
      case "file": { const file: Extract<ToEngine, { to: "file" }> = { to: "file", file: message.file, bytes: message.bytes, ...(message.reason === undefined ? {} : { reason: message.reason }) }; files.set(message.file, file); engine.send(file); break; }
      case "allowCode": allow = message; engine.send(message); break;
      case "alive": post({ page: "alive" }); break;
      case "set": settings.set(message.name, message.value); break;
      case "unset": settings.unset(message.name); break;
      case "theme": if (message.theme === "auto") delete document.documentElement.dataset.theme; else document.documentElement.dataset.theme = message.theme; break;
      case "reveal": actions.reveal(message.position); break;
      case "canEdit": ui.canEdit = message.canEdit; root.classList.toggle("can-edit", message.canEdit); pace.frame(); break;
      case "sendStills": stills.ask(); break;
      case "restart": engine.restart(); sayAllAgain(); break;
    }
  }

  const actions = pageActions({
    root, state, ui, settings, charts, post, pace, announce, alone: parent === null,
    stop(cell) {
      // An engine that answers ends the cell by itself, and keeps what is done; one that does not is started anew without the cell.
      if (!dog.stuck()) { engine.send({ to: "stop", cell }); announce("The cell is told to stop."); return; }
      const { from, to } = state.cells.get(cell) ?? { from: 0, to: 0 }; held.set(cell, text?.text.slice(from, to) ?? ""); engine.restart(); sayAllAgain(); pace.frame();
    },
    goOn(cell) { engine.send({ to: "goOn", cell }); pace.frame(); },
    startAgain() { engine.restart(); sayAllAgain(); pace.frame(); },
  });
  listen(root, actions);
  watchWidth(article, (width) => engine.send({ to: "width", width }));
  printWhole(article, () => { charts.drawAll(); });
  engine.send({ to: "width", width: figureWidth(article) });
  parent?.listen(fromParent);
  post({ page: "ready" });
}

/** Paper cannot be unfolded: details are open while it is printed. */
function printWhole(article: HTMLElement, drawAll: () => void): void {
  let opened: HTMLDetailsElement[] = [];
  window.addEventListener("beforeprint", () => {
    opened = [...article.querySelectorAll<HTMLDetailsElement>("details.more:not([open])")];
    for (const each of opened) each.open = true;
    drawAll();
  });
  window.addEventListener("afterprint", () => { for (const each of opened) each.open = false; });
}

function addStyle(): void {
  if (document.getElementById("page-style")) return;
  const style = document.createElement("style");
  style.id = "page-style"; style.textContent = css;
  document.head.append(style);
}

function noticeTree(notice: { readonly words: string; readonly cell: string | null; readonly label: string } | null, broken: string | null): Tree | null {
  if (broken !== null) return h("div", { class: "notice", role: "alert", key: "notice" }, h("p", {}, `The computing part of this page stopped: ${broken}`), h("button", { type: "button", "data-act": "start-again" }, "start it again"));
  if (notice === null) return null;
  return h("div", { class: "notice", role: "alert", key: "notice" }, h("p", {}, notice.words),
    notice.cell === null ? h("button", { type: "button", "data-act": "start-again" }, "start it again") : h("button", { type: "button", "data-act": "stop", "data-cell": notice.cell }, `stop ${notice.label}`));
}

/** Pixels that a figure has across. */
function figureWidth(article: HTMLElement): number { return Math.max(240, Math.min(760, Math.floor(article.clientWidth || 704))); }

function watchWidth(article: HTMLElement, width: (px: number) => void): void {
  let told = figureWidth(article); let timer = 0;
  new ResizeObserver(() => {
    const now = figureWidth(article);
    if (Math.abs(now - told) < told / 10) return;
    clearTimeout(timer);
    timer = window.setTimeout(() => { told = now; width(now); }, 250);
  }).observe(article);
}
