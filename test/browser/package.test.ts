import { execFileSync, spawnSync } from "node:child_process";
import { mkdtempSync, readFileSync, rmSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { join, resolve } from "node:path";
import { afterAll, beforeAll, describe, expect, it } from "vitest";

// The package as somebody gets it: packed, installed into an empty folder, used from there.

const top = resolve(import.meta.dirname, "../..");
let folder = "";
let command = "";

beforeAll(() => {
  folder = mkdtempSync(join(tmpdir(), "lagbook-package-"));
  // The build has just been made; packing must not start another.
  const packed = JSON.parse(execFileSync("npm", ["pack", "--json", "--ignore-scripts", "--pack-destination", folder], { cwd: top, encoding: "utf8" }));
  const [{ filename }] = Array.isArray(packed) ? packed : (Object.values(packed) as [{ filename: string }]);
  writeFileSync(join(folder, "package.json"), "{}");
  execFileSync("npm", ["install", "--offline", "--no-audit", "--no-fund", join(folder, filename)], { cwd: folder, stdio: "pipe" });
  command = join(folder, "node_modules/.bin/lagbook");
}, 120_000);
afterAll(() => { rmSync(folder, { recursive: true, force: true }); });

const lagbook = (...args: readonly string[]): { readonly code: number | null; readonly out: string; readonly error: string } => {
  const { status, stdout, stderr } = spawnSync(command, args, { cwd: folder, encoding: "utf8" });
  return { code: status, out: stdout, error: stderr };
};

describe("the installed package", () => {
  it("explains itself", () => {
    const { code, out } = lagbook("--help");
    expect(code).toBe(0);
    for (const word of ["begin", "open", "verify", "page"]) expect(out).toContain(word);
  });

  it("brings no dependency and a licence", () => {
    const own = JSON.parse(readFileSync(join(folder, "node_modules/lagbook/package.json"), "utf8"));
    expect(own.dependencies ?? {}).toEqual({});
    expect(own.license).toBe("MIT");
  });

  it("begins a notebook for a data file, verifies it and writes its page", () => {
    const rows = Array.from({ length: 96 }, (_, i) => `${2016 + Math.floor(i / 12)}-${String((i % 12) + 1).padStart(2, "0")},${(200 + i + 30 * Math.sin((i * Math.PI) / 6) + ((i * 7919) % 17)).toFixed(1)}`);
    writeFileSync(join(folder, "demand.csv"), ["month,demand", ...rows].join("\n"));
    expect(lagbook("begin", "demand.csv")).toMatchObject({ code: 0 });
    const verified = lagbook("verify", "--json", "demand.md");
    expect(verified.code, verified.out + verified.error).toBe(0);
    expect(JSON.parse(verified.out).ok).toBe(true);
    expect(lagbook("page", "demand.md")).toMatchObject({ code: 0 });
    const page = readFileSync(join(folder, "demand.html"), "utf8");
    expect(page).toContain("Content-Security-Policy");
    expect(page).toContain("<svg");
    expect(page.replace(/http:\/\/www\.w3\.org\/[\w/]+/g, "")).not.toMatch(/(?:src|href)="https?:/);
  });
});
