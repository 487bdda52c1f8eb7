// Follows a link that the page asks to be followed.

/** In a window of its own, and by the reader's hand only: a page that asks by itself asks in vain. */
export function openLink(href: string): void {
  if (navigator.userActivation.isActive && /^(https?|mailto):/i.test(href)) window.open(href, "_blank", "noopener,noreferrer");
}
