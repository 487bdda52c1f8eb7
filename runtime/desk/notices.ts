// Notices above the text: what happened, and what can be done about it. Each stands until it is answered or no longer true.

export interface NoticeAction { readonly label: string; readonly act: () => void }

export interface Notices {
  /** Shows a notice; another of the same `id` is replaced. */
  show(id: string, text: string, actions?: readonly NoticeAction[], forMs?: number): void;
  hide(id: string): void;
}

export function notices(place: HTMLElement): Notices {
  const shown = new Map<string, HTMLElement>();
  const hide = (id: string): void => { shown.get(id)?.remove(); shown.delete(id); };
  return {
    hide,
    show(id, text, actions = [], forMs) {
      hide(id);
      const bar = document.createElement("div");
      bar.className = "notice";
      bar.dataset.notice = id;
      const words = document.createElement("span");
      words.textContent = text;
      bar.append(words, ...actions.map(({ label, act }) => button(label, () => { hide(id); act(); })), button("Close", () => hide(id), "quiet"));
      place.append(bar);
      shown.set(id, bar);
      if (forMs !== undefined) setTimeout(() => { if (shown.get(id) === bar) hide(id); }, forMs);
    },
  };
}

export function button(label: string, act: () => void, className = ""): HTMLButtonElement {
  const made = document.createElement("button");
  made.type = "button";
  made.textContent = label;
  made.className = className;
  made.addEventListener("click", act);
  return made;
}
