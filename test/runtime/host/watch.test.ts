import { mkdtempSync, renameSync, rmSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { afterEach, beforeEach, describe, expect, it } from "vitest";
import { watchFiles } from "../../../runtime/host/watch.ts";
import type { Watcher } from "../../../runtime/host/watch.ts";

let folder = "", watcher: Watcher, heard: string[] = [], wake: (() => void) | null = null;
beforeEach(async () => {
  folder = mkdtempSync(join(tmpdir(), "lagbook-watch-"));
  writeFileSync(join(folder, "n.md"), "one");
  heard = [];
  watcher = watchFiles((path) => { heard.push(path); wake?.(); });
  watcher.follow(join(folder, "n.md"));
  watcher.follow(join(folder, "later.csv"));
  await watcher.ready;
});
afterEach(async () => { await watcher.close(); rmSync(folder, { recursive: true, force: true }); });

/** Resolves with the next followed change; the test's own time limit is the failure. */
const next = (): Promise<string> => new Promise((resolve) => {
  const take = (): void => { const path = heard.shift(); if (path !== undefined) { wake = null; resolve(path); } };
  wake = take;
  take();
});

describe("watchFiles", () => {
  it("sees a file written in place, again and again", async () => {
    for (const text of ["two", "three"]) {
      writeFileSync(join(folder, "n.md"), text);
      expect(await next()).toBe(join(folder, "n.md"));
    }
  });

  it("sees a file replaced by another, twice, as editors do it", async () => {
    for (const text of ["two two", "three three"]) {
      writeFileSync(join(folder, "n.md~"), text);
      renameSync(join(folder, "n.md~"), join(folder, "n.md"));
      expect(await next()).toBe(join(folder, "n.md"));
    }
  });

  it("sees a file that was not there, and one that goes", async () => {
    writeFileSync(join(folder, "later.csv"), "t,v");
    expect(await next()).toBe(join(folder, "later.csv"));
    rmSync(join(folder, "n.md"));
    expect(await next()).toBe(join(folder, "n.md"));
  });

  it("says nothing of other files in the folder", async () => {
    writeFileSync(join(folder, "other.csv"), "x");
    writeFileSync(join(folder, "n.md"), "two");
    expect(await next()).toBe(join(folder, "n.md"));
    expect(heard).toEqual([]);
  });
});
