import { describe, expect, it } from "vitest";
import { choice } from "../../cells/choice.ts";
import { slider } from "../../cells/slider.ts";
import { switchKind } from "../../cells/switch.ts";
import { windowKind } from "../../cells/window.ts";
import { makeSeries } from "../../stdlib/index.ts";
import { contextOf, runCell } from "./context.ts";

const crossings = makeSeries({ name: "crossings", unit: "vehicles", every: "P1M", start: "2015-01", values: Float64Array.from({ length: 60 }, (_, t) => t) });

describe("slider", () => {
  const given = { from: 0, to: 1, step: 0.1, at: 0.3 };
  it("is its bare number, as the text has it or as a reader moved it", async () => {
    const text = await runCell(slider, given);
    expect(slider.value?.(text)).toBe(0.3);
    const moved = await runCell(slider, given, contextOf({ name: "share", setting: 0.7000000000000001 }));
    expect(slider.value?.(moved)).toBe(0.7);
    expect(slider.show(moved, { name: "share", width: 700 })).toEqual([{ part: "control", control: "slider", label: "share", from: 0, to: 1, step: 0.1, at: 0.7, kept: 0.3 }]);
  });
  it("stands at its start unless told otherwise", async () => {
    expect((await runCell(slider, { from: 2, to: 5 })).at).toBe(2);
  });
  it.each<[Record<string, unknown>, unknown, string]>([
    [{ from: 5, to: 1 }, undefined, "`to` is 1, which lies before `from`, 5"],
    [{ from: 0, to: 1, step: 0 }, undefined, "`step` is 0; give a number above 0"],
    [{ from: 0, to: 10, at: 11 }, undefined, "`at` is 11, outside 0 to 10"],
    [{ from: 0, to: 10, at: 2.5 }, undefined, "between two settings: steps of 1 from 0 give 2 and 3"],
    [{ from: 0, to: 10 }, 99, "the setting is 99, outside 0 to 10"],
    [{ from: 0, to: 10 }, "high", 'is set to "high", and takes a number from 0 to 10'],
    [{ from: 0 }, undefined, "`slider` needs `to`"],
  ])("refuses %j set to %j in words", async (options, setting, message) => {
    await expect(runCell(slider, options, contextOf({ setting }))).rejects.toThrow(message);
  });
});

describe("choice", () => {
  it("takes the first, the kept or the moved one", async () => {
    expect((await runCell(choice, { among: ["aicc", "bic"] })).at).toBe("aicc");
    expect((await runCell(choice, { among: ["aicc", "bic"], at: "bic" })).at).toBe("bic");
    expect((await runCell(choice, { among: [1, 12], at: 12 }, contextOf({ setting: 1 }))).at).toBe(1);
    expect((await runCell(choice, { among: ["2019", "2020"] }, contextOf({ setting: 2020 }))).at).toBe("2020");
  });
  it.each<[Record<string, unknown>, unknown, string]>([
    [{ among: [] }, undefined, "empty list"],
    [{ among: Array.from({ length: 200_000 }, (_, i) => i) }, undefined, "has 200000 items; nobody chooses among more than 1000"],
    [{ among: ["a", "a"] }, undefined, '"a" twice'],
    [{ among: ["a"], at: "b" }, undefined, '`at` is "b", which is not among "a"'],
    [{ among: ["a"] }, "b", 'the setting is "b", which is not among "a"'],
    [{ among: [crossings] }, undefined, "item 1 of `among` is no text, number, true or false"],
  ])("refuses %j in words", async (options, setting, message) => {
    await expect(runCell(choice, options, contextOf({ setting }))).rejects.toThrow(message);
  });
});

describe("switch", () => {
  it("is off unless the text or the reader has it on", async () => {
    expect((await runCell(switchKind, {})).at).toBe(false);
    const moved = await runCell(switchKind, { at: false }, contextOf({ setting: true }));
    expect([switchKind.value?.(moved), moved.kept]).toEqual([true, false]);
    await expect(runCell(switchKind, {}, contextOf({ setting: 1 }))).rejects.toThrow("takes true or false");
  });
});

describe("window", () => {
  it("is its two ends and what lies between, as the series writes them", async () => {
    const part = await runCell(windowKind, { of: crossings, from: "2016", to: "2017-06" });
    expect(windowKind.value?.(part)).toEqual({ from: "2016-01", to: "2017-06", n: 18 });
    expect((await runCell(windowKind, { of: crossings })).at).toEqual({ from: "2015-01", to: "2019-12" });
  });
  it("is moved by the page's ends or by an interval of the command line", async () => {
    const page = await runCell(windowKind, { of: crossings }, contextOf({ setting: { from: "2016-03", to: "2018-02" } }));
    expect([page.at, page.kept]).toEqual([{ from: "2016-03", to: "2018-02" }, { from: "2015-01", to: "2019-12" }]);
    expect((await runCell(windowKind, { of: crossings }, contextOf({ setting: "2016/2017" }))).at).toEqual({ from: "2016-01", to: "2017-12" });
    expect((await runCell(windowKind, { of: crossings }, contextOf({ setting: "../2017" }))).at.to).toBe("2017-12");
  });
  it.each<[Record<string, unknown>, unknown, string, string | null]>([
    [{ of: crossings, from: 2016 }, undefined, "quote the date", "from"],
    [{ of: crossings, from: "2016-13" }, undefined, "2016-13 is not a date", "from"],
    [{ of: crossings, from: "2031" }, undefined, "2031 lies after the last period of crossings, 2019-12", "from"],
    [{ of: crossings, to: "2001" }, undefined, "2001 lies before the first period of crossings", "to"],
    [{ of: crossings, from: "2018", to: "2016" }, undefined, "the start comes after the end", "to"],
    [{ of: crossings }, "2016", "no interval", null],
    [{ of: crossings }, 7, "is no window", null],
    [{ of: 3 }, undefined, "expected a series", "of"],
  ])("refuses in words, at the option concerned, case %#", async (options, setting, message, option) => {
    await expect(runCell(windowKind, options, contextOf({ setting }))).rejects.toMatchObject({ message: expect.stringContaining(message) as unknown, option });
  });
});
