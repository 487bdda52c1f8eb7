import { mkdirSync, mkdtempSync, rmSync, symlinkSync, writeFileSync } from "node:fs";
import { execFileSync } from "node:child_process";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { NoFile, readInside } from "../../../runtime/host/folder.ts";

let top = "", home = "";
beforeAll(() => {
  top = mkdtempSync(join(tmpdir(), "lagbook-folder-"));
  home = join(top, "home");
  mkdirSync(join(home, "data"), { recursive: true });
  writeFileSync(join(top, "secret.csv"), "a\n1\n");
  mkdirSync(join(top, "home-not"));
  writeFileSync(join(top, "home-not", "near.csv"), "a\n1\n");
  writeFileSync(join(home, "data", "ferry.csv"), "month,n\n");
  symlinkSync(join(top, "secret.csv"), join(home, "link.csv"));
  symlinkSync(top, join(home, "up"));
  symlinkSync("data/ferry.csv", join(home, "inside.csv"));
  symlinkSync("loop.csv", join(home, "loop.csv"));
  execFileSync("mkfifo", [join(home, "pipe.csv")]);
});
afterAll(() => { rmSync(top, { recursive: true, force: true }); });

const refused = async (file: string): Promise<string> => {
  const error: unknown = await readInside(home, file).then(() => null, (e: unknown) => e);
  expect(error, `${file} was read`).toBeInstanceOf(NoFile);
  return error instanceof Error ? error.message : "";
};

describe("readInside", () => {
  it("reads a file of the folder, of a folder in it, and through a link that stays inside", async () => {
    for (const file of ["data/ferry.csv", "./data/ferry.csv", "inside.csv"]) expect(new TextDecoder().decode(await readInside(home, file))).toBe("month,n\n");
  });

  it("refuses every way out of the folder, and says what to do instead", async () => {
    for (const file of ["../secret.csv", "data/../../secret.csv", "/etc/hostname", "C:\\data.csv", "\\\\host\\x.csv", "up/secret.csv", "link.csv", "up/home-not/near.csv"]) {
      expect(await refused(file)).toMatch(/inside its own folder/);
    }
  });

  it("asks for slashes where backslashes were written", async () => { expect(await refused("data\\ferry.csv")).toContain('"data/ferry.csv"'); });

  it("refuses an address on a network", async () => { expect(await refused("https://a.example/x.csv")).toMatch(/network.*save the file/s); });

  it("names the data files that are there when one is not", async () => { expect(await refused("data/fery.csv")).toContain('"data/ferry.csv"'); });

  it("refuses a folder, a pipe, a link to itself, an empty name, a zero byte", async () => {
    expect(await refused("data")).toMatch(/is a folder.*data\/ferry\.csv/);
    expect(await refused("pipe.csv")).toMatch(/not an ordinary file/);
    expect(await refused("loop.csv")).toMatch(/circle/);
    expect(await refused("  ")).toMatch(/empty/);
    expect(await refused("a\0b")).toMatch(/code 0/);
  });
});
