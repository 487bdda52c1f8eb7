// Copying a text in a sandboxed frame, where the clipboard's newer interface is often closed.

/** @returns whether it was copied */
export async function copyText(text: string): Promise<boolean> {
  const field = document.createElement("textarea");
  field.value = text;
  field.className = "unseen";
  const before = document.activeElement;
  document.body.append(field);
  field.select();
  const done = document.execCommand("copy");
  field.remove();
  if (before instanceof HTMLElement) before.focus({ preventScroll: true });
  if (done) return true;
  try { await navigator.clipboard.writeText(text); return true; } catch { return false; }
}
