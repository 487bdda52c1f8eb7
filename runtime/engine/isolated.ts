// Runs the code of a `script` cell in a worker of its own, out of reach of the network, the page, storage and the engine:
// an endless loop there is ended with its worker, while the engine lives.
// oxlint-disable unicorn/require-post-message-target-origin -- a worker's postMessage takes no origin

import { Overtaken } from "./values.ts";

/** Names of the language itself, and a few harmless helpers: all that a script finds besides what it reads from other cells, here and in Node. */
export const SCRIPT_NAMES: readonly string[] = ("Object Function Array Number parseFloat parseInt Infinity NaN undefined Boolean String Symbol Date Promise RegExp Error AggregateError EvalError RangeError ReferenceError SyntaxError TypeError URIError "
  + "globalThis JSON Math Intl ArrayBuffer Uint8Array Int8Array Uint16Array Int16Array Uint32Array Int32Array Float32Array Float64Array Uint8ClampedArray BigUint64Array BigInt64Array DataView Map BigInt Set WeakMap WeakSet WeakRef "
  + "Proxy Reflect decodeURI decodeURIComponent encodeURI encodeURIComponent escape unescape isFinite isNaN Iterator structuredClone console setTimeout clearTimeout queueMicrotask").split(" ");

/** The worker's program. It keeps the one way out to itself, takes the rest away, and imports the script as a module. */
const PROGRAM = `(() => {
const post = self.postMessage.bind(self), urlOf = URL.createObjectURL.bind(URL), BlobOf = Blob;
const kept = new Set(${JSON.stringify(SCRIPT_NAMES)});
function bare() {
  for (let holder = globalThis; holder !== null && holder !== Object.prototype; holder = Object.getPrototypeOf(holder)) {
    for (const key of Reflect.ownKeys(holder)) {
      if (typeof key === "string" && kept.has(key)) continue;
      if (!Reflect.deleteProperty(holder, key)) { try { Object.defineProperty(holder, key, { value: undefined }); } catch { /* not configurable: the policy of the page stands behind this */ } }
    }
  }
  for (const made of [function () {}, function* () {}, async function () {}, async function* () {}]) Object.defineProperty(Object.getPrototypeOf(made), "constructor", { value: undefined });
  delete globalThis.Function;
}
function plain(name, value) {
  try { structuredClone(value); } catch { throw new Error("The export \`" + name + "\` is " + (typeof value === "function" ? "a function" : "not plain data") + ": only plain data (numbers, texts, lists, objects) can leave a script"); }
  return value;
}
self.addEventListener("message", async ({ data: { source, inputs } }) => {
  const url = urlOf(new BlobOf([source], { type: "text/javascript" }));
  try {
    bare();
    for (const [name, value] of Object.entries(inputs)) Object.defineProperty(globalThis, name, { value, enumerable: true });
    const module = await import(url);
    const exports = {};
    for (const name of Object.keys(module)) exports[name] = plain(name, module[name]);
    post({ exports });
  } catch (error) {
    const line = parseInt(String(error?.stack ?? "").split(url + ":")[1], 10);
    post({ fault: (error instanceof Error ? error.message : String(error)) + (line > 0 ? " (line " + line + " of the script)" : "") });
  }
}, { once: true });
})();`;

/** Runs a module's source with values bound to names; gives its exports. Both are copies.
 *  @throws Error in the script's words; Overtaken when `signal` is aborted, whatever the script is doing */
export function importIsolated(source: string, inputs: Readonly<Record<string, unknown>>, signal: AbortSignal): Promise<Readonly<Record<string, unknown>>> {
  const address = URL.createObjectURL(new Blob([PROGRAM], { type: "text/javascript" }));
  // A classic worker: module workers are refused to a page of opaque origin, `import()` inside a classic one is not.
  const worker = new Worker(address);
  const end = (): void => { worker.terminate(); URL.revokeObjectURL(address); };
  return new Promise<Readonly<Record<string, unknown>>>((resolve, reject) => {
    const overtaken = (): void => reject(new Overtaken("overtaken by newer work"));
    if (signal.aborted) { overtaken(); return; }
    signal.addEventListener("abort", overtaken, { once: true });
    worker.addEventListener("error", (event) => { event.preventDefault(); reject(new Error(event.message || "The script could not be started")); });
    worker.addEventListener("message", ({ data }: MessageEvent<{ readonly exports?: Readonly<Record<string, unknown>>; readonly fault?: string } | null | undefined>) => {
      if (data?.exports === undefined) reject(new Error(data?.fault ?? "The script gave no answer"));
      else resolve(data.exports);
    });
    try {
      worker.postMessage({ source, inputs });
    } catch {
      const odd = Object.keys(inputs).find((name) => { try { structuredClone(inputs[name]); return false; } catch { return true; } });
      reject(new Error(`\`${odd ?? "An input"}\` cannot be handed to a script: only plain data can`));
    }
  }).finally(end);
}
