import { cpSync, mkdtempSync, rmSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { run } from "../../runtime/host/run.ts";
import { notebookOf } from "./referenceCases.ts";
import { centredTime, readCases, Unsupported } from "./referenceNotebook.ts";
import type { Case, Check } from "./referenceNotebook.ts";

// Every reference value that the language has a word for, asked for by a live number and answered by `verify --json`:
// the whole way from the file's text to the printed figure. test/reference/README.md says where the values come from.

let folder = "";
beforeAll(() => {
  folder = mkdtempSync(join(tmpdir(), "lagbook-reference-"));
  cpSync(join(import.meta.dirname, "../reference/series"), join(folder, "series"), { recursive: true });
  for (const item of files.flatMap(readCases)) for (const regressor of item.inputs.model?.regressors ?? []) {
    if (regressor.kind !== "timeCentred") continue;
    const { file, text } = centredTime(item.series as string, regressor.centre as number);
    writeFileSync(join(folder, file), text);
  }
});
afterAll(() => { rmSync(folder, { recursive: true, force: true }); });

interface Answer { readonly cells: readonly { readonly name: string | null; readonly state: string; readonly message: string | null }[]; readonly numbers: readonly { readonly expression: string; readonly value: number | null }[] }

async function answer(item: Case, text: string): Promise<Answer> {
  const file = `${item.id.replaceAll(/[^\w-]/g, "_")}.md`;
  writeFileSync(join(folder, file), text);
  let out = "";
  await run(["verify", "--json", file], { out: (part) => { out += part; }, error: (part) => { out += part; }, cwd: folder, now: () => new Date(0), stop: new AbortController().signal });
  return JSON.parse(out) as Answer;
}

const misses = (check: Check, value: number | null): string | null => {
  if (value === null) return `${check.expression}: no value, expected ${check.expected}`;
  const off = check.larger && value > check.expected ? 0 : Math.abs(value - check.expected);
  return off <= check.within ? null : `${check.expression}: ${value}, expected ${check.expected} within ${check.within}`;
};

const files = ["acf.json", "unitroot.json", "diagnostics.json", "arima_loglik.json", "arima_ml.json", "ar_css.json", "arma_theory.json", "forecast.json", "accuracy.json", "smoothing.json"];

describe.each(files)("verify --json gives the values of %s", (file) => {
  const skipped: string[] = [];
  for (const item of readCases(file)) {
    let written: ReturnType<typeof notebookOf>;
    try { written = notebookOf(item); } catch (error) {
      if (!(error instanceof Unsupported)) throw error;
      skipped.push(`${item.id}: ${error.message}`);
      continue;
    }
    it(item.id, async () => {
      const { text, checks } = written;
      expect(checks.length).toBeGreaterThan(0);
      const { cells, numbers } = await answer(item, text);
      expect(cells.filter((cell) => cell.state !== "current")).toEqual([]);
      expect(numbers.map((number) => number.expression)).toEqual(checks.map((check) => check.expression));
      expect(checks.map((check, i) => misses(check, numbers[i].value)).filter((miss) => miss !== null)).toEqual([]);
    });
  }
  for (const each of skipped) it.skip(each, () => {});
});
