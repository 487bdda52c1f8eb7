import { afterEach, beforeEach, describe, expect, test, vi } from "vitest";
import { importIsolated, SCRIPT_NAMES } from "../../../runtime/engine/isolated.ts";
import { Overtaken } from "../../../runtime/engine/values.ts";

// What the engine does with the worker of a script, whatever that worker does. A worker is played by the test: what a script
// can reach in a real one is for the browser's tests.

type Event = { readonly data?: unknown; readonly message?: string; preventDefault(): void };

class PlayedWorker {
  static started: PlayedWorker[] = [];
  readonly address: string;
  readonly posted: unknown[] = [];
  ended = 0;
  readonly #ears = new Map<string, (event: Event) => void>();
  constructor(address: string) { this.address = address; PlayedWorker.started.push(this); }
  addEventListener(type: string, hear: (event: Event) => void): void { this.#ears.set(type, hear); }
  postMessage(message: unknown): void { this.posted.push(structuredClone(message)); }
  terminate(): void { this.ended += 1; }
  says(data: unknown): void { this.#ears.get("message")?.({ data, preventDefault: () => undefined }); }
  fails(message: string): boolean { let prevented = false; this.#ears.get("error")?.({ message, preventDefault: () => { prevented = true; } }); return prevented; }
}

let addresses: Set<string>;
beforeEach(() => {
  PlayedWorker.started = [];
  addresses = new Set();
  vi.stubGlobal("Worker", PlayedWorker);
  vi.spyOn(URL, "createObjectURL").mockImplementation(() => { const made = `blob:${addresses.size}`; addresses.add(made); return made; });
  vi.spyOn(URL, "revokeObjectURL").mockImplementation((address) => { addresses.delete(address); });
});
afterEach(() => { vi.unstubAllGlobals(); vi.restoreAllMocks(); });

const never = (): AbortSignal => new AbortController().signal;
const last = (): PlayedWorker => PlayedWorker.started.at(-1)!;

describe("a script's worker", () => {
  test("gets the source and copies of the inputs; its exports are the answer, and it ends with them", async () => {
    const values = Float64Array.of(1, 2);
    const answer = importIsolated("export const a = 1", { values }, never()), worker = last();
    expect(worker.posted).toEqual([{ source: "export const a = 1", inputs: { values } }]);
    expect(worker.ended).toBe(0);
    worker.says({ exports: { a: 1 } });
    expect(await answer).toEqual({ a: 1 });
    expect(worker.ended).toBe(1);
    expect(addresses.size).toBe(0);
  });

  test("is heard once: the first message decides, whatever comes after it", async () => {
    const answer = importIsolated("", {}, never());
    last().says({ exports: { a: 1 } });
    last().says({ exports: { a: 2 } });
    last().says({ fault: "late" });
    expect(await answer).toEqual({ a: 1 });
    const faulty = importIsolated("", {}, never());
    last().says({ fault: "no such month (line 2 of the script)" });
    last().says({ exports: { a: 1 } });
    await expect(faulty).rejects.toThrow("no such month (line 2 of the script)");
  });

  test.each([[{}], [{ other: 1 }], [{ exports: undefined }]])("that answers with neither exports nor a fault (%j) gave no answer, and ends", async (message) => {
    const answer = importIsolated("", {}, never());
    last().says(message);
    await expect(answer).rejects.toThrow("The script gave no answer");
    expect(last().ended).toBe(1);
  });

  test.each([[null], ["text"], [7], [undefined]])("that says %j, as only a script with a way out could, gave no answer either", async (message) => {
    const answer = importIsolated("", {}, never());
    last().says(message);
    await expect(answer).rejects.toThrow("The script gave no answer");
  });

  test("that cannot start is told of in the browser's words, or in ours, and troubles nobody else", async () => {
    const refused = importIsolated("", {}, never());
    expect(last().fails("Refused by the policy")).toBe(true);
    await expect(refused).rejects.toThrow("Refused by the policy");
    const silent = importIsolated("", {}, never());
    last().fails("");
    await expect(silent).rejects.toThrow("The script could not be started");
    expect(addresses.size).toBe(0);
  });

  test("ends at once when it is overtaken, also where that was so before it began", async () => {
    const stop = new AbortController(), answer = importIsolated("for (;;);", {}, stop.signal);
    stop.abort();
    await expect(answer).rejects.toBeInstanceOf(Overtaken);
    expect(last().ended).toBe(1);
    await expect(importIsolated("for (;;);", {}, stop.signal)).rejects.toBeInstanceOf(Overtaken);
    expect(PlayedWorker.started.map((worker) => worker.ended)).toEqual(PlayedWorker.started.map(() => 1));
  });

  test("is not begun with what cannot be copied: the input is named", async () => {
    await expect(importIsolated("", { fine: 1, model: { predict: () => 1 } }, never())).rejects.toThrow("`model` cannot be handed to a script: only plain data can");
    expect(last().ended).toBe(1);
  });

  test("of each script is its own", async () => {
    const one = importIsolated("1", {}, never()), two = importIsolated("2", {}, never());
    const [first, second] = PlayedWorker.started;
    second.says({ exports: { of: 2 } });
    first.says({ exports: { of: 1 } });
    expect([await one, await two]).toEqual([{ of: 1 }, { of: 2 }]);
  });
});

test("the names a script finds are those of the language, each once, and none of a network, a file or a page", () => {
  expect(new Set(SCRIPT_NAMES).size).toBe(SCRIPT_NAMES.length);
  const reaching = /^(fetch|XMLHttpRequest|WebSocket|EventSource|WebTransport|importScripts|Worker|SharedWorker|BroadcastChannel|MessageChannel|indexedDB|caches|navigator|location|postMessage|self|URL|Blob|SharedArrayBuffer|Atomics|WebAssembly|eval|require|process)$/;
  expect(SCRIPT_NAMES.filter((name) => reaching.test(name))).toEqual([]);
});
