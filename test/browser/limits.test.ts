import { spawn, spawnSync } from "node:child_process";
import { mkdtempSync, rmSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { afterEach, beforeEach, describe, expect, it } from "vitest";
import { command, data, notebook } from "./deskOpen.ts";

// The built command on notebooks that do not end or do not fit: it ends them, says which cell was at work, and leaves nothing running.

let folder = "";
beforeEach(() => { folder = mkdtempSync(join(tmpdir(), "lagbook-limits-")); writeFileSync(join(folder, "sold.csv"), data); });
afterEach(() => { rmSync(folder, { recursive: true, force: true }); });

function lagbook(text: string, ...argv: readonly string[]): { readonly code: number | null; readonly out: string; readonly error: string } {
  writeFileSync(join(folder, "n.md"), text);
  const { status, stdout, stderr } = spawnSync(process.execPath, [command, ...argv], { cwd: folder, encoding: "utf8", timeout: 50_000, killSignal: "SIGKILL" });
  return { code: status, out: stdout, error: stderr };
}

const endless = "# E\n\n```script: forever\nwhile (true) {}\nexport const a = 1;\n```\n\n```values: v\nx: a\n```\n";
/** Each cell is within what one expression may do; together they take minutes. */
const heavy = `# H\n${Array.from({ length: 400 }, (_, i) => `\n\`\`\`values: v${i}\nx: range(1, 900000).map(a => a + ${i}).filter(a => a > 0).reduce((a, b) => a + b, 0)\n\`\`\`\n`).join("")}`;

describe("the limits of a computation", () => {
  it("are never met by an ordinary notebook, whose result is whole", () => {
    const { code, out } = lagbook(notebook, "verify", "--json", "n.md");
    expect(code).toBe(0);
    expect(JSON.parse(out)).toMatchObject({ ok: true, numbers: [{ saved: "60", agrees: true }, { saved: "2", agrees: true }] });
    expect(lagbook(notebook, "verify", "n.md", "--set", "gone=1")).toMatchObject({ code: 2, error: expect.stringContaining("no control of that name") });
  });

  it("end a computation that goes on, with the cell that was at work and exit code 2", () => {
    const { code, out, error } = lagbook(heavy, "verify", "n.md", "--seconds", "4");
    expect(error).toMatch(/^lagbook: n\.md was not computed after 4 s and was stopped; at work was the values v\d+ in line \d+\. If it needs more, allow it with --seconds NUMBER\.\n$/);
    expect([code, out]).toEqual([2, ""]);
  });

  it("end a script that does not, and its process", async () => {
    writeFileSync(join(folder, "n.md"), endless);
    const child = spawn(process.execPath, [command, "verify", "--allow-code", "n.md", "--seconds", "6"], { cwd: folder, stdio: ["ignore", "ignore", "pipe"] });
    let error = "";
    child.stderr.on("data", (bytes: Buffer) => { error += bytes.toString(); });
    const ended = new Promise<number | null>((done) => { child.once("exit", done); });
    const children = (): string => spawnSync("ps", ["-o", "pid=", "--ppid", String(child.pid)], { encoding: "utf8" }).stdout.trim();
    await expect.poll(children).not.toBe("");
    const script = children();
    expect(await ended).toBe(2);
    expect(error).toMatch(/n\.md was not computed after 6 s and was stopped; at work was the script forever in line 3/);
    await expect.poll(() => spawnSync("ps", ["-o", "pid=", "-p", script], { encoding: "utf8" }).stdout.trim()).toBe("");
  });

  it("end a computation that takes too much memory, for a page as for a verification", () => {
    const objects = `# O\n${Array.from({ length: 30 }, (_, i) => `\n\`\`\`values: v${i}\nx: range(1, 900000).map(a => ({a: a}))\n\`\`\`\n`).join("")}`;
    const { code, error } = lagbook(objects, "verify", "n.md", "--megabytes", "150");
    expect(error).toMatch(/^lagbook: n\.md took more than 150 MB of memory and was stopped.*--megabytes NUMBER/);
    expect(code).toBe(2);
    expect(lagbook(objects, "page", "n.md", "--megabytes", "150")).toMatchObject({ code: 2, error: expect.stringContaining("150 MB") });
  });
});
