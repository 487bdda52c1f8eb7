import { beforeEach, describe, expect, it } from "vitest";
import { joined } from "../../../runtime/desk/choose.ts";
import { drafts } from "../../../runtime/desk/drafts.ts";
import type { Saved, Stored } from "../../../runtime/desk/files.ts";
import { Keeper } from "../../../runtime/desk/keeper.ts";
import type { Told } from "../../../runtime/desk/keeper.ts";
import type { Region } from "../../../runtime/desk/merge.ts";
import { applyEdits } from "../../../runtime/text/edits.ts";

/** A disk with one file, a storage, an editor: plain values in the place of the real ones. */
class World {
  disk: string | null;
  text: string;
  told: Told[] = [];
  changes = 0;
  choice: (regions: readonly Region[]) => string | null = () => { throw new Error("nobody should have been asked"); };
  readonly storage = new Map<string, string>();
  keeper: Keeper;

  constructor(text: string) { this.disk = text; this.text = text; this.keeper = this.open("tab one"); }

  open(tab: string): Keeper {
    const stored = (): Stored => ({ text: this.disk ?? "", hash: `hash of ${this.disk}` });
    const storage = this.storage;
    return new Keeper({
      base: stored(), now: () => 1000, tell: (told) => { this.told.push(told); },
      files: {
        open: async () => ({ ...stored(), name: "n.md", path: "/n.md" }),
        save: async (text, seen): Promise<Saved> => {
          if ((this.disk === null ? null : stored().hash) !== seen) return { found: this.disk === null ? null : stored() };
          this.disk = text;
          return { hash: stored().hash };
        },
      },
      drafts: drafts({ getItem: (key) => storage.get(key) ?? null, setItem: (key, value) => { storage.set(key, value); }, removeItem: (key) => { storage.delete(key); }, key: (i) => [...storage.keys()][i] ?? null, get length() { return storage.size; } }, "/n.md", tab),
      editor: { text: () => this.text, change: (edits) => { this.changes++; this.text = applyEdits(this.text, edits); } },
      choose: async (regions) => this.choice(regions),
    });
  }

  type(text: string): void { this.text = text; this.keeper.changed(); }
  heard(told: Told["told"]): boolean { return this.told.some((it) => it.told === told); }
  draftOf(tab: string) { return drafts({ getItem: (key) => this.storage.get(key) ?? null, setItem: () => undefined, removeItem: () => undefined, key: (i) => [...this.storage.keys()][i] ?? null, length: this.storage.size }, "/n.md", tab).find(() => false); }
}

let world: World;
beforeEach(() => { world = new World("a\nb\nc\nd\ne\n"); });

describe("the keeper of a text", () => {
  it("saves what the editor holds and is clean again", async () => {
    world.type("a\nB\nc\nd\ne\n");
    expect(world.keeper.dirty).toBe(true);
    expect(await world.keeper.save()).toBe(true);
    expect(world.disk).toBe("a\nB\nc\nd\ne\n");
    expect(world.keeper.dirty).toBe(false);
    expect(world.storage.size).toBe(0);
  });

  it("reads the file again where nothing was typed", async () => {
    world.disk = "a\nb\nc\nd\nE\n";
    await world.keeper.onDisk("another");
    expect(world.text).toBe(world.disk);
    expect(world.keeper.dirty).toBe(false);
    expect(world.heard("reread")).toBe(true);
  });

  it("puts changes of different places together, as one change of the text", async () => {
    world.type("A\nb\nc\nd\ne\n");
    world.disk = "a\nb\nc\nd\nE\n";
    await world.keeper.onDisk("another");
    expect(world.text).toBe("A\nb\nc\nd\nE\n");
    expect(world.changes).toBe(1);
    expect(world.keeper.dirty).toBe(true);
    expect(world.disk).toBe("a\nb\nc\nd\nE\n");
    await world.keeper.save();
    expect(world.disk).toBe("A\nb\nc\nd\nE\n");
  });

  it("merges on saving when the change on disk was not heard of, and saves both", async () => {
    world.type("A\nb\nc\nd\ne\n");
    world.disk = "a\nb\nc\nd\nE\n";
    expect(await world.keeper.save()).toBe(true);
    expect(world.disk).toBe("A\nb\nc\nd\nE\n");
  });

  it("asks where both changed the same line, and loses neither text while it is undecided", async () => {
    world.type("a\nmine\nc\nd\ne\n");
    world.disk = "a\ntheirs\nc\nd\ne\n";
    world.choice = () => null;
    expect(await world.keeper.save()).toBe(false);
    expect(world.disk).toBe("a\ntheirs\nc\nd\ne\n");
    expect(world.text).toBe("a\nmine\nc\nd\ne\n");
    expect(world.heard("undecided")).toBe(true);
    world.choice = (regions) => joined(regions, new Map([[1, "both"]]));
    expect(await world.keeper.save()).toBe(true);
    expect(world.disk).toBe("a\nmine\ntheirs\nc\nd\ne\n");
  });

  it("writes a file again that went away, when asked to save twice", async () => {
    world.type("x\n");
    world.disk = null;
    expect(await world.keeper.save()).toBe(false);
    expect(world.heard("gone")).toBe(true);
    expect(await world.keeper.save()).toBe(true);
    expect(world.disk).toBe("x\n");
  });

  it("brings a draft back after a crash, and keeps it until it is saved", async () => {
    world.type("a\nunsaved\nc\nd\ne\n");
    world.text = "a\nb\nc\nd\ne\n";
    world.keeper = world.open("tab two");
    await world.keeper.restore(world.draftOf("tab two")!);
    expect(world.text).toBe("a\nunsaved\nc\nd\ne\n");
    expect(world.keeper.dirty).toBe(true);
    expect(world.storage.size).toBe(1);
    await world.keeper.save();
    expect(world.storage.size).toBe(0);
  });

  it("merges a draft with a file that went on meanwhile", async () => {
    world.type("a\nunsaved\nc\nd\ne\n");
    world.disk = world.text = "a\nb\nc\nd\nE\n";
    world.keeper = world.open("tab two");
    await world.keeper.restore(world.draftOf("tab two")!);
    expect(world.text).toBe("a\nunsaved\nc\nd\nE\n");
  });

  it("shows the author's draft and leaves the file alone where the two conflict and nobody decides", async () => {
    world.type("a\nunsaved\nc\nd\ne\n");
    world.disk = world.text = "a\nother\nc\nd\ne\n";
    world.choice = () => null;
    world.keeper = world.open("tab two");
    await world.keeper.restore(world.draftOf("tab two")!);
    expect(world.text).toBe("a\nunsaved\nc\nd\ne\n");
    expect(await world.keeper.save()).toBe(false);
    expect(world.disk).toBe("a\nother\nc\nd\ne\n");
  });

  it("says when the browser has no room for a draft", () => {
    world.storage.set = () => { throw new Error("quota"); };
    world.type("x");
    expect(world.told.find((it) => it.told === "trouble")).toHaveProperty("message", expect.stringContaining("Save before you leave"));
  });
});

describe("drafts", () => {
  it("are one notebook's own, also where another's path goes on from it", () => {
    const kept = new Map<string, string>();
    const storage = { getItem: (key: string) => kept.get(key) ?? null, setItem: (key: string, value: string) => { kept.set(key, value); }, removeItem: (key: string) => { kept.delete(key); }, key: (i: number) => [...kept.keys()][i] ?? null, get length() { return kept.size; } };
    const draft = { text: "private", base: "", baseHash: "", time: 1 };
    drafts(storage, "/home/n.md and more.md", "tab").keep(draft);
    expect(drafts(storage, "/home/n.md", "other").find(() => false)).toBeNull();
    expect(drafts(storage, "/home/n.md and more.md", "other").find(() => false)).toEqual(draft);
  });
});
