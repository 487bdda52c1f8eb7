import { mkdirSync, mkdtempSync, rmSync, symlinkSync, writeFileSync } from "node:fs";
import { connect } from "node:net";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { afterEach, beforeEach, describe, expect, it } from "vitest";
import { open } from "../../../runtime/host/open.ts";

// `lagbook open` on a real socket, asked as a hostile notebook, another site or a broken client would.

let top = "", folder = "", address: URL, key = "", stop: AbortController, ended: Promise<number>;
beforeEach(async () => {
  top = mkdtempSync(join(tmpdir(), "lagbook-open-"));
  folder = join(top, "home");
  mkdirSync(folder);
  writeFileSync(join(folder, "n.md"), "# One\n");
  writeFileSync(join(folder, "d.csv"), "t,v\n2020,1\n");
  mkdirSync(join(top, "elsewhere"));
  writeFileSync(join(top, "elsewhere", "secret.csv"), "t,v\n");
  symlinkSync(join(top, "elsewhere"), join(folder, "up"));
  stop = new AbortController();
  address = await new Promise((told, failed) => {
    ended = open({ file: "n.md", port: 0 }, { out: (text) => { told(new URL(/http:\S+/.exec(text)![0])); }, error: () => undefined, cwd: folder, now: () => new Date(0), stop: stop.signal });
    ended.catch(failed);
  });
  key = address.searchParams.get("key")!;
});
afterEach(async () => { stop.abort(); await ended; rmSync(top, { recursive: true, force: true }); });

const data = (file: string): Promise<Response> => fetch(new URL(`/data?file=${file}`, address), { headers: { "x-lagbook-key": key } });

/** Says a few bytes on a socket of its own and gives what comes back. */
function say(bytes: string): Promise<string> {
  return new Promise((done, failed) => {
    const socket = connect(Number(address.port), "127.0.0.1", () => { socket.write(bytes); });
    let heard = "";
    socket.on("data", (piece: Buffer) => { heard += piece.toString(); }).on("end", () => done(heard)).on("error", failed);
    setTimeout(() => { socket.destroy(); done(heard); }, 1500);
  });
}

/** What changes on disk, as the desk hears of it, for a while. */
async function heard(during: () => void): Promise<string> {
  const response = await fetch(new URL(`/events?key=${key}`, address)), reader = response.body!.getReader();
  let text = "";
  const reading = (async () => { for (;;) { const { value, done } = await reader.read(); if (done) return; text += new TextDecoder().decode(value); } })();
  during();
  await new Promise((resolve) => { setTimeout(resolve, 1200); });
  await reader.cancel();
  await reading;
  return text;
}

describe("lagbook open", () => {
  it("lives through names that no file can have", async () => {
    for (const file of ["%00", "a%00.csv", "x".repeat(300), "x/".repeat(3000), "%ff", "..%2f..%2fetc%2fpasswd", "%2e%2e/elsewhere/secret.csv", "..%5celsewhere", "/etc/passwd", "", ".", "CON", "d.csv/", "up/secret.csv", "up", "https:%2f%2fa.example"]) {
      const answer = await data(file);
      expect([200, 404], file).toContain(answer.status);
      if (answer.status === 200) expect(await answer.text(), file).toBe("t,v\n2020,1\n");
      else expect((await answer.json() as { message: string }).message, file).toMatch(/\.$/);
    }
    expect(await (await data("d.csv")).text()).toBe("t,v\n2020,1\n");
  });

  it("tells of changes to the files that were read, and of none outside the folder", async () => {
    await data("d.csv");
    await data("up/secret.csv");
    await data("up/later.csv");
    await new Promise((resolve) => { setTimeout(resolve, 300); });
    const told = await heard(() => {
      writeFileSync(join(folder, "d.csv"), "t,v\n2020,2\n");
      writeFileSync(join(top, "elsewhere", "secret.csv"), "t,v\n2020,2\n");
      writeFileSync(join(top, "elsewhere", "later.csv"), "t,v\n2020,2\n");
    });
    expect(told).toContain("d.csv");
    expect(told).not.toMatch(/secret|later/);
  });

  it("answers requests that no browser sends without falling over", async () => {
    const host = `Host: 127.0.0.1:${address.port}\r\nConnection: close`;
    expect(await say("GET /notebook HTTP/1.0\r\n\r\n")).toMatch(/ 403 /);
    expect(await say(`GET http://a.example/notebook HTTP/1.1\r\n${host}\r\n\r\n`)).toMatch(/ 40[03] /);
    expect(await say(`GET @a.example/ HTTP/1.1\r\n${host}\r\n\r\n`)).toMatch(/ 40[03] /);
    expect(await say(`GET //a.example/?key=${key} HTTP/1.1\r\n${host}\r\n\r\n`)).toMatch(/ 40[034] /);
    expect(await say(`TRACE / HTTP/1.1\r\n${host}\r\n\r\n`)).toMatch(/ 40[035] /);
    expect(await say(`DELETE /notebook HTTP/1.1\r\n${host}\r\nx-lagbook-key: ${key}\r\n\r\n`)).toMatch(/ 404 /);
    expect(await say("GARBAGE\r\n\r\n")).toMatch(/ 400 /);
    expect(await (await data("d.csv")).text()).toBe("t,v\n2020,1\n");
  });

  it("ends where the port is taken, and leaves nothing running", async () => {
    const watching = (): number => process.getActiveResourcesInfo().filter((one) => one === "FSEventWrap").length, settled = (): Promise<unknown> => new Promise((resolve) => { setTimeout(resolve, 500); });
    await settled();
    const before = watching();
    expect(before).toBeGreaterThan(0);
    const io = { out: () => undefined, error: () => undefined, cwd: folder, now: () => new Date(0), stop: stop.signal };
    await expect(open({ file: "n.md", port: Number(address.port) }, io)).rejects.toThrow(/is in use by another program/);
    await settled();
    expect(watching()).toBe(before);
  });

  it("has no door but the loopback interface", async () => {
    const other = await fetch(`http://127.0.0.2:${address.port}/desk.js`).then(() => "answered", () => "closed");
    expect(other).toBe("closed");
  });
});
