import { fromMarkdown } from "mdast-util-from-markdown";
import { gfmFromMarkdown } from "mdast-util-gfm";
import { mathFromMarkdown } from "mdast-util-math";
import { gfm } from "micromark-extension-gfm";
import { math } from "micromark-extension-math";
import { describe, expect, it } from "vitest";
import type { NumberReport } from "../../../runtime/engine/messages.ts";
import { html } from "../../../runtime/page/html.ts";
import { anchor, prose, safeLink } from "../../../runtime/page/prose.ts";
import type { ProseContext } from "../../../runtime/page/prose.ts";

const blank: ProseContext = { definitions: new Map(), footnotes: new Map(), anchors: new Map(), numbers: [], canAccept: false, canEdit: false };

function printed(text: string, context: Partial<ProseContext> = {}): string {
  const tree = fromMarkdown(text, { extensions: [gfm(), math()], mdastExtensions: [gfmFromMarkdown(), mathFromMarkdown()] });
  return tree.children.flatMap((node) => prose(node, { ...blank, ...context })).map((child) => html(child)).join("");
}

const number = (given: Partial<NumberReport>): NumberReport => ({ index: 0, line: 1, from: 0, to: 1, expression: "a.b", saved: "0.31", now: "0.31", value: 0.31, state: "agrees", message: null, ...given });

describe("prose", () => {
  it("sets paragraphs, emphasis, lists and quotes as HTML", () => {
    expect(printed("One *two* **three** ~~four~~ `five`\n\n- a\n- b\n\n> quote")).toBe(
      '<p>One <em>two</em> <strong>three</strong> <del>four</del> <code>five</code></p><ul><li>a</li><li>b</li></ul><blockquote><p>quote</p></blockquote>');
  });

  it("keeps paragraphs in the items of a loose list, and the number that a list starts at", () => {
    expect(printed("3. a\n\n4. b")).toBe('<ol start="3"><li><p>a</p></li><li><p>b</p></li></ol>');
  });

  it("shows HTML as the text that it is", () => {
    const shown = printed('A <img src=x onerror=alert(1)> b\n\n<script>alert(1)</script>\n\n<style>p{}</style>');
    expect(shown).not.toMatch(/<(?:img|script|style)/);
    expect(shown).toContain("&#60;script&#62;alert(1)&#60;/script&#62;");
  });

  it("escapes text and attributes", () => {
    expect(printed('a < b & "c"')).toBe("<p>a &#60; b &#38; &#34;c&#34;</p>");
    expect(printed('[x](https://example.org/?q="><b>)')).not.toContain("<b>");
  });

  it("makes links of http, https and mailto only, with rel", () => {
    expect(printed("[a](https://example.org)")).toBe('<p><a href="https://example.org" rel="noopener noreferrer nofollow" target="_blank">a</a></p>');
    for (const url of ["javascript:alert(1)", "JaVaScRiPt:alert(1)", "data:text/html,x", "file:///etc/passwd", "//example.org", "vbscript:x", "blob:x", "other.md"]) {
      expect(safeLink(url), url).toBeNull();
      expect(printed(`[a](<${url}>)`), url).not.toContain("href");
    }
    expect(safeLink("#The%20data")).toBe("#the-data");
  });

  it("resolves references by definition, and leaves an unknown one as written", () => {
    const definitions = new Map([["ref", { url: "https://example.org/a", title: "t" }]]);
    expect(printed("[a][ref]\n\n[ref]: https://example.org/a", { definitions })).toContain('<a href="https://example.org/a" title="t"');
    expect(printed("[a][none]")).toBe("<p>[a][none]</p>");
  });

  it("loads no picture from elsewhere, and shows one that comes with the text", () => {
    expect(printed("![map](https://example.org/m.png)")).toBe('<p><span class="no-picture">[picture, not loaded: map]</span></p>');
    expect(printed("![dot](data:image/png;base64,AAAA)")).toBe('<p><img src="data:image/png;base64,AAAA" alt="dot"></p>');
    expect(printed("![dot](data:text/html;base64,AAAA)")).toContain("not loaded");
  });

  it("sets tables with their alignment", () => {
    expect(printed("| a | b |\n| :-- | --: |\n| 1 | 2 |")).toContain('<tr><td class="to-left">1</td><td class="to-right">2</td></tr>');
  });

  it("sets TeX as MathML, in a line and displayed, also when the display stands on one line", () => {
    expect(printed("so $x^2$ is")).toMatch(/^<p>so <math[^>]*><msup><mi>x<\/mi><mn[^>]*>2<\/mn><\/msup><\/math> is<\/p>$/);
    for (const text of ["$$\nx\n$$", "$$ x $$", "$$x$$"]) expect(printed(text), text).toMatch(/class="math-block".*display="block"/);
  });

  it("shows a formula that cannot be read as its source, with the reason", () => {
    expect(printed("$\\frac{1$")).toMatch(/<code class="tex-fault" title="This formula cannot be read: .+">\\frac\{1<\/code>/);
  });

  it("takes no links, pictures, styles of address or scripts from TeX", () => {
    for (const tex of ["\\href{javascript:alert(1)}{x}", "\\includegraphics{https://example.org/x.png}", "\\url{https://example.org}", "\\class{x\" onclick=\"y}{z}", "\\style{background:url(https://example.org)}{x}"]) {
      const tags = (printed(`$${tex}$`).match(/<[^>]*>/g) ?? []).join("").replace(/(?:title|aria-label)="[^"]*"/g, "");
      expect(tags, tex).not.toMatch(/href|src|onclick|url\(/);
    }
  });

  it("numbers footnote marks in the order given and leaves unknown ones as text", () => {
    const footnotes = new Map([["b", 1]]);
    expect(printed("x[^b]\n\n[^b]: note", { footnotes })).toContain('<a href="#note-1" id="note-from-1" aria-label="note 1">1</a>');
  });

  it("shows an agreeing live number as its text", () => {
    expect(printed("p is [0.31](=a.b).", { numbers: [number({})] })).toBe('<p>p is <span class="live agrees" title="= a.b">0.31</span>.</p>');
  });

  it("shows a moved one with both values, and an offer only where it may be accepted", () => {
    const moved = number({ state: "moved", now: "0.42", index: 7 });
    expect(printed("[0.31](=a.b)", { numbers: [moved] })).not.toContain("<button");
    const offered = printed("[0.31](=a.b)", { numbers: [moved], canAccept: true, canEdit: true });
    expect(offered).toMatch(/<del[^>]*>0\.31<\/del>.*<ins[^>]*>0\.42<\/ins>.*data-act="accept" data-index="7"/);
  });

  it("matches live numbers by expression, so that one that is no number does not shift the others", () => {
    const numbers = [number({ expression: "c", saved: "2", state: "moved", now: "3" })];
    const shown = printed("[**1**](=a) [2](=c)", { numbers });
    expect(shown).toContain("<ins>3</ins>");
    expect(shown).toContain("not computed yet");
  });

  it("makes anchors of headings in any script", () => {
    expect(anchor("What's in it, then?")).toBe("whats-in-it-then");
    expect(anchor("Über Größe")).toBe("über-größe");
    expect(anchor("!?")).toBe("part");
  });
});
