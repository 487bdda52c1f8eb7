import { describe, expect, it } from "vitest";
import { fileName, titledSvg } from "../../../runtime/page/savePicture.ts";

const drawn = '<svg xmlns="http://www.w3.org/2000/svg" class="marks" width="300" height="120" viewBox="0 0 300 120"><g>…</g></svg>';
const given = { title: "Sales (t) & stocks", alt: "Sales rose to 3 t.", ground: "#fff", ink: "#000" };

describe("a saved picture", () => {
  it("has its title above it, the finding as its description, and room for both", () => {
    const svg = titledSvg(drawn, given);
    expect(svg).toMatch(/^<svg [^>]*width="300" height="150" viewBox="0 0 300 150"/);
    expect(svg).toContain("<title>Sales (t) &#38; stocks</title><desc>Sales rose to 3 t.</desc>");
    // A family whose name holds a digit is only read in quotes.
    expect(svg).toContain('font-family="&#34;Source Sans 3&#34;, ');
    expect(svg).toMatch(/<text [^>]*>Sales \(t\) &#38; stocks<\/text><svg y="30" xmlns/);
  });
  it("breaks a long title between words, with a line's room for each", () => {
    const svg = titledSvg(drawn, { ...given, title: "The log of crossings, differenced at lags 1 and 12, against its own past" });
    expect([...svg.matchAll(/<text [^>]*>([^<]*)</g)].map(([, line]) => line)).toEqual(["The log of crossings, differenced at", "lags 1 and 12, against its own past"]);
    expect(svg).toMatch(/height="168"/);
  });
  it("is named by its title's words", () => {
    expect(fileName("Forecast of Größe, 90%", "svg")).toBe("forecast-of-größe-90.svg");
  });
});
