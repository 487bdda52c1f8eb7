// The one door to the file watcher. Files are watched through their folders, so that an editor which replaces a file
// (writes a new one and renames it over the old) and a file that is yet to appear are seen like any other change.

import { watch as chokidarWatch } from "chokidar";
import { dirname } from "node:path";

export interface Watcher {
  /** Also follows this file (absolute path), there or not. */
  follow(path: string): void;
  /** Resolves when the watching has begun. */
  readonly ready: Promise<void>;
  close(): Promise<void>;
}

/** Calls `changed` with a followed file's path after it was written, replaced, made or removed.
 *  @param settleMs  how long a file must stay as it is before it counts as written, so that half a file is not read */
export function watchFiles(changed: (path: string) => void, settleMs = 60): Watcher {
  const files = new Set<string>();
  const folders = new Set<string>();
  const watcher = chokidarWatch([], {
    ignored: (path) => !files.has(path) && !folders.has(path),
    depth: 0,
    ignoreInitial: true,
    atomic: true,
    awaitWriteFinish: { stabilityThreshold: settleMs, pollInterval: 20 },
  });
  const tell = (path: string): void => { if (files.has(path)) changed(path); };
  watcher.on("add", tell).on("change", tell).on("unlink", tell);
  // A folder that cannot be watched leaves the product working, without following: said once, by the caller's reads.
  watcher.on("error", () => undefined);
  let begin: () => void = () => undefined;
  const ready = new Promise<void>((resolve) => { begin = resolve; });
  watcher.on("ready", () => begin());
  return {
    ready,
    follow(path) {
      if (files.has(path)) return;
      files.add(path);
      folders.add(dirname(path));
      watcher.add([dirname(path), path]);
    },
    close: () => watcher.close(),
  };
}
