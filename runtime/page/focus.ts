// Keeps the focus where the reader left it when a drawing takes the focused element away.

/** @returns a wrapper for a drawing */
export function focusKeeper(root: HTMLElement): (draw: () => void) => void {
  return (draw) => {
    const before = document.activeElement;
    if (!(before instanceof HTMLElement) || !root.contains(before) || before === root) { draw(); return; }
    const name = before.dataset.name;
    const where = before.closest(".strip") ? "strip" : "place";
    const act = before.dataset.act;
    const block = before.closest<HTMLElement>("[data-block]");
    draw();
    if (document.activeElement === before || before.isConnected) { if (document.activeElement !== before && before.isConnected) before.focus({ preventScroll: true }); return; }
    // In order of nearness: the control that the button spoke of, the next button of the same kind, the block itself.
    const goal = (name ? root.querySelector<HTMLElement>(`[id="${where}-${CSS.escape(name)}"]`) : null)
      ?? (act === "accept" ? block?.querySelector<HTMLElement>('[data-act="accept"]') : null)
      ?? (where === "strip" ? root.querySelector<HTMLElement>(".strip-toggle") : null)
      ?? (block?.isConnected ? block : root);
    if (goal.tabIndex < 0 && !goal.hasAttribute("tabindex")) goal.tabIndex = -1;
    goal.focus({ preventScroll: true });
  };
}
