// The link from the page's frame to the window around it.

import type { FromPage, ParentLink, ToPage } from "./protocol.ts";

/** The parent window as a link; null where the page stands alone. Messages of other windows are not heard. */
export function parentWindow(self: Window = window): ParentLink | null {
  if (self.parent === self) return null;
  return {
    post(message: FromPage, transfer: readonly Transferable[] = []) { self.parent.postMessage(message, "*", [...transfer]); },
    listen(hear: (message: ToPage) => void) {
      self.addEventListener("message", (event: MessageEvent) => {
        if (event.source !== self.parent) return;
        const data: unknown = event.data;
        if (typeof data === "object" && data !== null && "to" in data) hear(data as ToPage);
      });
    },
  };
}
