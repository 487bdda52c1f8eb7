import { array, assert, constantFrom, property } from "fast-check";
import { describe, expect, it } from "vitest";
import { editsBetween, mergeTexts, mergedText } from "../../../runtime/desk/merge.ts";
import { applyEdits } from "../../../runtime/text/edits.ts";

const text = array(constantFrom("a\n", "b\n", "c\r\n", "\n", "d"), { maxLength: 12 }).map((lines) => lines.join(""));

describe("merging", () => {
  it("gives the other's text where one writer changed nothing", () => {
    assert(property(text, text, (base, other) => {
      expect(mergedText(mergeTexts(base, other, base))).toBe(other);
      expect(mergedText(mergeTexts(base, base, other))).toBe(other);
      expect(mergedText(mergeTexts(base, other, other))).toBe(other);
    }), { seed: 11 });
  });

  it("loses no line of either writer: mine joined is mine's agreed and own lines", () => {
    const regions = mergeTexts("a\nb\nc\n", "a\nmine\nc\n", "a\ntheirs\nc\nmore\n");
    expect(mergedText(regions)).toBeNull();
    expect(regions).toEqual([{ agreed: "a\n" }, { mine: "mine\n", base: "b\n", theirs: "theirs\n" }, { agreed: "c\nmore\n" }]);
  });

  it("finds edits that make one text of another, to the byte", () => {
    assert(property(text, text, (from, to) => { expect(applyEdits(from, editsBetween(from, to))).toBe(to); }), { seed: 12 });
  });

  it("changes only the lines that differ", () => {
    expect(editsBetween("a\nb\nc\n", "a\nB\nc\n")).toEqual([{ from: 2, to: 4, insert: "B\n" }]);
  });
});
