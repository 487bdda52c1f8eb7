import { describe, expect, it } from "vitest";
import type { CellReport, ToEngine } from "../../../runtime/engine/messages.ts";
import { pageState } from "../../../runtime/page/pageState.ts";
import { settings } from "../../../runtime/page/settings.ts";
import { cellPatienceMs, patienceMs, watchdog } from "../../../runtime/page/watchdog.ts";

const report = (given: Partial<CellReport>): CellReport => ({ id: "a", name: "a", kind: "fit", line: 3, from: 0, to: 1, state: "current", message: null, at: null, notes: [], show: [], progress: null, fields: [], runs: 1, stopped: false, ...given });

function dogWith(...cells: CellReport[]) {
  const state = pageState(); let now = 0; let changes = 0;
  for (const cell of cells) state.cells.set(cell.id, cell);
  const dog = watchdog(state, () => { changes += 1; }, () => now);
  return { dog, later: (ms: number) => { now += ms; }, changes: () => changes };
}

describe("watchdog", () => {
  it("says nothing while the engine answers", () => {
    const { dog } = dogWith(report({ state: "working" }));
    dog.reported(report({ state: "working" }));
    dog.silent(patienceMs - 100);
    expect(dog.notice()).toBeNull();
    expect(dog.canStop("a")).toBe(false);
  });
  it("names the cell that an engine which fell silent was in, and lets it be stopped", () => {
    const { dog } = dogWith(report({ state: "working" }));
    dog.reported(report({ state: "working" }));
    dog.silent(3100);
    expect(dog.notice()).toMatchObject({ cell: "a", label: "a" });
    expect(dog.notice()?.words).toContain("3 s");
    expect(dog.canStop("a")).toBe(true);
    dog.answered(null);
    expect(dog.notice()).toBeNull();
  });
  it("offers a fresh start when no cell was known to be at work", () => {
    const { dog } = dogWith();
    dog.silent(2500);
    expect(dog.notice()).toMatchObject({ cell: null });
  });
  it("lets a cell be stopped that is at work for long, though the engine answers and it tells how far it is", () => {
    const { dog, later } = dogWith(report({ state: "working" }));
    dog.reported(report({ state: "working" }));
    later(cellPatienceMs - 1); expect(dog.canStop("a")).toBe(false);
    dog.reported(report({ state: "working" }));
    later(1); expect(dog.canStop("a")).toBe(false);
    later(1); expect(dog.canStop("a")).toBe(true);
    expect(dog.stuck()).toBe(false);
    dog.reported(report({})); expect(dog.canStop("a")).toBe(false);
    dog.reported(report({ state: "working" })); expect(dog.canStop("a")).toBe(false);
  });
  it("knows an engine that answers no more", () => {
    const { dog } = dogWith();
    dog.silent(patienceMs + 1); expect(dog.stuck()).toBe(true);
    dog.answered(null); expect(dog.stuck()).toBe(false);
  });
});

describe("settings", () => {
  const slider = (at: number): CellReport => report({ name: "q", show: [{ part: "control", control: "slider", label: "q", from: 0, to: 9, step: 1, at, kept: 1 }] });
  it("holds the newest move until the engine has answered it, so that a control never jumps back", () => {
    const said: ToEngine[] = [];
    const set = settings((message) => said.push(message));
    set.set("q", 2); set.set("q", 3);
    set.answered(slider(2)); expect(set.pending("q")).toBe(3);
    set.answered(slider(3)); expect(set.pending("q")).toBeUndefined();
    expect(said).toEqual([{ to: "set", name: "q", value: 2 }, { to: "set", name: "q", value: 3 }]);
    expect(set.again()).toEqual([{ to: "set", name: "q", value: 3 }]);
  });
  it("forgets a setting that the text now has by itself", () => {
    const said: ToEngine[] = [];
    const set = settings((message) => said.push(message));
    set.set("q", 3);
    set.settled({ q: 3 }); expect(set.again().length).toBe(1);
    set.settled({}); expect(set.again()).toEqual([]);
    expect(said[1]).toEqual({ to: "unset", name: "q" });
  });
});
