import { existsSync, mkdtempSync, readFileSync, rmSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { afterEach, beforeEach, describe, expect, it } from "vitest";
import type { Io } from "../../../runtime/host/io.ts";
import { run } from "../../../runtime/host/run.ts";

// What `begin` makes of data files as people have them: the notebook verifies clean, and says what an analyst would.

let folder = "";
beforeEach(() => { folder = mkdtempSync(join(tmpdir(), "lagbook-begin-")); });
afterEach(() => { rmSync(folder, { recursive: true, force: true }); });

async function lagbook(...argv: readonly string[]): Promise<{ readonly code: number; readonly out: string; readonly error: string }> {
  const said = { out: "", error: "" };
  const io: Io = { out: (text) => { said.out += text; }, error: (text) => { said.error += text; }, cwd: folder, now: () => new Date("2026-01-02T03:04:05Z"), stop: AbortSignal.abort() };
  return { code: await run(argv, io), ...said };
}

const two = (n: number): string => String(n).padStart(2, "0");
const day = (i: number): Date => new Date(Date.UTC(2018, 0, 1 + i));
const value = (i: number, period: number): string => (200 + 30 * Math.sin((2 * Math.PI * i) / period) + ((i * 7919) % 17)).toFixed(1);
const lines = (n: number, line: (i: number) => string): string[] => Array.from({ length: n }, (_, i) => line(i));

/** Writes the file, begins a notebook, verifies it. */
async function begun(name: string, rows: readonly string[]): Promise<{ readonly said: string; readonly text: string }> {
  writeFileSync(join(folder, name), rows.join("\n"));
  const { code, out, error } = await lagbook("begin", name);
  expect(code, error).toBe(0);
  const notebook = name.replace(/\.\w+$/, ".md");
  const verified = await lagbook("verify", notebook);
  expect(verified.code, verified.out).toBe(0);
  return { said: out.split("\n")[0], text: readFileSync(join(folder, notebook), "utf8") };
}

describe("begin recognises", () => {
  it("hours, with their article, and the unit in a header", async () => {
    const { said, text } = await begun("mill.csv", ["time,Load (MW)", ...lines(96, (i) => `${day(Math.floor(i / 24)).toISOString().slice(0, 10)}T${two(i % 24)}:00,${value(i, 24)}`)]);
    expect(said).toBe("mill.md written: mill, one value an hour.");
    expect(text).toContain('unit: "MW"\n');
    expect(text).toContain("has times in `time`, one value an hour;");
  }, 60_000);

  it("a row a year with a column a month", async () => {
    const { said, text } = await begun("wide.csv", ["year,Jan,Feb,Mar,Apr,May,Jun,Jul,Aug,Sep,Oct,Nov,Dec", ...lines(6, (y) => `${2015 + y},${lines(12, (m) => value(12 * y + m, 12)).join(",")}`)]);
    expect(said).toBe("wide.md written: wide, one value a month.");
    expect(text).toMatch(/The series has \[72\]\(=wide\.n\) months, from \[2015-01\]/);
  }, 60_000);

  it("working days, which it numbers, five a week", async () => {
    const { said, text } = await begun("shop.csv", ["date,sold", ...lines(105, (k) => `${day(7 * Math.floor(k / 5) + (k % 5)).toISOString().slice(0, 10)},${value(k, 5)}`)]);
    expect(said).toBe("shop.md written: sold, numbered values, 5 a week.");
    expect(text).toContain('value: "sold"\nstart: "1"\n');
    expect(text).toContain("rule.seasonalNaive(sold, 5)");
  }, 60_000);

  it("the order of day and month, where only one gives evenly spaced times", async () => {
    const { text } = await begun("fees.csv", ["date,fees", ...lines(36, (i) => `01/${two((i % 12) + 1)}/${2018 + Math.floor(i / 12)},${value(i, 12)}`)]);
    expect(text).toContain('order: "day-month"\n');
    expect(text).toContain("only with the day first are they evenly spaced, and `order` says so");
  }, 60_000);

  it("what the data cannot answer, and says so once", async () => {
    const { text } = await begun("flat.csv", ["month,fee", ...lines(48, (i) => `${2018 + Math.floor(i / 12)}-${two((i % 12) + 1)},7`)]);
    expect(text).toMatch(/## Left out\n\n.*\n\n- No tests, autocorrelations, comparison of orders or model: steady is constant: [^\n]*\n$/);
  }, 60_000);

  it("where a printed table ends, only a bound of the p-value", async () => {
    const { text } = await begun("steady.csv", ["month,v", ...lines(80, (i) => `${2012 + Math.floor(i / 12)}-${two((i % 12) + 1)},${(i * 7919) % 101}`)]);
    expect(text).toContain("(p [>0.10](=tests.kpss.p))");
  }, 60_000);
});

describe("begin claims no more than was shown", () => {
  const tickets = [49, 54, 64, 76, 68, 62, 61, 58, 51, 50, 51, 57, 64, 73, 75, 75, 71, 70, 59, 64, 58, 60, 54, 61, 64, 65, 65, 63, 72, 71];

  it("of a model that is ahead at few origins: that it is ahead, not that it beats the rules", async () => {
    const { text } = await begun("tickets.csv", ["month,tickets", ...tickets.map((x, i) => `${2021 + Math.floor((i + 3) / 12)}-${two(((i + 3) % 12) + 1)},${x}`)]);
    expect(text).toContain('"No naive rule has a smaller error at the held-out origins": contest.best.label === "the model"\n');
    expect(text).toContain("What follows is not shown by these data, and so it is not claimed: the model beats the naive rules by more than chance (5%).");
    expect(text).toContain("The KPSS test does not reject a steady level (5%), and no step is taken.");
    expect(text).not.toContain("Forecasts come back through these steps");
    expect(text).toContain("(p [0.015](=tests.adf.p))");
  }, 60_000);

  it("of a series with gaps: that its level was not tested", async () => {
    const { text } = await begun("gaps.csv", ["month,tickets", ...lines(60, (i) => `${2016 + Math.floor(i / 12)}-${two((i % 12) + 1)},${i % 23 === 9 ? "" : 500 + ((i * 7919) % 101)}`)]);
    expect(text).toContain("Whether the level wanders was not tested, since the KPSS test gives no answer for these data");
    expect(text).not.toContain("does not reject a steady level");
  }, 60_000);

  it("of a small p-value: its bound", async () => {
    const { text } = await begun("noise.csv", ["year,v", ...lines(80, (i) => `${1940 + i},${(i * i * i * 7919) % 101}`)]);
    expect(text).toContain("(p [<0.001](=tests.adf.p))");
  }, 60_000);

  it("of the logarithms: the measure that led to them", async () => {
    const { text } = await begun("growth.csv", ["month,v", ...lines(80, (i) => `${2012 + Math.floor(i / 12)}-${two((i % 12) + 1)},${(Math.exp(i / 40) * (100 + ((i * 7919) % 101))).toFixed(1)}`)]);
    expect(text).toMatch(/goes with the level, \[-?\d\.\d\d\]\(<=estimateLambda\(growth, "guerrero"\)>\), is nearer to 0/);
  }, 60_000);
});

describe("begin refuses in words", () => {
  it.each<[string, readonly string[], RegExp]>([
    ["dates that may be read either way", ["date,v", "01/02/2020,1", "01/05/2020,2", "03/06/2020,7"], /may be day first or month first[^]*write the dates as 2019-03-05/],
    ["several series below one another", ["month,region,v", "2020-01,north,1", "2020-01,south,2", "2020-02,north,3", "2020-02,south,4"], /several series below one another/],
    ["percentages", ["month,share", "2020-01,20%", "2020-02,21%"], /"20%" is no plain number/],
    ["a sum at the end", ["month,v", "2020-01,1", "2020-02,2", "Total,3"], /line 4: "Total" is not a time/],
    ["rows that contradict each other", ["month,v", "2020-01,1", "2020-02,2", "2020-01,3"], /lines 2 and 4 both give 2020-01/],
    ["nothing but a header", ["month,v"], /has a header and no rows/],
  ])("%s", async (_, rows, message) => {
    writeFileSync(join(folder, "bad.csv"), rows.join("\n"));
    const { code, out, error } = await lagbook("begin", "bad.csv");
    expect([code, out]).toEqual([2, ""]);
    expect(error).toMatch(message);
    expect(existsSync(join(folder, "bad.md"))).toBe(false);
  }, 60_000);
});
