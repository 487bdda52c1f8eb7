import { afterEach, describe, expect, test } from "vitest";
import type { Engine } from "../../../runtime/engine/engine.ts";
import type { FromHelper, ToHelper } from "../../../runtime/engine/helpers.ts";
import type { FromEngine, ToEngine } from "../../../runtime/engine/messages.ts";
import { serveEngine } from "../../../runtime/engine/worker.ts";
import type { WorkerScope } from "../../../runtime/engine/worker.ts";
import { fake } from "./fakeLanguage.ts";

// The engine behind messages, without a worker around it: the test says what a page would say, and hears what it would hear.

type Import = NonNullable<Parameters<typeof serveEngine>[2]>;
type Said = FromEngine | FromHelper;

const served: Engine[] = [];
afterEach(() => { for (const engine of served.splice(0)) engine.dispose(); });

function serve(importCode: Import = async () => ({ a: 5 })) {
  const said: Said[] = [];
  let hear: (event: { readonly data: ToEngine | ToHelper }) => void = () => { throw new Error("nobody listens"); };
  const scope: WorkerScope = { postMessage: (message) => { said.push(structuredClone(message)); }, addEventListener: (_type, listener) => { hear = listener; } };
  const engine = serveEngine(fake, scope, importCode);
  served.push(engine);
  const say = (...messages: readonly (ToEngine | ToHelper)[]): void => { for (const data of messages) hear({ data: structuredClone(data) }); };
  return { engine, said, say, of: <F extends Said["from"]>(from: F) => said.filter((each): each is Extract<Said, { from: F }> => each.from === from) };
}

const fence = "```";
const cell = (head: string, ...lines: readonly string[]): string => `${fence}${head}\n${lines.join("\n")}\n${fence}\n\n`;
const text = (content: string, version = 1): ToEngine => ({ to: "text", version, text: content });
const bytes = (content: string): Uint8Array => new TextEncoder().encode(content);
const slider = cell("slider: a", "from: 0", "to: 5", "at: 2") + cell("double: b", "of: a");

describe("messages to the engine", () => {
  test("a text is answered with its outline, then its cells, and last that all has settled, in its version", async () => {
    const { engine, said, say } = serve();
    say(text(slider, 7));
    await engine.settle();
    expect(said.at(0)).toMatchObject({ from: "outline", version: 7 });
    expect(said.at(-1)).toMatchObject({ from: "settled", version: 7, moved: {} });
    expect(said.filter((each) => each.from === "cell").map((each) => each.cell.id)).toEqual(expect.arrayContaining(["a", "b"]));
  });

  test("are taken in their order: the last of two texts and of two settings holds", async () => {
    const { engine, say, of } = serve();
    say(text(slider, 1), text(slider.replace("double: b", "double: late"), 2), { to: "set", name: "a", value: 3 }, { to: "set", name: "a", value: 4 });
    await engine.settle();
    expect(of("settled").at(-1)).toEqual({ from: "settled", version: 2, moved: { a: 4 } });
    expect(engine.cells().find((each) => each.id === "late")?.fields).toContainEqual({ expression: "late.twice", value: 8 });
    say({ to: "unset", name: "a" });
    await engine.settle();
    expect(of("settled").at(-1)?.moved).toEqual({});
  });

  test("that it does not know, or that speak of cells that are not there, change nothing and break nothing", async () => {
    const { engine, say, said, of } = serve();
    say(text(slider));
    await engine.settle();
    const before = said.length;
    say({ to: "later" } as unknown as ToEngine, { to: "stop", cell: "gone" }, { to: "goOn", cell: "gone" }, { to: "hold", cell: "gone" }, { to: "unset", name: "gone" }, { to: "file", file: "unasked.csv", bytes: null });
    await engine.settle();
    expect(said.slice(before).filter((each) => each.from === "cell")).toEqual([]);
    say({ to: "ping", beat: 3 });
    expect(of("pong")).toEqual([{ from: "pong", beat: 3, running: null }]);
  });

  test("a beat is answered at once, with the cell that is at work", async () => {
    const { engine, say, of } = serve(() => new Promise(() => undefined));
    say(text(cell("script: s", "for (;;);")));
    await expect.poll(() => { say({ to: "ping", beat: 1 }); return of("pong").at(-1)?.running; }).toBe("s");
    say({ to: "ping", beat: 2 });
    expect(of("pong").at(-1)).toEqual({ from: "pong", beat: 2, running: "s" });
    expect(engine.running()).toBe("s");
  });

  test("a helper's work is answered with its key, and without a value where it cannot be made", () => {
    const { say, of } = serve();
    say({ to: "help", task: "no such task", shared: {}, item: { key: "k" } });
    expect(of("helped")).toEqual([{ from: "helped", key: "k", made: null }]);
  });
});

describe("files", () => {
  const two = cell("load: one", 'file: "s.csv"') + cell("load: two", 'file: "s.csv"');

  test("are asked for once, however many cells read them, and kept for those that come later", async () => {
    const { engine, say, of } = serve();
    say(text(two));
    await expect.poll(() => of("need")).toHaveLength(1);
    say({ to: "file", file: "s.csv", bytes: bytes("x") });
    await engine.settle();
    say(text(two + cell("load: three", 'file: "s.csv"'), 2));
    await engine.settle();
    expect(of("need")).toEqual([{ from: "need", file: "s.csv" }]);
    expect(engine.cells().map((each) => each.state)).toEqual(["current", "current", "current"]);
  });

  test("that come again are read again by the cells that had read them", async () => {
    const { engine, say } = serve();
    say(text(two), { to: "file", file: "s.csv", bytes: bytes("old") });
    await engine.settle();
    say({ to: "file", file: "s.csv", bytes: bytes("new") });
    await engine.settle();
    expect(engine.cells().map((each) => [each.runs, each.fields])).toEqual([[2, [{ expression: "one.text", value: "new" }]], [2, [{ expression: "two.text", value: "new" }]]]);
  });

  test("that are not there fail their cells with the reason, or with ours, and may come later", async () => {
    const { engine, say } = serve();
    say(text(two), { to: "file", file: "s.csv", bytes: null, reason: "The folder is locked" });
    await engine.settle();
    expect(engine.cells()[0]).toMatchObject({ state: "failed", message: "The folder is locked" });
    say({ to: "file", file: "s.csv", bytes: null });
    await engine.settle();
    expect(engine.cells()[0].message).toBe('There is no file "s.csv" in the notebook\'s folder');
    say({ to: "file", file: "s.csv", bytes: bytes("x") });
    await engine.settle();
    expect(engine.cells()[1].state).toBe("current");
  });
});

describe("scripts", () => {
  test("wait in the words that came with the message, and run once they may", async () => {
    const ran: string[] = [];
    const { engine, say } = serve(async (source) => { ran.push(source); return { a: 1 }; });
    say({ to: "allowCode", allow: false, reason: "Waits for the reader" }, text(cell("script: s", "export const a = 1;")));
    await engine.settle();
    expect(engine.cells()[0]).toMatchObject({ state: "failed", message: "Waits for the reader" });
    expect(ran).toEqual([]);
    say({ to: "allowCode", allow: true });
    await engine.settle();
    expect(engine.cells()[0].state).toBe("current");
    expect(ran).toHaveLength(1);
  });

  test("that fail say why in their cell, and the rest of the notebook goes on", async () => {
    const { engine, say } = serve(() => Promise.reject(new Error("no such month (line 2 of the script)")));
    say(text(cell("script: s", "export const z = 1;") + cell("values: v", "x: z") + slider));
    await engine.settle();
    expect(engine.cells().map((each) => [each.id, each.state])).toEqual([["s", "failed"], ["v", "blocked"], ["a", "current"], ["b", "current"]]);
    expect(engine.cells()[0].message).toBe("no such month (line 2 of the script)");
  });
});
