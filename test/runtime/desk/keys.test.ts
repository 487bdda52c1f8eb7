import { describe, expect, it } from "vitest";
import { actOf } from "../../../runtime/desk/keys.ts";

const press = (key: string, held = ""): Parameters<typeof actOf>[0] => ({ key, ctrl: held.includes("c"), meta: held.includes("m"), shift: held.includes("s"), alt: held.includes("a") });

describe("the desk's keys", () => {
  it("save with Ctrl or Cmd and S, wherever the focus is", () => {
    for (const held of ["c", "m"]) for (const inText of [true, false]) expect(actOf(press("s", held), inText)).toBe("save");
  });
  it("undo and redo from outside the text, and leave the text's own to the editor", () => {
    expect(actOf(press("z", "c"), false)).toBe("undo");
    expect(actOf(press("Z", "cs"), false)).toBe("redo");
    expect(actOf(press("y", "c"), false)).toBe("redo");
    expect(actOf(press("z", "c"), true)).toBeNull();
  });
  it("show and hide sides, change colours, change sides", () => {
    expect([actOf(press("T", "as"), true), actOf(press("P", "as"), true), actOf(press("L", "as"), false), actOf(press("F6"), true)]).toEqual(["text", "page", "theme", "sides"]);
  });
  it("take no ordinary letter", () => { for (const key of ["s", "z", "t", "p"]) expect(actOf(press(key), false)).toBeNull(); });
});
