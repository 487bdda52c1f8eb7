// The one door to the package that replaces a file in a single step: a reader sees the old bytes or the new ones, never half.

import writeFileAtomic from "write-file-atomic";

/** Writes `content` to `path`: first to a file beside it, flushed, then renamed over it. Mode and owner of the old file are kept. */
export async function writeWhole(path: string, content: string | Uint8Array): Promise<void> {
  await writeFileAtomic(path, typeof content === "string" ? content : Buffer.from(content));
}
