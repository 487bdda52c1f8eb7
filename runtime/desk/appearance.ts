// Light, dark, or as the system says: chosen by the reader, kept for the next time.

import type { Theme } from "../page/protocol.ts";

export interface Appearance { readonly theme: () => Theme; next(): void }

const order: readonly Theme[] = ["auto", "light", "dark"];
const words: Readonly<Record<Theme, string>> = { auto: "As the system", light: "Light", dark: "Dark" };

/** @param changed  told the choice at once and after each change */
export function appearance(control: HTMLButtonElement, storage: Storage, changed: (theme: Theme) => void): Appearance {
  let theme: Theme = order.find((known) => known === storage.getItem("lagbook theme")) ?? "auto";
  const apply = (): void => {
    document.documentElement.dataset.theme = theme;
    control.textContent = words[theme];
    control.setAttribute("aria-label", `Colours: ${words[theme]}. Change.`);
    changed(theme);
  };
  const next = (): void => {
    theme = order[(order.indexOf(theme) + 1) % order.length];
    storage.setItem("lagbook theme", theme);
    apply();
  };
  control.addEventListener("click", next);
  apply();
  return { theme: () => theme, next };
}
