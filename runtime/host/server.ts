// The desk's server, as a function from a request to a response: what may be asked, by whom, and what comes back.
// It answers on the loopback interface only (see listen.ts); the checks here keep other pages of the same browser out.

import { timingSafeEqual } from "node:crypto";
import { basename, dirname } from "node:path";
import type { EventStreams } from "./events.ts";
import { NoFile, readInside } from "./folder.ts";
import { CannotRun } from "./io.ts";
import type { BrowserPart } from "./parts.ts";
import { closedPolicy, deskPolicy } from "./policy.ts";
import type { Store } from "./store.ts";

export interface Session {
  readonly store: Store;
  /** The key that the printed address carries; without it nothing of the user's is read or written. */
  readonly key: string;
  readonly events: EventStreams;
  readonly part: (name: BrowserPart) => Promise<string>;
  readonly framePolicy: string;
  /** The page read this file: it is followed from now on. */
  readonly wanted: (file: string) => void;
}

export type Server = (request: Request) => Promise<Response>;

/** Largest text that is accepted for saving, in bytes. */
const largestText = 64 * 1024 * 1024;

export function createServer(session: Session): Server {
  return async (request) => {
    const url = new URL(request.url);
    try {
      return secured(refuse(request, url) ?? await answer(session, request, url));
    } catch (error) {
      return secured(json({ message: error instanceof Error ? error.message : String(error) }, error instanceof CannotRun ? 409 : 500));
    }
  };
}

/** A request that was sent to another name (a name that was made to point here), or by another site's page. */
function refuse(request: Request, url: URL): Response | null {
  const host = request.headers.get("host") ?? "";
  if (!/^(127\.0\.0\.1|localhost)(:\d+)?$/.test(host)) return plain("This address is answered only as 127.0.0.1.", 403);
  const origin = request.headers.get("origin");
  if (origin !== null && origin !== `http://${host}`) return plain("Another site's page may not ask here.", 403);
  const site = request.headers.get("sec-fetch-site");
  // Another port of this machine is another site's too, though browsers call it the same one.
  if ((site === "cross-site" || site === "same-site") && url.pathname !== "/") return plain("Another site's page may not ask here.", 403);
  return null;
}

async function answer(session: Session, request: Request, url: URL): Promise<Response> {
  const route = `${request.method} ${url.pathname}`;
  switch (route) {
    case "GET /": return deskDocument(session, url);
    case "GET /desk.js": return text(await session.part("desk.js"), "text/javascript");
    case "GET /desk.css": return text(await session.part("desk.css"), "text/css");
    case "GET /catalogue.json": return text(await session.part("catalogue.json"), "application/json");
    case "GET /frame": return frameDocument(session);
    case "GET /favicon.ico": return new Response(null, { status: 204 });
  }
  if (!holdsKey(session.key, request.headers.get("x-lagbook-key") ?? (route === "GET /events" ? url.searchParams.get("key") : null))) {
    return json({ message: "This needs the key of the address that lagbook printed." }, 403);
  }
  switch (route) {
    case "GET /notebook": return notebook(session);
    case "PUT /notebook": return save(session, request);
    case "GET /data": return data(session, url);
    case "GET /events": return session.events.response();
    default: return json({ message: `Nothing answers to ${route}.` }, 404);
  }
}

async function deskDocument(session: Session, url: URL): Promise<Response> {
  if (!holdsKey(session.key, url.searchParams.get("key"))) {
    return plain("Open the whole address that `lagbook open` printed: it carries a key, so that no other page can reach your files.", 403);
  }
  const response = text(await session.part("desk.html"), "text/html");
  response.headers.set("content-security-policy", deskPolicy);
  return response;
}

async function frameDocument(session: Session): Promise<Response> {
  const response = text(await session.part("frame.html"), "text/html");
  response.headers.set("content-security-policy", `${session.framePolicy}; frame-ancestors 'self'; sandbox allow-scripts`);
  return response;
}

async function notebook(session: Session): Promise<Response> {
  const stored = await session.store.read();
  const path = session.store.path;
  return json({ name: basename(path), path, text: stored.text, hash: stored.hash });
}

async function save(session: Session, request: Request): Promise<Response> {
  const match = request.headers.get("if-match"), none = request.headers.get("if-none-match");
  if (match === null && none !== "*") return json({ message: "A save says which text it replaces (If-Match)." }, 428);
  const bytes = await bodyOf(request);
  if (bytes === null) return json({ message: `The text is too long: up to ${largestText / 1048576} MB are saved.` }, 413);
  let content: string;
  try { content = new TextDecoder("utf-8", { fatal: true, ignoreBOM: true }).decode(bytes); } catch { return json({ message: "The text sent is not UTF-8, so it was not saved." }, 400); }
  const result = await session.store.save(content, match === null ? null : match.replaceAll('"', ""));
  return "saved" in result ? json({ hash: result.saved.hash }, 200) : json({ found: result.found }, 412);
}

/** The bytes sent, or null as soon as they are too many, whatever length was announced. */
async function bodyOf(request: Request): Promise<Uint8Array | null> {
  if (Number(request.headers.get("content-length") ?? 0) > largestText) return null;
  const pieces: Uint8Array[] = [];
  let length = 0;
  for await (const piece of request.body ?? []) {
    length += piece.length;
    if (length > largestText) return null;
    pieces.push(piece);
  }
  return Buffer.concat(pieces);
}

async function data(session: Session, url: URL): Promise<Response> {
  const file = url.searchParams.get("file") ?? "";
  session.wanted(file);
  try {
    const bytes = await readInside(dirname(session.store.path), file);
    return new Response(bytes as BodyInit, { headers: { "content-type": "application/octet-stream" } });
  } catch (error) {
    if (error instanceof NoFile) return json({ message: error.message }, 404);
    throw error;
  }
}

function holdsKey(key: string, given: string | null): boolean {
  const wanted = Buffer.from(key), found = Buffer.from(given ?? "");
  return wanted.length === found.length && timingSafeEqual(wanted, found);
}

function secured(response: Response): Response {
  const { headers } = response;
  headers.set("cache-control", "no-store");
  headers.set("x-content-type-options", "nosniff");
  headers.set("referrer-policy", "no-referrer");
  headers.set("cross-origin-opener-policy", "same-origin");
  headers.set("cross-origin-resource-policy", "same-origin");
  if (!headers.has("content-security-policy")) headers.set("content-security-policy", closedPolicy);
  return response;
}

function text(content: string, type: string): Response {
  return new Response(content, { headers: { "content-type": `${type}; charset=utf-8` } });
}

function plain(content: string, status: number): Response {
  return new Response(`${content}\n`, { status, headers: { "content-type": "text/plain; charset=utf-8" } });
}

function json(content: unknown, status = 200): Response {
  return new Response(JSON.stringify(content), { status, headers: { "content-type": "application/json; charset=utf-8" } });
}
