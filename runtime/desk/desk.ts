// The desk: where its parts are put together. Text on one side, the page on the other, the file behind both.

import type { FromPage, ToPage } from "../page/protocol.ts";
import { appearance } from "./appearance.ts";
import type { Catalogue } from "./catalogue.ts";
import { choose } from "./choose.ts";
import { drafts } from "./drafts.ts";
import { createEditor } from "./editor/editor.ts";
import { serverFiles } from "./files.ts";
import type { Files } from "./files.ts";
import { Keeper } from "./keeper.ts";
import type { Told } from "./keeper.ts";
import { deskKeys } from "./keys.ts";
import { layout } from "./layout.ts";
import { notices } from "./notices.ts";
import { pageEdits } from "./pageEdits.ts";
import { pageFrame } from "./pageFrame.ts";
import { Problems } from "./problems.ts";
import { saveFile } from "./saveFile.ts";
import { ScriptWatch } from "./scriptWatch.ts";
import { ownTab, openTabs } from "./tabs.ts";
import { openLink } from "./openLink.ts";

/** After this pause in typing the page gets the text; and at the latest after `mostMs` of steady typing. */
const pauseMs = 70, mostMs = 350;
/** The same for the draft, which the browser writes while the author waits. */
const draftPauseMs = 200, draftMostMs = 1000;
/** How often a page whose scripts are at work is asked whether it lives. */
const beatMs = 1000;

const scriptsWait = "This script waits: the page ended while scripts were at work. The notice above the text runs it; if that was closed, open the notebook again.";

async function start(): Promise<void> {
  const key = new URL(location.href).searchParams.get("key") ?? "";
  const files = serverFiles(key);
  const bar = notices(element("notices"));
  const [opened, catalogue, tab] = await Promise.all([files.open(), loadCatalogue(), ownTab(sessionStorage, navigator.locks)]);
  document.title = `${opened.name} · Lagbook`;
  element("name").textContent = opened.name;
  element("name").title = opened.path;
  await openDesk({ files, opened, catalogue, tab, bar });
}

interface DeskOptions {
  readonly files: Files; readonly opened: Awaited<ReturnType<Files["open"]>>; readonly catalogue: Catalogue; readonly tab: string; readonly bar: ReturnType<typeof notices>;
}

async function openDesk({ files, opened, catalogue, tab, bar }: DeskOptions): Promise<void> {
  const problems = new Problems(), frame = element<HTMLIFrameElement>("frame"), said = element("said"), troubles = element("troubles"), dirty = element("dirty");
  const wanted = new Set<string>();
  let version = 0, postedText: string | null = null, ready = false, underlined = "[]";

  const editor = createEditor({
    parent: element("text"), text: opened.text, catalogue, cells: () => problems.named(),
    changed: () => { later(); pointLater.stop(); },
    pointed: (position) => pointLater(position),
  });
  const pointLater = delayed((position: number) => page.post({ to: "reveal", position }), 120);
  const kept = drafts(localStorage, opened.path, tab);
  const keeper = new Keeper({
    files, drafts: kept, base: opened, editor, now: () => Date.now(), tell: (told) => tell(told),
    choose: (regions) => choose(element<HTMLDialogElement>("choices"), regions),
  });
  const page = pageFrame(frame, (message) => hear(message));
  const view = layout(element("desk"), element("divider"), localStorage, (shown) => {
    element("showText").setAttribute("aria-pressed", String(shown !== "page"));
    element("showPage").setAttribute("aria-pressed", String(shown !== "text"));
  });
  const theme = appearance(element("theme"), localStorage, (chosen) => { if (ready) page.post({ to: "theme", theme: chosen }); });
  const scripts = new ScriptWatch({
    storage: localStorage, notebook: opened.path, tab, post: (message) => page.post(message), now: () => performance.now(),
    silent: (silent) => { if (silent) bar.show("silent", "The page no longer answers while a script is at work; it may have taken all memory. If opening it again does not help, close this tab and open the notebook anew.", [{ label: "Open the page again, scripts waiting", act: () => { scripts.hold(); openPage(); } }]); else bar.hide("silent"); },
  });
  const openPage = (): void => {
    ready = false;
    if (scripts.held) bar.show("scripts", "The page ended while scripts were at work, so they wait now. Change them first if one takes too much memory.", [{ label: "Run the scripts", act: () => { scripts.run(); allowScripts(); } }]);
    frame.src = "/frame";
  };
  const allowScripts = (): void => page.post({ to: "allowCode", allow: !scripts.held, reason: scriptsWait });
  const edits = pageEdits(catalogue, editor, (text) => { said.textContent = text; });

  const postText = (): void => {
    const text = editor.text();
    if (!ready || text === postedText) return;
    postedText = text;
    page.post({ to: "text", version: ++version, text });
  };
  const sendLater = throttled(postText, pauseMs, mostMs), keepLater = throttled(() => keeper.changed(), draftPauseMs, draftMostMs);
  const later = Object.assign(() => { sendLater(); keepLater(); }, { now: () => { keepLater.now(); sendLater.now(); } });
  const save = (): void => { later.now(); void keeper.save().catch(() => undefined); };

  function hear(message: FromPage): void {
    switch (message.page) {
      case "ready": ready = true; postedText = null; greet(); return;
      case "needFile": wanted.add(message.file); void sendFile(message.file); return;
      case "goToSource": view.show("text"); editor.goTo(message.from, message.to, message.focus); return;
      case "keep": edits.keep(message.name, message.value); later.now(); return;
      case "accept": if (message.version === version) { later.now(); edits.accept(message.numbers); later.now(); } return;
      case "outline": case "states": problems.hear(message); underlineLater(); scripts.hear(message); return;
      case "alive": scripts.hear(message); return;
      case "saveFile": saveFile(message); return;
      case "openLink": openLink(message.href); return;
      case "key": keys.press(message); return;
    }
  }

  function greet(): void {
    const first: readonly ToPage[] = [{ to: "theme", theme: theme.theme() }, { to: "canEdit", canEdit: true }];
    for (const message of first) page.post(message);
    allowScripts();
    postText();
  }

  async function sendFile(file: string): Promise<void> {
    try {
      const answer = await files.data(file);
      page.post("bytes" in answer ? { to: "file", file, bytes: answer.bytes } : { to: "file", file, bytes: null, reason: answer.reason });
    } catch {
      page.post({ to: "file", file, bytes: null, reason: `"${file}" could not be read because lagbook no longer answers. Start it again: lagbook open ${opened.name}` });
    }
  }

  const underlineLater = throttled(() => {
    const text = editor.text();
    // Reports about an older text would be underlined in the wrong places; newer ones are on their way.
    if (problems.version !== version || text !== postedText) return;
    const list = problems.list(text), errors = list.filter((problem) => problem.severity === "error");
    const now = JSON.stringify(list.length === 0 ? [] : [version, list]);
    if (now === underlined) return;
    underlined = now;
    editor.underline(list);
    troubles.hidden = errors.length === 0;
    troubles.textContent = errors.length === 1 ? "1 problem" : `${errors.length} problems`;
    troubles.title = errors[0]?.message ?? "";
  }, 40, 200);

  function tell(told: Told): void {
    switch (told.told) {
      case "state": dirty.hidden = !told.dirty; document.title = `${told.dirty ? "◆ " : ""}${opened.name} · Lagbook`; return;
      case "saved": said.textContent = `Saved ${clock(Date.now())}`; bar.hide("undecided"); bar.hide("draft"); bar.hide("gone"); bar.hide("trouble"); return;
      case "reread": said.textContent = `Read again ${clock(Date.now())}: the file changed on disk`; return;
      case "merged": bar.show("merged", "The file changed on disk. Its changes and yours are in different places and are now both in the text, not saved yet. Undo takes the file's changes out.", [], 20000); return;
      case "undecided": bar.show("undecided", "The file on disk and your text differ in the same lines. Your text is kept here and is not saved.", [{ label: "Choose now", act: save }]); return;
      case "gone": bar.show("gone", `${opened.name} is no longer on disk. The text here is all there is of it.`, [{ label: "Write it again", act: save }]); return;
      case "draft": bar.show("draft", `Unsaved text of ${when(told.time)} is back in the editor. Save it, or go back to the file.`, [{ label: "Use the file", act: () => { keeper.revert(); later.now(); } }]); return;
      case "trouble": bar.show("trouble", told.message); return;
    }
  }

  const keys = deskKeys({
    save, undo: editor.undo, redo: editor.redo,
    text: () => view.toggle("text"), page: () => view.toggle("page"), theme: () => theme.next(),
    sides: () => { if (document.activeElement === frame) { view.show("text"); editor.focus(); } else { view.show("page"); frame.focus(); } },
  });
  element("save").addEventListener("click", save);
  element("showText").addEventListener("click", () => view.toggle("text"));
  element("showPage").addEventListener("click", () => view.toggle("page"));
  troubles.addEventListener("click", () => {
    const list = problems.list(editor.text()).filter((problem) => problem.severity === "error");
    const next = list.find((problem) => problem.from > editor.cursor()) ?? list[0];
    if (next) { view.show("text"); editor.goTo(next.from, next.to, true); }
  });
  window.addEventListener("pagehide", () => { keeper.changed(); scripts.leave(); });
  window.addEventListener("beforeunload", (event) => { later.now(); if (keeper.dirty) event.preventDefault(); });

  files.follow(
    (event) => {
      if (event.event === "notebook") void keeper.onDisk(event.hash).catch(() => undefined);
      else if (wanted.has(event.file)) void sendFile(event.file);
    },
    connection(bar, opened.name, async () => {
      for (const file of wanted) await sendFile(file);
      const now = await files.open().catch(() => null);
      if (now) await keeper.onDisk(now.hash);
    }),
  );
  const open = await openTabs(navigator.locks);
  const draft = kept.find((other) => other !== tab && open.has(other));
  if (draft) await keeper.restore(draft);
  later.now();
  scripts.start((other) => open.has(other));
  setInterval(() => scripts.beat(), beatMs);
  openPage();
}

/** Says when the server is lost, and catches up with the files when it is back. */
function connection(bar: ReturnType<typeof notices>, name: string, back: () => Promise<void>): (there: boolean) => void {
  let lost = false;
  return (there) => {
    if (there && lost) { bar.hide("lost"); void back(); }
    if (!there && !lost) bar.show("lost", `lagbook no longer answers, so nothing can be saved just now. The text is kept in this browser. Start it again: lagbook open ${name}`);
    lost = !there;
  };
}

async function loadCatalogue(): Promise<Catalogue> {
  const response = await fetch("/catalogue.json");
  if (!response.ok) throw new Error(await response.text());
  return await response.json() as Catalogue;
}

/** Runs after a pause of `pause` ms, and at least every `most` ms while the calls keep coming; `now` runs what is due at once. */
function throttled(act: () => void, pause: number, most: number): (() => void) & { now(): void } {
  let timer: ReturnType<typeof setTimeout> | null = null, first = 0;
  const run = (): void => { if (timer !== null) clearTimeout(timer); timer = null; act(); };
  const call = (): void => {
    const now = performance.now();
    if (timer === null) first = now; else clearTimeout(timer);
    timer = setTimeout(run, Math.max(0, Math.min(pause, first + most - now)));
  };
  return Object.assign(call, { now: run });
}

function delayed<T>(act: (value: T) => void, ms: number): ((value: T) => void) & { stop(): void } {
  let timer: ReturnType<typeof setTimeout> | undefined;
  return Object.assign((value: T) => { clearTimeout(timer); timer = setTimeout(() => act(value), ms); }, { stop: () => clearTimeout(timer) });
}

function clock(time: number): string { return new Date(time).toLocaleTimeString([], { hour: "2-digit", minute: "2-digit" }); }

function when(time: number): string {
  const sameDay = new Date(time).toDateString() === new Date().toDateString();
  return sameDay ? clock(time) : new Date(time).toLocaleString([], { dateStyle: "medium", timeStyle: "short" });
}

function element<T extends HTMLElement = HTMLButtonElement>(id: string): T {
  const found = document.getElementById(id);
  if (!found) throw new Error(`desk.html has no element "${id}"`);
  return found as T;
}

start().catch((error: unknown) => {
  const said = document.getElementById("said");
  if (said) said.textContent = error instanceof Error ? error.message : String(error);
});
