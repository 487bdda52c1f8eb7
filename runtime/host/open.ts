// `lagbook open`: serves the desk until it is told to stop.

import { randomBytes } from "node:crypto";
import { realpath } from "node:fs/promises";
import { basename, dirname, resolve } from "node:path";
import { EventStreams } from "./events.ts";
import { isInside, placeInside } from "./folder.ts";
import { scriptsOf } from "./frame.ts";
import { hash } from "./hash.ts";
import { CannotRun, exit } from "./io.ts";
import type { Io } from "./io.ts";
import { listen } from "./listen.ts";
import type { Listening } from "./listen.ts";
import { readPart } from "./parts.ts";
import { pagePolicy } from "./policy.ts";
import { createServer } from "./server.ts";
import type { Server } from "./server.ts";
import { Store } from "./store.ts";
import { watchFiles } from "./watch.ts";
import type { Watcher } from "./watch.ts";

export async function open(command: { readonly file: string; readonly port: number | null }, io: Io): Promise<number> {
  const path = resolve(io.cwd, command.file);
  const store = new Store(path);
  await store.read();
  const events = new EventStreams(), key = randomBytes(18).toString("base64url");
  const framePolicy = pagePolicy([...scriptsOf(await readPart("frame.html"))]);
  const server = createServer({ store, key, events, part: readPart, framePolicy, wanted: (file) => {
    followData(watcher, path, file).catch((error: unknown) => { io.error(`New data in ${file} will not be noticed: ${error instanceof Error ? error.message : String(error)}\n`); });
  } });
  const listening = await start(server, command.port, path);
  // Not before the port is had: a watcher keeps a command alive that has nothing to serve.
  const watcher = follow(store, events);
  const beat = setInterval(() => events.beat(), 15000);
  io.out(`${basename(path)} is open at\n\n  http://127.0.0.1:${listening.port}/?key=${key}\n\nOn this machine only. End with Ctrl-C.\n`);
  await stopped(io.stop);
  clearInterval(beat);
  events.close();
  await Promise.all([watcher.watcher.close(), listening.close()]);
  return exit.stands;
}

interface Following { readonly watcher: Watcher; /** Names that the notebook uses, by the paths that are watched. */ readonly names: Map<string, Set<string>> }

function follow(store: Store, events: EventStreams): Following {
  const names = new Map<string, Set<string>>();
  const watcher = watchFiles((path) => {
    if (path === store.path) void store.read().then(({ hash: now }) => events.send({ event: "notebook", hash: now }), () => events.send({ event: "notebook", hash: null }));
    for (const file of names.get(path) ?? []) events.send({ event: "file", file });
  });
  watcher.follow(store.path);
  return { watcher, names };
}

/** Follows a data file where it may be read: also one that is not there yet. A folder that is a link may lead out. */
async function followData({ watcher, names }: Following, notebook: string, file: string): Promise<void> {
  const home = await realpath(dirname(notebook)), real = await placeInside(home, file).catch(() => null);
  for (const path of [resolve(dirname(notebook), file), real]) {
    if (path === null || !isInside(home, await realpath(dirname(path)).catch(() => ""))) continue;
    names.set(path, (names.get(path) ?? new Set()).add(file));
    watcher.follow(path);
  }
}

/** Listens at the port asked for; else at one that follows from the notebook's path, so that the browser finds its drafts
 *  of this notebook again after a restart; else at any. */
async function start(server: Server, port: number | null, path: string): Promise<Listening> {
  const own = 20000 + (Number.parseInt(hash(path).slice(0, 8), 16) % 20000);
  try {
    return await listen(server, port ?? own);
  } catch (error) {
    const code = error instanceof Error && "code" in error ? error.code : null;
    if (code !== "EADDRINUSE" && code !== "EACCES") throw error;
    if (port !== null) throw new CannotRun(code === "EACCES" ? `Port ${port} may not be used by you. Take one above 1023, or leave --port out.` : `Port ${port} is in use by another program. Take another, or leave --port out.`);
    return listen(server, 0);
  }
}

function stopped(stop: AbortSignal): Promise<void> {
  if (stop.aborted) return Promise.resolve();
  return new Promise((done) => { stop.addEventListener("abort", () => done(), { once: true }); });
}
