// Replaces a file in a single step: a reader sees the old bytes or the new ones, never half, and where anything goes wrong the
// old ones are still there.

import { randomBytes } from "node:crypto";
import { renameSync } from "node:fs";
import { open, realpath, rm, stat } from "node:fs/promises";
import type { FileHandle } from "node:fs/promises";
import { dirname, join } from "node:path";
import { CannotRun } from "./io.ts";

/** Writes `content` to `path`: first to a file beside it, flushed, then renamed over it. Mode and owner of the old file are
 *  kept, and a link stays a link.
 *  @param still  asked at the last moment whether the file may be replaced; the renaming follows it without a pause
 *  @returns      false where it may not: nothing has been written then
 *  @throws CannotRun in words for the user; the file is then as it was */
export async function writeWhole(path: string, content: string | Uint8Array, still: () => boolean = () => true): Promise<boolean> {
  let beside: string | null = null;
  try {
    const target = await realpath(path).catch(() => path), old = await stat(target).catch(() => null);
    beside = join(dirname(target), `.lagbook-${randomBytes(8).toString("hex")}`);
    const handle = await open(beside, "wx", old === null ? 0o666 : 0o600);
    try {
      // Not `write`, which on a full disk may write a part and say nothing.
      await handle.writeFile(content);
      if (old !== null) await likeOld(handle, old);
      await handle.sync();
    } finally {
      await handle.close();
    }
    if (!still()) return false;
    renameSync(beside, target);
    beside = null;
    return true;
  } catch (error) {
    if (error instanceof CannotRun) throw error;
    throw new CannotRun(`${path} could not be written: ${reason(error, path)}. Nothing was changed.`);
  } finally {
    if (beside !== null) await rm(beside, { force: true });
  }
}

async function likeOld(handle: FileHandle, old: { readonly mode: number; readonly uid: number; readonly gid: number }): Promise<void> {
  const made = await handle.stat();
  // Only the superuser gives files away: another's file that a group may write becomes the writer's own.
  if (made.uid !== old.uid || made.gid !== old.gid) await handle.chown(old.uid, old.gid).catch(() => undefined);
  await handle.chmod(old.mode & 0o7777);
}

function reason(error: unknown, path: string): string {
  const code = error instanceof Error && "code" in error ? error.code : null;
  if (code === "ENOSPC" || code === "EDQUOT") return "there is no room left on the disk";
  if (code === "EFBIG") return "files may not grow as large here";
  if (code === "ENOENT" || code === "ENOTDIR") return `there is no folder ${dirname(path)}`;
  if (code === "EACCES" || code === "EPERM") return `you may not write into the folder ${dirname(path)}`;
  if (code === "EROFS") return "the disk is read-only";
  if (code === "EISDIR") return "it is a folder";
  return error instanceof Error ? error.message : String(error);
}
