import { afterEach, describe, expect, test } from "vitest";
import { createEngine } from "../../../runtime/engine/engine.ts";
import type { Engine, EngineOptions } from "../../../runtime/engine/engine.ts";
import type { CellReport, FromEngine } from "../../../runtime/engine/messages.ts";
import { resultOf } from "../../../runtime/engine/result.ts";
import { fake } from "./fakeLanguage.ts";

const fence = "```";
const cell = (head: string, ...lines: string[]): string => `${fence}${head}\n${lines.join("\n")}\n${fence}\n\n`;

const engines: Engine[] = [];
afterEach(() => { for (const engine of engines.splice(0)) engine.dispose(); });

interface Bench { readonly engine: Engine; readonly sent: FromEngine[]; readonly files: Map<string, string>; readonly cell: (id: string) => CellReport; readonly asked: string[] }

async function open(text: string, options: EngineOptions & { code?: boolean } = {}): Promise<Bench> {
  const sent: FromEngine[] = [];
  const files = new Map<string, string>();
  const asked: string[] = [];
  const engine = createEngine(fake, {
    send: (message) => { sent.push(structuredClone(message)); },
    read: (file) => { asked.push(file); const got = files.get(file); return got === undefined ? Promise.reject(new Error(`There is no file ${file} here`)) : Promise.resolve(new TextEncoder().encode(got)); },
    ...(options.code ? { importCode: async (source, inputs) => ({ source, seen: Object.keys(inputs), a: 5 }) } : {}),
  }, options);
  engines.push(engine);
  engine.setText(text);
  await engine.settle();
  return { engine, sent, files, asked, cell: (id) => { const found = engine.cells().find((each) => each.id === id); if (found === undefined) throw new Error(`no cell ${id}`); return found; } };
}

const chain = cell("slider: a", "from: 0", "to: 5", "at: 2") + cell("double: b", "of: a") + cell("double: c", "of: b.twice") + cell("double: other", "of: 7");

describe("recomputation", () => {
  test("cells become current in the order of reading, wherever they stand", async () => {
    const { engine, cell: at } = await open(cell("double: c", "of: b.twice") + cell("double: b", "of: a") + cell("slider: a", "from: 0", "to: 5", "at: 2"));
    expect(engine.cells().map((each) => [each.id, each.state])).toEqual([["c", "current"], ["b", "current"], ["a", "current"]]);
    expect(at("c").fields).toContainEqual({ expression: "c.twice", value: 8 });
  });

  test("a moved control recomputes only what depends on it", async () => {
    const { engine, cell: at, sent } = await open(chain);
    expect(["a", "b", "c", "other"].map((id) => at(id).runs)).toEqual([1, 1, 1, 1]);
    engine.set("a", 3);
    await engine.settle();
    expect(["a", "b", "c", "other"].map((id) => at(id).runs)).toEqual([2, 2, 2, 1]);
    expect(at("c").fields).toContainEqual({ expression: "c.twice", value: 12 });
    expect(sent.at(-1)).toEqual({ from: "settled", version: 1, moved: { a: 3 } });
  });

  test("a cell that is done is told before the cells that read it have run", async () => {
    const runsOfReader: number[] = [];
    const engine = createEngine(fake, {
      send: (message) => { if (message.from === "cell" && message.cell.id === "b" && message.cell.state === "current") runsOfReader.push(engine.cells().find((each) => each.id === "c")?.runs ?? NaN); },
      read: () => Promise.reject(new Error("reads nothing")),
    });
    engines.push(engine);
    engine.setText(chain);
    await engine.settle();
    engine.set("a", 3);
    await engine.settle();
    expect(runsOfReader).toEqual([0, 1]);
  });

  test("a control moved to where it stands recomputes nothing else", async () => {
    const { engine, cell: at } = await open(chain);
    engine.set("a", 2);
    await engine.settle();
    expect(["a", "b", "c"].map((id) => at(id).runs)).toEqual([2, 1, 1]);
    expect(engine.moved()).toEqual({});
  });

  test("an edit recomputes the cell edited and what depends on it; prose costs nothing", async () => {
    const { engine, cell: at } = await open(chain);
    engine.setText(`# Words first\n\n${chain}`);
    await engine.settle();
    expect(["a", "b", "c", "other"].map((id) => at(id).runs)).toEqual([1, 1, 1, 1]);
    expect(at("a").line).toBe(3);
    engine.setText(`# Words first\n\n${chain.replace("of: b.twice", "of: b.twice + 1")}`);
    await engine.settle();
    expect(["a", "b", "c", "other"].map((id) => at(id).runs)).toEqual([1, 1, 2, 1]);
    expect(at("c").fields).toContainEqual({ expression: "c.twice", value: 10 });
  });

  test("an edit of a control's own text drops its moved setting", async () => {
    const { engine, cell: at } = await open(chain);
    engine.set("a", 4);
    await engine.settle();
    engine.setText(chain.replace("at: 2", "at: 4"));
    await engine.settle();
    expect(engine.moved()).toEqual({});
    expect(at("b").runs).toBe(2);
    engine.setText(chain.replace("at: 2", "at: 1"));
    await engine.settle();
    expect(at("b").fields).toContainEqual({ expression: "b.of", value: 1 });
  });

  test("a dropped setting is told beside its control until it is moved again", async () => {
    const { engine, cell: at, sent } = await open(chain);
    engine.set("a", 4);
    await engine.settle();
    engine.setText(chain.replace("at: 2", "at: 1"));
    await engine.settle();
    expect(at("a").notes).toEqual(["It had been moved to 4; its text was edited since. It stands as the text says"]);
    expect(sent.findLast((each) => each.from === "cell" && each.cell.id === "a")).toMatchObject({ cell: { notes: [expect.stringContaining("moved to 4")] } });
    // Whoever keeps the settings now takes this one back: that changes nothing.
    engine.unset("a");
    engine.set("a", 3);
    await engine.settle();
    expect(at("a").notes).toEqual([]);
    expect(engine.refused()).toEqual({});
  });

  test("a setting that an edit elsewhere made impossible gives way to the text's, and that is told", async () => {
    const bounded = (most: number): string => cell("slider: a", "from: 0", "to: most.n", "at: 1") + cell("values: most", `n: ${most}`) + cell("double: b", "of: a");
    const { engine, cell: at } = await open(bounded(5));
    engine.set("a", 4);
    await engine.settle();
    expect(at("b").fields).toContainEqual({ expression: "b.of", value: 4 });
    engine.setText(bounded(3));
    await engine.settle();
    expect(at("a")).toMatchObject({ state: "current", notes: ["It had been moved to 4, which it cannot take: the setting is 4, outside 0 to 3. It stands as the text says"] });
    expect(at("b").fields).toContainEqual({ expression: "b.of", value: 1 });
    expect(engine.moved()).toEqual({});
    expect(engine.refused()).toEqual({ a: "the setting is 4, outside 0 to 3" });
  });

  test("the newest of many moves wins, and overtaken work stops", async () => {
    const { engine, cell: at, sent } = await open(cell("slider: a", "from: 0", "to: 30") + cell("double: slow", "of: a", "slow: 40") + cell("double: after", "of: slow.twice"));
    const began = performance.now();
    for (let i = 1; i <= 20; i += 1) { engine.set("a", i); await new Promise((resolve) => { setTimeout(resolve, 5); }); }
    await engine.settle();
    expect(at("after").fields).toContainEqual({ expression: "after.of", value: 40 });
    // Twenty whole runs would take 20 x 280 ms; each overtaken run stops at its next breath.
    expect(performance.now() - began).toBeLessThan(3000);
    expect(at("after").runs).toBe(2);
    expect(sent.some((each) => each.from === "cell" && each.cell.id === "slow" && each.cell.state === "working" && each.cell.progress !== null)).toBe(true);
  });

  test("waiting cells say so while others work", async () => {
    const { sent } = await open(cell("double: slow", "of: 1", "slow: 6") + cell("double: after", "of: slow.twice"));
    expect(sent.some((each) => each.from === "cell" && each.cell.id === "after" && each.cell.state === "waiting")).toBe(true);
    expect(sent.findLast((each) => each.from === "cell" && each.cell.id === "after")).toMatchObject({ cell: { state: "current" } });
  });

  test("work that goes on can be stopped by hand, and the rest lives", async () => {
    const { engine, cell: at } = await open(chain);
    engine.setText(chain + cell("double: slow", "of: 1", "slow: 100000"));
    await new Promise((resolve) => { setTimeout(resolve, 60); });
    expect(engine.running()).toBe("slow");
    engine.stop("slow");
    await engine.settle();
    expect(at("slow")).toMatchObject({ state: "failed", message: expect.stringContaining("Stopped by hand"), stopped: true });
    expect(at("c").state).toBe("current");
  });

  const counting = cell("count: long", "to: 3000") + cell("double: after", "of: long.reached > 40 ? 40 : long.reached") + cell("claims:", '"it counted": long.reached > 0', '"two is two": 2 === 2') + "[3](=after.of)\n";
  test("work that asks whether it should end keeps what it has done, and decides no claim and no number", async () => {
    const { engine, cell: at } = await open("");
    engine.setText(counting);
    await new Promise((resolve) => { setTimeout(resolve, 60); });
    engine.stop("long");
    await engine.settle();
    const { reached } = (at("long").fields ?? []).reduce<{ reached: number }>((found, field) => (field.expression === "long.reached" ? { reached: Number(field.value) } : found), { reached: 0 });
    expect(reached).toBeGreaterThan(0);
    expect(reached).toBeLessThan(3000);
    expect(at("long")).toMatchObject({ state: "current", stopped: true, message: `Ended early by hand, after ${reached} of 3000. Claims and live numbers that read it are undecided.` });
    // What rests on it is shown, and says so.
    expect(at("after")).toMatchObject({ state: "current", stopped: false, message: expect.stringContaining("Rests on `long`, which was ended early by hand") });
    expect(engine.claims()).toMatchObject([{ holds: null, message: `Undecided: \`long\` was ended early, after ${reached} of 3000` }, { holds: true }]);
    expect(engine.numbers()).toMatchObject([{ state: "undecided", message: expect.stringContaining("`long` was ended early") }]);
    expect(resultOf(engine, "n.md").ok).toBe(false);
  });

  test("it can be told to go on, and takes up what it had", async () => {
    const { engine, cell: at } = await open("");
    engine.setText(cell("count: long", "to: 60"));
    await new Promise((resolve) => { setTimeout(resolve, 40); });
    engine.stop("long");
    await engine.settle();
    const field = (name: string) => Number(at("long").fields?.find((each) => each.expression === `long.${name}`)?.value);
    const first = field("reached");
    engine.goOn("long");
    await engine.settle();
    expect(at("long")).toMatchObject({ state: "current", stopped: false, message: null });
    expect(field("reached")).toBe(60);
    expect(field("made")).toBe(60 - first);
  });

  test("told a second time, it is broken off", async () => {
    const { engine, cell: at } = await open("");
    engine.setText(cell("count: long", "to: 3000", "heeds: false"));
    await new Promise((resolve) => { setTimeout(resolve, 30); });
    engine.stop("long");
    engine.stop("long");
    await engine.settle();
    expect(at("long")).toMatchObject({ state: "failed", stopped: true });
  });
});

describe("faults", () => {
  test("a failed cell blocks what depends on it, by name, and nothing else", async () => {
    const { engine, cell: at } = await open(cell("double: steady", "of: 13") + cell("double: fit", "of: steady.twice") + cell("double: last", "of: fit.twice") + cell("double: sound", "of: 1"));
    expect(at("steady")).toMatchObject({ state: "failed", message: "13 cannot be doubled", at: { line: 2, column: 5 } });
    expect(at("fit")).toMatchObject({ state: "blocked", message: "blocked by `steady`, which failed" });
    expect(at("last")).toMatchObject({ state: "blocked", message: "blocked by `steady`, which failed" });
    expect(at("sound").state).toBe("current");
    engine.setText(cell("double: steady", "of: 3") + cell("double: fit", "of: steady.twice") + cell("double: last", "of: fit.twice") + cell("double: sound", "of: 1"));
    await engine.settle();
    expect(at("last")).toMatchObject({ state: "current" });
    expect(at("sound").runs).toBe(1);
  });

  test.each([
    ["an unknown name", cell("double: x", "of: soundd.twice"), /There is no `soundd`: did you mean `sound`\?/],
    ["an unknown kind", cell("duoble: x", "of: 1"), /did you mean `double`\?/],
    ["an unknown option", cell("double: x", "off: 1"), /has no option `off`: did you mean `of`\?/],
    ["a missing option", cell("double: x"), /needs the option `of`/],
    ["a wrong type", cell("double: x", 'of: "3"'), /`of` is the text "3", expected a number, without quotes/],
    ["a value out of bounds", cell("double: x", "of: 50"), /`of` is 50, expected at most 40/],
    ["a library function that throws", cell("double: x", "of: fails()"), /fails: n is 0, expected at least 1/],
    ["a circle", cell("double: x", "of: y.twice") + cell("double: y", "of: x.twice"), /A circle: `x` reads `y` reads `x`/],
    ["a name defined twice", cell("double: x", "of: 1") + cell("double: x", "of: 2"), /`x` is defined twice, here and in line/],
    ["a property that is not there", cell("double: x", "of: sound.twise"), /There is no `twise` here: did you mean `twice`\?/],
    ["an open bracket", cell("double: x", "of: (1 + 2"), /`\(` is opened here and not closed/],
  ])("%s fails its cell and nobody else's", async (_, text, message) => {
    const { cell: at } = await open(cell("double: sound", "of: 1") + text + cell("double: reader", "of: x.twice"));
    expect(at("x").state).toBe("failed");
    expect(at("x").message).toMatch(message);
    expect(at("x").at).not.toBeNull();
    expect(at("reader").state).toBe("blocked");
    expect(at("sound").state).toBe("current");
  });

  test("a fault that begins with an option's name stands at that option", async () => {
    const { cell: at } = await open(cell("double: x", "of: 14"));
    expect(at("x")).toMatchObject({ message: "of is 14, and 14 is refused", at: { line: 2, column: 5 } });
  });

  test("a missing file is said, and read again when it appears", async () => {
    const { engine, files, cell: at, asked } = await open(cell("load: data", 'file: "a.csv"'));
    expect(at("data")).toMatchObject({ state: "failed", message: "There is no file a.csv here" });
    files.set("a.csv", "hello");
    engine.fileChanged("other.csv");
    engine.fileChanged("a.csv");
    await engine.settle();
    expect(at("data")).toMatchObject({ state: "current", notes: ["read"] });
    expect(asked).toEqual(["a.csv", "a.csv"]);
  });
});

describe("function forms, claims, live numbers", () => {
  test("a kind is a function too, its faults placed in the expression, also when it answers later", async () => {
    const { cell: at } = await open(cell("values: v", "now: double({of: 4}).twice", "later: [1, 2].map(x => double({of: x, slow: 1}).twice)") + cell("values: w", "bad: 1 + double({off: 4}).twice"));
    expect(at("v").fields).toEqual([{ expression: "v.now", value: 8 }, { expression: "v.later[0]", value: 2 }, { expression: "v.later[1]", value: 4 }]);
    expect(at("w")).toMatchObject({ state: "failed", message: "`double` has no option `off`: did you mean `of`?", at: { line: 7, column: 10 } });
  });

  test("claims are decided one by one", async () => {
    const { engine, cell: at } = await open(cell("double: bad", "of: 13") + cell("double: good", "of: 1") + cell("claims: c", '"good is two": good.twice === 2', '"good is large": good.twice > 5', '"bad is large": bad.twice > 5', '"missing": NaN > 5', '"neither": good.twice', '"some": [NaN, 7].some(x => x > 5)'));
    expect(at("c").state).toBe("current");
    expect(engine.claims().map((each) => each.holds)).toEqual([true, false, null, null, null, null]);
    expect(engine.claims()[2].message).toBe("Undecided: `bad` failed");
    expect(engine.claims()[0].line).toBe(10);
  });

  test("a claim whose condition cannot be read leaves the others decided", async () => {
    const { engine, cell: at } = await open(cell("double: good", "of: 1") + cell("claims: c", '"good is two": good.twice == 2', '"slip": good.twice ^ 2', '"no such name": god.twice > 1', '"good is small": good.twice < 5'));
    expect(engine.claims().map((each) => each.holds)).toEqual([true, null, null, true]);
    expect(engine.claims()[1].message).toMatch(/is not a power here/);
    expect(engine.claims()[2].message).toMatch(/`god`/);
    expect(at("c").state).toBe("current");
  });

  test("live numbers agree, have moved or are undecided", async () => {
    const { engine } = await open(`${chain}Twice is [4](=b.twice), then [7.9](=c.twice), [8](<=c.twice + 0.4>), [x](=nowhere), [1](=NaN), [2](=b), [four](=b.twice).\n`);
    expect(engine.numbers().map((each) => [each.state, each.now])).toEqual([["agrees", "4"], ["moved", "8.0"], ["agrees", "8"], ["undecided", null], ["undecided", null], ["undecided", null], ["moved", "4"]]);
    engine.set("a", 3);
    await engine.settle();
    expect(engine.numbers()[0]).toMatchObject({ state: "moved", saved: "4", now: "6", value: 6, line: 19 });
  });

  test("a missing figure is undecided with what its cell notes about it", async () => {
    const { engine } = await open(`${cell("values: v", "error: NaN", 'notes: [{text: "A root lies on the unit circle."}]')}[1](=v.error) [2](=v)\n`);
    expect(engine.numbers().map((each) => each.message)).toEqual(["Undecided: `v.error` is missing (NaN). `v` notes: A root lies on the unit circle.", "This gives an object: choose one number, text or truth of it"]);
  });

  test("a figure that is missing says why, where its holder has a note of it", async () => {
    const { engine } = await open(`${cell("values: v", 'test: {p: NaN, note: "no degrees of freedom are left"}', "bare: {p: NaN}")}[1](=v.test.p) [2](=v.bare.p)\n\n${cell("claims:", '"it is": v.test.p < 0.05')}`);
    expect(engine.numbers().map((each) => each.message)).toEqual(["Undecided: `v.test.p` is missing (NaN): no degrees of freedom are left", "Undecided: `v.bare.p` is missing (NaN)"]);
    expect(engine.claims()[0].message).toBe("Undecided: `v.test.p` is missing (NaN): no degrees of freedom are left");
  });

  test("the result of verify has the shape of the language", async () => {
    const { engine } = await open(`${chain}[4](=b.twice)\n\n${cell("claims:", '"holds": b.twice === 4')}`);
    expect(resultOf(engine, "n.md")).toEqual({
      language: "1", notebook: "n.md", ok: true, problems: [], notes: [],
      cells: [["a", "slider", 1], ["b", "double", 7], ["c", "double", 11], ["other", "double", 15], [null, "claims", 21]].map(([name, kind, line]) => ({ name, kind, line, state: "current", message: null, at: null })),
      numbers: [{ line: 19, expression: "b.twice", saved: "4", now: "4", value: 4, agrees: true, message: null }],
      claims: [{ line: 22, claim: "holds", holds: true, message: null }],
    });
  });
});

describe("off to the side", () => {
  test("a sweep whose own control moves computes nothing again; anything else that it hangs on makes it do so", async () => {
    const text = cell("slider: a", "from: 0", "to: 3", "at: 2") + cell("slider: b", "from: 0", "to: 3", "at: 1") + cell("load: l", "file: `f${a}`") + cell("sweep: s", "over: a", "measure: `${l.text}${b}`");
    const { engine, files, asked, cell: at } = await open("");
    for (const i of [0, 1, 2, 3]) files.set(`f${i}`, `text ${i} `);
    engine.setText(text);
    await engine.settle();
    const rows = () => (at("s").fields ?? []).filter((each) => each.expression.endsWith("measure")).map((each) => each.value);
    expect(rows()).toEqual(["text 0 1", "text 1 1", "text 2 1", "text 3 1"]);
    asked.length = 0;
    engine.set("a", 3);
    await engine.settle();
    // The cell itself reads its file at the new place; nothing is read off to the side.
    expect(asked).toEqual(["f3"]);
    expect(rows()).toEqual(["text 0 1", "text 1 1", "text 2 1", "text 3 1"]);
    engine.set("b", 2);
    await engine.settle();
    expect(asked).toEqual(["f3", "f0", "f1", "f2", "f3"]);
    expect(rows()).toEqual(["text 0 2", "text 1 2", "text 2 2", "text 3 2"]);
  });

  test("a sweep runs though what it measures has failed at the control's present value", async () => {
    const { cell: at } = await open(cell("slider: a", "from: 12", "to: 14", "at: 13") + cell("double: d", "of: a") + cell("sweep: s", "over: a", "measure: d?.twice") + cell("double: off", "of: 13") + cell("sweep: t", "over: a", "measure: a + off.twice"));
    expect(at("d").state).toBe("failed");
    // 13 itself has no measure, and the fake sweep lets no value fail; what fails without the control still blocks.
    expect(at("s").message).not.toContain("blocked");
    expect(at("t")).toMatchObject({ state: "blocked", message: "blocked by `off`, which failed" });
  });

  test("sweep recomputes what hangs on a control and leaves the notebook alone", async () => {
    const { engine, cell: at, sent } = await open(chain + cell("values: k", "ten: 10") + cell("sweep: s", "over: a", "measure: c.twice + k.ten + a"));
    expect(at("s").fields?.filter((each) => each.expression.endsWith("measure")).map((each) => each.value)).toEqual([10, 15, 20, 25, 30, 35]);
    expect(at("c").runs).toBe(1);
    const before = sent.length;
    engine.set("a", 1);
    await engine.settle();
    expect(at("c").runs).toBe(2);
    expect(sent.slice(before).filter((each) => each.from === "cell").map((each) => each.cell.id)).not.toContain("k");
  });
});

describe("scripts", () => {
  test("are refused where code is not allowed", async () => {
    const { cell: at } = await open(cell("script: s", "export const a = 1;") + cell("values: v", "x: a"));
    expect(at("s")).toMatchObject({ state: "failed", message: expect.stringContaining("--allow-code") });
    expect(at("v").state).toBe("blocked");
  });

  test("wait in the words of whoever holds them, and run when they may", async () => {
    const { engine, cell: at } = await open(cell("script: s", "export const a = 1;") + cell("values: v", "x: a"), { code: true });
    engine.setAllowCode(false, "This script waits.");
    await engine.settle();
    expect(at("s")).toMatchObject({ state: "failed", message: "This script waits." });
    engine.setAllowCode(true);
    await engine.settle();
    expect(at("v")).toMatchObject({ state: "current", fields: [{ expression: "v.x", value: 5 }] });
  });

  test("get the values of the cells they read; their exports are names", async () => {
    const { cell: at } = await open(cell("double: b", "of: 1") + cell("script: s", "const q = b.twice; export const a = q + Math.PI;") + cell("values: v", "x: a + 1", "y: s.a"), { code: true });
    expect(at("v").fields).toEqual([{ expression: "v.x", value: 6 }, { expression: "v.y", value: 5 }]);
    expect(at("s").fields).toContainEqual({ expression: "s.seen[0]", value: "b" });
  });
});

describe("the outline", () => {
  test("keys stay while content stays, and a node is sent once a key", async () => {
    const { engine, sent } = await open("# A\n\none\n\none\n\ntwo [4](=1)\n");
    engine.setText("# A\n\nzero\n\none\n\none\n\ntwo [4](=1)\n");
    await engine.settle();
    const [first, second] = sent.filter((each) => each.from === "outline");
    expect(first.blocks.map((each) => each.key)).toEqual(["prose 1", "prose 2", "prose 3", "prose 4"]);
    expect(second.blocks.map((each) => each.key)).toEqual(["prose 1", "prose 5", "prose 2", "prose 3", "prose 4"]);
    expect(second.blocks.map((each) => each.block === "prose" && each.node !== undefined)).toEqual([false, true, false, false, false]);
  });
});
