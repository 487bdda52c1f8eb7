import { mkdtempSync, rmSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { afterAll, describe, expect, it } from "vitest";
import { recognise } from "../../../runtime/host/recognise.ts";

const folder = mkdtempSync(join(tmpdir(), "lagbook-"));
afterAll(() => { rmSync(folder, { recursive: true, force: true }); });

/** What is recognised in a monthly file whose value column bears this header. */
function recognised(header: string) {
  const rows = Array.from({ length: 24 }, (_, t) => `20${20 + Math.floor(t / 12)}-${String((t % 12) + 1).padStart(2, "0")},${100 + t}`);
  writeFileSync(join(folder, "ridership.csv"), `month,${header}\n${rows.join("\n")}\n`);
  return recognise(folder, "ridership.csv");
}

describe("recognise", () => {
  it("names the series after its column, and takes the unit in brackets", async () => {
    expect(await recognised("Tickets sold (thousands)")).toMatchObject({ name: "ticketsSold", unit: "thousands", every: "P1M" });
  });

  it.each(["Public", "Package", "Interface", "Arguments", "New", "Fit", "Slider", "Constructor", "Free"])("names it after the file where the column's word is kept by the language: %s", async (header) => {
    expect((await recognised(header)).name).toBe("ridership");
  });
});
