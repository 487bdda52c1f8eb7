import { spawnSync } from "node:child_process";
import { chmodSync, chownSync, lstatSync, mkdirSync, mkdtempSync, readFileSync, readdirSync, rmSync, statSync, symlinkSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { build } from "esbuild";
import { afterEach, beforeEach, describe, expect, it } from "vitest";
import { writeWhole } from "../../../runtime/host/write.ts";

let folder = "", path = "";
beforeEach(() => { folder = mkdtempSync(join(tmpdir(), "lagbook-write-")); path = join(folder, "n.md"); });
afterEach(() => { rmSync(folder, { recursive: true, force: true }); });

const superuser = process.getuid?.() === 0;

/** Writes a long text over an old one, in a process of its own.
 *  @param kB  no file may grow above it: what a full disk does, half-way through */
async function writeElsewhere(kB: number | "unlimited", still: string): Promise<string> {
  const program = join(folder, "program.mjs"), place = join(folder, "place"), file = join(place, "n.md");
  mkdirSync(place);
  writeFileSync(file, "the old text");
  const contents = `import { writeWhole } from ${JSON.stringify(join(import.meta.dirname, "../../../runtime/host/write.ts"))};
    process.on("SIGXFSZ", () => undefined);
    console.log(await writeWhole(${JSON.stringify(file)}, "new ".repeat(5000), ${still}).then(() => "written", (error) => error.message));`;
  await build({ stdin: { contents, resolveDir: folder, loader: "ts" }, outfile: program, bundle: true, platform: "node", format: "esm", logLevel: "error" });
  return spawnSync("bash", ["-c", `ulimit -f ${kB}; exec "${process.execPath}" "${program}" | cat`], { encoding: "utf8" }).stdout;
}

describe("writeWhole", () => {
  it("replaces a text and keeps mode, links and what stands beside it", async () => {
    writeFileSync(join(folder, "real.md"), "old");
    chmodSync(join(folder, "real.md"), 0o640);
    symlinkSync("real.md", path);
    expect(await writeWhole(path, "new")).toBe(true);
    expect(readFileSync(join(folder, "real.md"), "utf8")).toBe("new");
    expect(statSync(join(folder, "real.md")).mode & 0o777).toBe(0o640);
    expect(lstatSync(path).isSymbolicLink()).toBe(true);
    expect(readdirSync(folder).sort()).toEqual(["n.md", "real.md"]);
  });

  it.skipIf(!superuser)("keeps the owner, where the writer may give files away", async () => {
    writeFileSync(path, "old");
    chownSync(path, 1234, 4321);
    await writeWhole(path, "new");
    expect(statSync(path)).toMatchObject({ uid: 1234, gid: 4321 });
  });

  it("writes a new file as any program would, and nothing where it is told not to at the last moment", async () => {
    await writeWhole(path, Uint8Array.of(1, 2));
    expect([...readFileSync(path)]).toEqual([1, 2]);
    writeFileSync(join(folder, "plain"), "");
    expect(statSync(path).mode).toBe(statSync(join(folder, "plain")).mode);
    expect(await writeWhole(path, "other", () => false)).toBe(false);
    expect([...readFileSync(path)]).toEqual([1, 2]);
    expect(readdirSync(folder).sort()).toEqual(["n.md", "plain"]);
  });

  it("leaves the old text whole where there is no room for the new one, and says so", async () => {
    expect(await writeElsewhere(1, "() => true")).toMatch(/could not be written: files may not grow as large here\. Nothing was changed\./);
    expect(readFileSync(join(folder, "place", "n.md"), "utf8")).toBe("the old text");
    expect(readdirSync(join(folder, "place"))).toEqual(["n.md"]);
  });

  it("leaves the old text whole where the writer is killed before the end", async () => {
    expect(await writeElsewhere("unlimited", "() => { process.kill(process.pid, 'SIGKILL'); return true; }")).toBe("");
    expect(readFileSync(join(folder, "place", "n.md"), "utf8")).toBe("the old text");
  });

  it("says in words why it could not write", async () => {
    await expect(writeWhole(join(folder, "no", "n.md"), "x")).rejects.toThrow(`there is no folder ${join(folder, "no")}. Nothing was changed.`);
    await expect(writeWhole(folder, "x")).rejects.toThrow("it is a folder");
    expect(readdirSync(folder)).toEqual([]);
  });
});
