// Series that break careless estimation, the whole way from the file to the printed figure: a figure, or a refusal in words.

import { mkdtempSync, rmSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { afterAll, beforeAll, expect, it } from "vitest";
import { run } from "../../runtime/host/run.ts";

const noise = (i: number): number => ((i * 7919 + 104729) % 1009) / 1009 - 0.5;
const of = (n: number, f: (i: number) => number | ""): readonly (number | "")[] => Array.from({ length: n }, (_, i) => f(i));
const series: Readonly<Record<string, readonly (number | "")[]>> = {
  "constant": of(60, () => 7), "two values": of(2, i => i), "one outlier of 1e12": of(60, i => i === 30 ? 1e12 : noise(i)),
  "alternating signs": of(60, i => i % 2 === 0 ? 1 : -1), "n = p + q + 1": of(3, noise), "all missing but three": of(60, i => i % 25 === 4 ? noise(i) : ""),
  "a perfect line": of(60, i => 2 * i + 1), "integers of 1e15": of(60, i => 1e15 + Math.round(1000 * noise(i))), "a parabola": of(60, i => i * i),
  "a doubling": of(60, i => 2 ** i), "a pure swing": of(60, i => Math.sin(i * Math.PI / 6)), "a step": of(60, i => i < 30 ? 0 : 1),
  "one value at the end": of(60, i => i === 59 ? 1 : 0), "every other missing": of(60, i => i % 2 === 0 ? noise(i) : ""), "values of 1e300": of(60, i => 1e300 * (1 + noise(i) / 10)),
};
const models: readonly (readonly [string, string])[] = [
  ["y", "ar: 1\nma: 1"], ["y", "ar: 2\nma: 1\nmethod: \"restricted\""], ["d", "ma: 1"], ["sd", "ma: 1\nseason: {ma: 1}"], ["y", "ar: [1, 12]"],
  ["y", "ar: 1\nregressors: {t: ramp(\"2015-01\", \"2019-12\")}"], ["y", "ar: 1\nmethod: \"conditional\""], ["y", "ar: 2\nmethod: \"burg\""], ["y", "ar: 2\nmethod: \"leastSquares\""],
];

let folder = "";
beforeAll(() => { folder = mkdtempSync(join(tmpdir(), "lagbook-pathological-")); });
afterAll(() => { rmSync(folder, { recursive: true, force: true }); });

interface Answer { readonly cells: readonly { readonly name: string; readonly kind: string; readonly state: string; readonly message: string | null }[]; readonly numbers: readonly { readonly expression: string; readonly value: unknown; readonly message?: string | null }[] }

const fence = (head: string, body: string): string => `\`\`\`${head}\n${body}\n\`\`\`\n`;

it.each(Object.keys(series))("%s", async (name) => {
  const rows = series[name].map((v, i) => `${2015 + Math.floor(i / 12)}-${String(i % 12 + 1).padStart(2, "0")},${v}`);
  writeFileSync(join(folder, "data.csv"), `time,value\n${rows.join("\n")}\n`);
  const cells = [fence("load: y", "file: \"data.csv\""), fence("transform: d", "series: y\nsteps: [difference(1)]"), fence("transform: sd", "series: d\nsteps: [difference(12)]"),
    ...models.flatMap(([of, options], i) => [fence(`fit: m${i}`, `series: ${of}\n${options}`), fence(`forecast: f${i}`, `model: m${i}\nhorizon: 3`)])];
  const figures = models.flatMap((_, i) => ["sigma2", "logLikelihood", "constant", "mean"].map(field => `[0](<=m${i}.${field}>)`).concat(`[0](<=f${i}.mean[2]>)`));
  writeFileSync(join(folder, "book.md"), `${cells.join("\n")}\n${figures.join(" ")}\n`);
  let out = "";
  await run(["verify", "--json", "book.md"], { out: (part) => { out += part; }, error: (part) => { out += part; }, cwd: folder, now: () => new Date(0), stop: new AbortController().signal });
  const answer = JSON.parse(out) as Answer;
  for (const cell of answer.cells) {
    expect(["current", "failed", "blocked"], cell.name).toContain(cell.state);
    if (cell.state !== "failed") continue;
    expect(cell.message, cell.name).toMatch(/.{25,}/);
    expect(cell.message, cell.name).not.toMatch(/NaN|undefined|Infinity|\[object|TypeError|is not a function/);
  }
  const stateOf = (expression: string) => answer.cells.find(cell => expression.startsWith(`${cell.name}.`))?.state;
  for (const { expression, value, message } of answer.numbers) {
    if (typeof value === "number") expect(Number.isFinite(value), expression).toBe(true);
    // No figure from a cell that stands: the likelihood of estimates outside the region, and then the number says why.
    else if (stateOf(expression) === "current") expect(message, expression).toMatch(/outside the region of stationarity/);
  }
}, 30_000);
