import { readdirSync, readFileSync } from "node:fs";
import { dirname, join, relative, resolve } from "node:path";
import { describe, expect, it } from "vitest";

// The import lines of the source, held against the table in DEVELOPERS.md, so that the picture there stays true.

const top = resolve(import.meta.dirname, "..");

interface Row { readonly room: string; readonly mayImport: readonly string[]; readonly doors: ReadonlyMap<string, readonly string[]> }

/** Reads the table that starts `| room | may import | outside packages (door) |`. */
function readTable(): readonly Row[] {
  const lines = readFileSync(join(top, "DEVELOPERS.md"), "utf8").split("\n");
  const start = lines.findIndex((line) => line.startsWith("| room | may import |"));
  if (start < 0) throw new Error("DEVELOPERS.md has no import table");
  const rows: Row[] = [];
  for (const line of lines.slice(start + 2)) {
    if (!line.startsWith("|")) break;
    const [room, may, outside] = line.split("|").slice(1).map((cell) => cell.trim());
    const doors = new Map<string, string[]>();
    for (const [, name, files] of outside.matchAll(/`([^`]+)` \(([^)]+)\)/g)) doors.set(name, files.split(",").map((f) => f.trim().replaceAll("`", "")));
    rows.push({ room: room.replaceAll("`", ""), mayImport: [...may.matchAll(/`([^`]+)`/g)].map((m) => m[1]), doors });
  }
  return rows;
}

function filesIn(folder: string): string[] {
  return readdirSync(folder, { withFileTypes: true }).flatMap((entry) => {
    const path = join(folder, entry.name);
    if (entry.isDirectory()) return filesIn(path);
    return entry.name.endsWith(".ts") && !entry.name.endsWith(".d.ts") ? [path] : [];
  });
}

/** What an import or re-export line names between its keyword and its source. */
const named = String.raw`(?:\{[^}]*\}|\*(?:\s+as\s+\w+)?|\w+)(?:\s*,\s*\{[^}]*\})?\s*from\s*`;

/** The sources of a file's imports; of those alone that stand when the program runs, without the types. */
function importsOf(file: string, only: "all" | "values" = "all"): string[] {
  const text = readFileSync(file, "utf8");
  const type = only === "all" ? String.raw`(?:type\s+)?` : String.raw`(?!type\s)`;
  const lines = new RegExp(String.raw`^(?:import|export)\s+${type}(?:${named})?"([^"]+)"`, "gm");
  return [...text.matchAll(lines), ...text.matchAll(/\bimport\("([^"]+)"\)/g)].map((match) => match[1]);
}

/** Whether a package is what a pattern of the table says: a name, a name's own parts, or a beginning ("node:", "@stdlib/*"). */
function enters(name: string, pattern: string): boolean {
  return name === pattern || name.startsWith(`${pattern}/`) || (/[*:]$/.test(pattern) && name.startsWith(pattern.replace("*", "")));
}

/** Whether a file is the door, or stands in the folder that is. */
function stands(path: string, room: string, door: string): boolean {
  return door === "anywhere" || path.endsWith(`/${door}`) || path.startsWith(`${room}/${door}`);
}

const source = ["stdlib", "cells", "runtime"].flatMap((room) => filesIn(join(top, room)));
const graph = new Map(source.map((file) => [file, importsOf(file)]));

describe("rooms", () => {
  const rows = readTable();
  const rowOf = (file: string): Row | undefined => {
    const path = relative(top, file);
    return rows.filter((row) => path.startsWith(`${row.room}/`)).sort((a, b) => b.room.length - a.room.length)[0];
  };

  it("every source file stands in a room of the table", () => {
    expect(source.filter((file) => !rowOf(file)).map((file) => relative(top, file))).toEqual([]);
  });

  it("a room imports only what its row allows", () => {
    const wrong: string[] = [];
    for (const [file, imports] of graph) {
      const row = rowOf(file);
      for (const name of imports.filter((n) => n.startsWith("."))) {
        const target = relative(top, resolve(dirname(file), name));
        const inside = row !== undefined && target.startsWith(`${row.room}/`);
        if (!inside && !row?.mayImport.some((allowed) => target === allowed || target.startsWith(allowed.endsWith("/") ? allowed : `${allowed}/`))) wrong.push(`${relative(top, file)} -> ${target}`);
      }
    }
    expect(wrong).toEqual([]);
  });

  it("an outside package enters by its own door", () => {
    const wrong: string[] = [];
    for (const [file, imports] of graph) {
      const row = rowOf(file);
      for (const name of imports.filter((n) => !n.startsWith("."))) {
        const doors = [...(row?.doors ?? [])].filter(([pattern]) => enters(name, pattern));
        const path = relative(top, file);
        if (!doors.some(([, files]) => files.some((door) => stands(path, row?.room ?? "", door)))) wrong.push(`${path} -> ${name}`);
      }
    }
    expect(wrong).toEqual([]);
  });

  it("the table allows nothing that no file makes use of", () => {
    const unused: string[] = [];
    for (const { room, mayImport, doors } of rows) {
      const files = source.filter((file) => rowOf(file)?.room === room);
      const targets = files.flatMap((file) => (graph.get(file) ?? []).map((name) => ({ path: relative(top, file), target: name.startsWith(".") ? relative(top, resolve(dirname(file), name)) : name })));
      for (const allowed of mayImport) if (!targets.some(({ target }) => target === allowed || target.startsWith(`${allowed}/`))) unused.push(`${room}: ${allowed}`);
      for (const [pattern, doorFiles] of doors) {
        for (const door of doorFiles) if (!targets.some(({ path, target }) => enters(target, pattern) && stands(path, room, door))) unused.push(`${room}: ${pattern} in ${door}`);
      }
    }
    expect(unused).toEqual([]);
  });

  it("imports run in no circle", () => {
    const done = new Set<string>();
    const circles: string[] = [];
    const visit = (file: string, trail: readonly string[]): void => {
      if (trail.includes(file)) { circles.push([...trail.slice(trail.indexOf(file)), file].map((f) => relative(top, f)).join(" -> ")); return; }
      if (done.has(file)) return;
      for (const name of importsOf(file, "values").filter((each) => /^\..*\.ts$/.test(each))) visit(resolve(dirname(file), name), [...trail, file]);
      done.add(file);
    };
    for (const file of source) visit(file, []);
    expect(circles).toEqual([]);
  });
});
