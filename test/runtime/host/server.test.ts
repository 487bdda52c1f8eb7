import { mkdtempSync, readFileSync, rmSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { afterEach, beforeEach, describe, expect, it } from "vitest";
import { EventStreams } from "../../../runtime/host/events.ts";
import { listen } from "../../../runtime/host/listen.ts";
import { createServer } from "../../../runtime/host/server.ts";
import type { Server } from "../../../runtime/host/server.ts";
import { Store } from "../../../runtime/host/store.ts";

let folder = "", server: Server, events: EventStreams, wanted: string[] = [];
beforeEach(() => {
  folder = mkdtempSync(join(tmpdir(), "lagbook-server-"));
  writeFileSync(join(folder, "n.md"), "# One\n");
  writeFileSync(join(folder, "d.csv"), "t,v\n2020,1\n");
  wanted = [];
  events = new EventStreams();
  server = createServer({ store: new Store(join(folder, "n.md")), key: "the-key", events, part: async (name) => `part ${name}`, framePolicy: "default-src 'none'", wanted: (file) => { wanted.push(file); } });
});
afterEach(() => { rmSync(folder, { recursive: true, force: true }); });

const at = "http://127.0.0.1:4321";
const ask = (path: string, init: RequestInit & { key?: string | null; host?: string } = {}): Promise<Response> => {
  const { key = "the-key", host = "127.0.0.1:4321", ...rest } = init;
  return server(new Request(at + path, { ...rest, headers: { host, ...(key === null ? {} : { "x-lagbook-key": key }), ...(rest.headers as Record<string, string> | undefined) } }));
};

describe("the desk's server", () => {
  it("gives the desk to whoever has the key of the address, under a policy", async () => {
    const response = await ask("/?key=the-key", { key: null });
    expect(await response.text()).toBe("part desk.html");
    expect(response.headers.get("content-security-policy")).toMatch(/script-src 'self'.*frame-ancestors 'none'/);
    for (const path of ["/", "/?key=", "/?key=the-keY", "/?key=the-key-and-more"]) expect((await ask(path, { key: null })).status).toBe(403);
  });

  it("gives the page's frame in a sandbox that only the desk may hold", async () => {
    expect((await ask("/frame", { key: null })).headers.get("content-security-policy")).toBe("default-src 'none'; frame-ancestors 'self'; sandbox allow-scripts");
  });

  it("answers nothing of the user's without the key", async () => {
    for (const [path, method] of [["/notebook", "GET"], ["/notebook", "PUT"], ["/data?file=d.csv", "GET"], ["/events", "GET"], ["/events?key=x", "GET"]]) {
      expect((await ask(path, { key: null, method })).status, path).toBe(403);
      expect((await ask(path, { key: "wrong", method })).status, path).toBe(403);
    }
  });

  it("answers no other name, no other origin and no other site", async () => {
    expect((await ask("/notebook", { host: "evil.example" })).status).toBe(403);
    expect((await ask("/notebook", { host: "127.0.0.1.evil.example:4321" })).status).toBe(403);
    expect((await ask("/notebook", { headers: { origin: "http://evil.example" } })).status).toBe(403);
    expect((await ask("/notebook", { headers: { origin: "null" } })).status).toBe(403);
    expect((await ask("/notebook", { headers: { origin: "http://127.0.0.1:9999" } })).status).toBe(403);
    for (const site of ["cross-site", "same-site"]) expect((await ask("/notebook", { headers: { "sec-fetch-site": site } })).status).toBe(403);
    expect((await server(new Request(`${at}/desk.js`))).status).toBe(403);
    expect((await ask("/notebook", { headers: { origin: at } })).status).toBe(200);
  });

  it("says on every answer that it may not be sniffed, kept, referred to, embedded elsewhere, or do anything as a document", async () => {
    const answers = [ask("/desk.js", { key: null }), ask("/notebook"), ask("/notebook", { key: null }), ask("/data?file=d.csv"), ask("/data?file=gone.csv"), ask("/events"), ask("/favicon.ico"), ask("/nothing"), ask("/", { key: null }), ask("/notebook", { host: "a.example" }), ask("/?key=the-key"), ask("/frame")];
    for (const { url, headers } of await Promise.all(answers)) {
      expect(Object.fromEntries(headers), url).toMatchObject({ "cache-control": "no-store", "x-content-type-options": "nosniff", "referrer-policy": "no-referrer", "cross-origin-resource-policy": "same-origin" });
      expect(headers.get("content-security-policy"), url).toMatch(/^default-src 'none'.*frame-ancestors/);
      expect(headers.has("access-control-allow-origin")).toBe(false);
    }
  });

  it("takes no text above its limit, announced or not, and writes nothing of it", async () => {
    const { hash } = await (await ask("/notebook")).json() as { hash: string };
    const headers = { "if-match": `"${hash}"` };
    expect((await ask("/notebook", { method: "PUT", body: "x", headers: { ...headers, "content-length": String(1e9) } })).status).toBe(413);
    let sent = 0;
    const endless = new ReadableStream<Uint8Array>({ pull: (controller) => { sent += 1 << 20; controller.enqueue(new Uint8Array(1 << 20)); } });
    expect((await ask("/notebook", { method: "PUT", body: endless, headers, duplex: "half" } as RequestInit)).status).toBe(413);
    expect(sent).toBeLessThan(80 << 20);
    expect(readFileSync(join(folder, "n.md"), "utf8")).toBe("# One\n");
  });

  it("saves with the hash of the text that is replaced", async () => {
    const { hash, text } = await (await ask("/notebook")).json() as { hash: string; text: string };
    expect(text).toBe("# One\n");
    const saved = await ask("/notebook", { method: "PUT", body: "# Two\r\n", headers: { "if-match": `"${hash}"` } });
    expect(saved.status).toBe(200);
    expect(readFileSync(join(folder, "n.md"), "utf8")).toBe("# Two\r\n");
    const late = await ask("/notebook", { method: "PUT", body: "# Three\n", headers: { "if-match": `"${hash}"` } });
    expect(late.status).toBe(412);
    expect(await late.json()).toHaveProperty("found.text", "# Two\r\n");
    expect((await ask("/notebook", { method: "PUT", body: "x" })).status).toBe(428);
  });

  it("gives data files of the folder, refuses others in words, and has both followed", async () => {
    expect(await (await ask("/data?file=d.csv")).text()).toBe("t,v\n2020,1\n");
    const refused = await ask(`/data?file=${encodeURIComponent("../x.csv")}`);
    expect(refused.status).toBe(404);
    expect(await refused.json()).toHaveProperty("message", expect.stringContaining("inside its own folder"));
    expect(wanted).toEqual(["d.csv", "../x.csv"]);
  });

  it("streams what happens to the files, and forgets a reader that went away", async () => {
    const reader = (await ask("/events?key=the-key", { key: null })).body!.getReader();
    await reader.read();
    events.send({ event: "file", file: "d.csv" });
    expect(new TextDecoder().decode((await reader.read()).value)).toBe('data: {"event":"file","file":"d.csv"}\n\n');
    await reader.cancel();
    expect(events.count).toBe(0);
  });

  it("answers on a real socket of the loopback interface", async () => {
    const listening = await listen(server, 0);
    const response = await fetch(`http://127.0.0.1:${listening.port}/notebook`, { headers: { "x-lagbook-key": "the-key" } });
    expect(await response.json()).toHaveProperty("text", "# One\n");
    await expect(listen(server, listening.port)).rejects.toThrow(/EADDRINUSE/);
    await listening.close();
  });
});
