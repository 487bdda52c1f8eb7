// The page's frame, as the desk sees it: typed messages both ways, from this frame's window only.

import type { FromPage, ToPage } from "../page/protocol.ts";

export interface PageFrame {
  post(message: ToPage): void;
}

/** @param heard  called with each message of the page */
export function pageFrame(frame: HTMLIFrameElement, heard: (message: FromPage) => void): PageFrame {
  window.addEventListener("message", (event: MessageEvent<unknown>) => {
    if (event.source !== frame.contentWindow || typeof event.data !== "object" || event.data === null || !("page" in event.data)) return;
    heard(event.data as FromPage);
  });
  return {
    // The frame's origin is opaque: "*" is the only name it has. The frame cannot be navigated elsewhere under the desk's policy.
    post(message) { frame.contentWindow?.postMessage(message, "*"); },
  };
}
