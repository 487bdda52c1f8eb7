// How much memory another process holds, where the system tells it: V8's own limit counts objects, and not the arrays of numbers beside them.

import { readFile } from "node:fs/promises";

/** How often it is looked at, in ms: what a process can take meanwhile is a few hundred megabytes. */
const lookMs = 100;

/** Calls back once when a process holds more than `most` megabytes. On systems without /proc it never does.
 *  @returns ends the watch */
export function watchMemory(pid: number, most: number, exceeded: () => void): () => void {
  let ended = false;
  const look = async (): Promise<void> => {
    const held = await megabytesHeld(pid);
    if (ended || held === null) return;
    if (held > most) exceeded(); else setTimeout(() => { if (!ended) void look(); }, lookMs).unref();
  };
  void look();
  return () => { ended = true; };
}

/** Resident megabytes of a process; null where it has ended, or the system does not tell. */
async function megabytesHeld(pid: number): Promise<number | null> {
  const status = await readFile(`/proc/${pid}/status`, "utf8").catch(() => null);
  const kilobytes = status === null ? null : /^VmRSS:\s*(\d+) kB$/m.exec(status);
  return kilobytes === null ? null : Number(kilobytes[1]) / 1024;
}
