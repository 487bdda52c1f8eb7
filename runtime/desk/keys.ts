// The desk's keys, pressed anywhere: in the text, on the bar, or (passed on by the page) in the page's frame.

export interface KeyPress { readonly key: string; readonly ctrl: boolean; readonly meta: boolean; readonly shift: boolean; readonly alt: boolean }

export interface DeskActs {
  readonly save: () => void; readonly undo: () => void; readonly redo: () => void;
  readonly text: () => void; readonly page: () => void; readonly theme: () => void;
  /** Goes from one side to the other. */
  readonly sides: () => void;
}

/** What a key press asks of the desk; null: nothing. Ctrl or Cmd with S, Z, Y; Alt and Shift with T, P, L; F6.
 *  @param inText  the press was in the editor, which undoes for itself */
export function actOf({ key, ctrl, meta, shift, alt }: KeyPress, inText: boolean): keyof DeskActs | null {
  const letter = key.toLowerCase();
  if (key === "F6" && !alt && !ctrl && !meta) return "sides";
  if (alt && shift && !ctrl && !meta) {
    if (letter === "t") return "text";
    if (letter === "p") return "page";
    return letter === "l" ? "theme" : null;
  }
  if (alt || !(ctrl || meta)) return null;
  if (letter === "s" && !shift) return "save";
  if (inText) return null;
  if (letter === "z") return shift ? "redo" : "undo";
  return letter === "y" && !shift ? "redo" : null;
}

export function deskKeys(acts: DeskActs): { press(press: KeyPress): void } {
  const press = (given: KeyPress, inText: boolean): boolean => {
    const act = actOf(given, inText);
    if (act) acts[act]();
    return act !== null;
  };
  window.addEventListener("keydown", (event) => {
    const field = event.target instanceof Element && event.target.closest(".cm-editor, input, textarea") !== null;
    // Alt changes the letter on some keyboards: the key's place names it.
    const key = event.altKey && /^Key[A-Z]$/.test(event.code) ? event.code.slice(3) : event.key;
    if (press({ key, ctrl: event.ctrlKey, meta: event.metaKey, shift: event.shiftKey, alt: event.altKey }, field)) event.preventDefault();
  }, { capture: true });
  return { press: (given) => { press(given, false); } };
}
