import { chmodSync, existsSync, lstatSync, mkdtempSync, readFileSync, readdirSync, rmSync, symlinkSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { afterEach, beforeEach, describe, expect, it } from "vitest";
import { hash } from "../../../runtime/host/hash.ts";
import { Store } from "../../../runtime/host/store.ts";

let folder = "", path = "";
beforeEach(() => { folder = mkdtempSync(join(tmpdir(), "lagbook-store-")); path = join(folder, "n.md"); });
afterEach(() => { rmSync(folder, { recursive: true, force: true }); });

describe("a notebook's store", () => {
  it("gives the text to the byte: mark, line ends, no line end at the end", async () => {
    const text = "\uFEFF# Räume\r\nx\r\n\r\ny";
    writeFileSync(path, text);
    const store = new Store(path), read = await store.read();
    expect(read.text).toBe(text);
    expect(read.hash).toBe(hash(readFileSync(path)));
    await store.save(`${text}z`, read.hash);
    expect(readFileSync(path, "utf8")).toBe(`${text}z`);
  });

  it("does not write over a text that the writer has not seen, and gives it", async () => {
    writeFileSync(path, "one");
    const store = new Store(path), { hash: seen } = await store.read();
    writeFileSync(path, "two");
    expect(await store.save("mine", seen)).toEqual({ found: { text: "two", hash: hash("two") } });
    expect(readFileSync(path, "utf8")).toBe("two");
  });

  it("says that the file is gone, and writes it again only when told so", async () => {
    writeFileSync(path, "one");
    const store = new Store(path), { hash: seen } = await store.read();
    rmSync(path);
    expect(await store.save("mine", seen)).toEqual({ found: null });
    expect(existsSync(path)).toBe(false);
    expect(await store.save("mine", null)).toHaveProperty("saved");
    expect(await store.save("again", null)).toHaveProperty("found.text", "mine");
  });

  it("lets one of two simultaneous saves win and shows it to the other", async () => {
    writeFileSync(path, "base");
    const store = new Store(path), { hash: seen } = await store.read();
    const results = await Promise.all([store.save("first", seen), store.save("second", seen)]);
    expect(results[0]).toHaveProperty("saved.text", "first");
    expect(results[1]).toHaveProperty("found.text", "first");
  });

  it("lets one of two desks win, each with a store of its own, and shows it to the other", async () => {
    for (let round = 0; round < 20; round++) {
      writeFileSync(path, "base");
      const stores = [new Store(path), new Store(path)], { hash: seen } = await stores[0].read();
      const results = await Promise.all(stores.map((store, i) => store.save(`text ${i}`, seen)));
      const winner = results.findIndex((result) => "saved" in result);
      expect(readFileSync(path, "utf8")).toBe(`text ${winner}`);
      expect(results[1 - winner]).toHaveProperty("found.text", `text ${winner}`);
    }
    expect(readdirSync(folder)).toEqual(["n.md"]);
  });

  it("writes through a link and leaves nothing beside the file", async () => {
    const target = join(folder, "real.md");
    writeFileSync(target, "one");
    symlinkSync("real.md", path);
    const store = new Store(path);
    await store.save("two", (await store.read()).hash);
    expect(readFileSync(target, "utf8")).toBe("two");
    expect(lstatSync(path).isSymbolicLink()).toBe(true);
    expect(readdirSync(folder).sort()).toEqual(["n.md", "real.md"]);
  });

  it("does not replace a file that is read-only", async () => {
    writeFileSync(path, "one");
    const store = new Store(path), { hash: seen } = await store.read();
    chmodSync(path, 0o444);
    await expect(store.save("two", seen)).rejects.toThrow("is read-only, so nothing was written");
    expect(readFileSync(path, "utf8")).toBe("one");
  });

  it("tells in words what is no notebook", async () => {
    await expect(new Store(path).read()).rejects.toThrow(/There is no file.*lagbook begin/s);
    await expect(new Store(folder).read()).rejects.toThrow(/is a folder/);
    writeFileSync(path, new Uint8Array([0xff, 0xfe, 0x41]));
    await expect(new Store(path).read()).rejects.toThrow(/not UTF-8/);
  });
});
