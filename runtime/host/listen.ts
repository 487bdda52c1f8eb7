// A real socket around the server's function: 127.0.0.1 and nothing else.

import { createServer as createHttp } from "node:http";
import type { IncomingMessage, ServerResponse } from "node:http";
import type { AddressInfo } from "node:net";
import { Readable } from "node:stream";
import { closedPolicy } from "./policy.ts";
import type { Server } from "./server.ts";

export interface Listening { readonly port: number; close(): Promise<void> }

/** Listens on 127.0.0.1.
 *  @param port  0 takes any free port
 *  @throws the socket's own error, EADDRINUSE where the port is taken */
export async function listen(server: Server, port: number): Promise<Listening> {
  // A client that says its request drop by drop is let go.
  const http = createHttp({ headersTimeout: 10_000, requestTimeout: 60_000, connectionsCheckingInterval: 5_000 }, (request, response) => { void serve(server, request, response); });
  await new Promise<void>((resolve, reject) => {
    http.once("error", reject);
    http.listen(port, "127.0.0.1", () => { http.off("error", reject); resolve(); });
  });
  return {
    port: (http.address() as AddressInfo).port,
    close: () => new Promise((resolve) => { http.close(() => resolve()); http.closeAllConnections(); }),
  };
}

async function serve(server: Server, incoming: IncomingMessage, outgoing: ServerResponse): Promise<void> {
  try {
    const response = await server(toRequest(incoming));
    outgoing.writeHead(response.status, Object.fromEntries(response.headers));
    if (!response.body) { outgoing.end(); return; }
    const body = Readable.fromWeb(response.body as import("node:stream/web").ReadableStream);
    // A desk that goes away ends its stream of events: the pipe's two ends go together.
    outgoing.on("close", () => body.destroy());
    body.on("error", () => outgoing.destroy());
    body.pipe(outgoing);
  } catch (error) {
    if (!outgoing.headersSent) outgoing.writeHead(400, { "content-type": "text/plain; charset=utf-8", "x-content-type-options": "nosniff", "content-security-policy": closedPolicy });
    outgoing.end(error instanceof Error ? error.message : String(error));
  }
}

function toRequest(incoming: IncomingMessage): Request {
  const headers = new Headers();
  for (const [name, value] of Object.entries(incoming.headers)) if (value !== undefined) headers.set(name, Array.isArray(value) ? value.join(", ") : value);
  const hasBody = incoming.method !== "GET" && incoming.method !== "HEAD";
  const init = { method: incoming.method, headers, ...(hasBody ? { body: Readable.toWeb(incoming), duplex: "half" } : {}) };
  return new Request(`http://127.0.0.1${incoming.url ?? "/"}`, init as RequestInit);
}
