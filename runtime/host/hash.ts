// The identity of a text or a file: SHA-256, as lower-case hexadecimal.

import { createHash } from "node:crypto";

/** @example hash("") // "e3b0c442…b855" */
export function hash(content: Uint8Array | string): string {
  return createHash("sha256").update(content).digest("hex");
}
