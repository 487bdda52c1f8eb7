// What each document that Lagbook serves or writes may do, as Content-Security-Policy texts.

import { createHash } from "node:crypto";

/** The source expression that allows exactly this inline script. */
function scriptHash(script: string): string {
  return `'sha256-${createHash("sha256").update(script).digest("base64")}'`;
}

/** For the page's frame and for an exported file: no network at all; these scripts, and the workers that they make.
 *  A frame made from text inherits the policy of the document around it, so that one names the frame's script as well. */
export function pagePolicy(scripts: readonly string[]): string {
  return [
    "default-src 'none'", `script-src ${scripts.map(scriptHash).join(" ")} blob:`, "worker-src blob:", "style-src 'unsafe-inline'",
    "img-src data: blob:", "font-src data:", "connect-src 'none'", "form-action 'none'", "base-uri 'none'", "frame-src 'none'", "object-src 'none'",
  ].join("; ");
}

/** For the desk: its own files, its own server, and the page's frame. Styles are inline because the editor makes its own. */
export const deskPolicy = [
  "default-src 'none'", "script-src 'self'", "style-src 'self' 'unsafe-inline'", "img-src 'self' data: blob:", "font-src 'self' data:",
  "connect-src 'self'", "frame-src 'self'", "form-action 'none'", "base-uri 'none'", "object-src 'none'", "frame-ancestors 'none'",
].join("; ");

/** For everything else that is answered: it is no document, and shown as one it may do nothing. */
export const closedPolicy = "default-src 'none'; frame-ancestors 'none'; sandbox";

/** A script as it may stand inside a document: nothing in it ends the element early. Done before hashing. */
export function inlineSafe(script: string): string {
  return script.replace(/<\/(script)/gi, "<\\/$1").replace(/<!--/g, "<\\!--");
}
