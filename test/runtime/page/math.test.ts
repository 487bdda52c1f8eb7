import { describe, expect, it } from "vitest";
import { mathTree } from "../../../runtime/page/math.ts";
import type { Child, Tree } from "../../../runtime/page/tree.ts";

const nested = (command: string, levels: number): string => `${command}{`.repeat(levels) + "x" + "}".repeat(levels);
const title = (tree: Tree): unknown => tree.attributes.title;
const elements = (child: Child): number => (typeof child === "string" ? 0 : 1 + child.children.reduce((sum: number, each) => sum + elements(each), 0));

describe("a formula", () => {
  it("is a MathML tree that says its source", () => {
    const tree = mathTree("\\phi_1 = \\frac{1}{2}", true);
    expect(tree).toMatchObject({ tag: "math", attributes: { "aria-label": "\\phi_1 = \\frac{1}{2}" } });
    expect(elements(tree)).toBeLessThan(20);
  });

  it("of the length and depth of a long model is drawn", () => {
    const long = Array.from({ length: 200 }, (_, i) => `\\hat\\phi_{${i + 1}}\\,B^{${i + 1}}`).join(" - ");
    expect(mathTree(long, true).tag).toBe("math");
    expect(mathTree(nested("\\sqrt", 40), true).tag).toBe("math");
  });

  it("that cannot be read stands as its source, with why", () => {
    const tree = mathTree("\\frac{1}", false);
    expect(tree).toMatchObject({ tag: "code", children: ["\\frac{1}"] });
    expect(title(tree)).toMatch(/^This formula cannot be read: /);
  });
});

describe("a formula that would hold the page up", () => {
  it("is told to be nested too deeply, in one it reads and in one whose reading breaks off", () => {
    for (const tex of [nested("\\sqrt", 400), nested("", 4900)]) expect(title(mathTree(tex, true))).toBe("This formula cannot be read: it is nested too deeply: up to 100 levels are drawn");
  });

  it("is told to be too long", () => {
    expect(title(mathTree("x^2+".repeat(2501), true))).toBe("This formula cannot be read: it has 10004 signs, and up to 10000 are drawn: divide it");
    expect(title(mathTree("\\,x".repeat(3000), true))).toBe("This formula cannot be read: it has too many commands: divide it");
  });

  it("by commands that it defines is told so, before any of them is followed", () => {
    const millions = `\\def\\a{${"x".repeat(4000)}}${"\\a".repeat(400)}`, doubling = `\\def\\a{xx}${"\\edef\\a{\\a\\a}".repeat(25)}\\a`;
    for (const tex of [millions, doubling]) expect(title(mathTree(tex, true))).toBe("This formula cannot be read: \\def defines a command, which a formula cannot: write it out where it is used");
    expect(title(mathTree("\\newcommand{\\a}{x}\\a", true))).toMatch(/\\newcommand defines a command/);
    expect(title(mathTree("\\global\\let\\a=\\def", true))).toMatch(/\\let defines a command/);
  });

  it("is not seen in a line break before a word, or in a longer command", () => {
    expect(mathTree("\\begin{matrix}a\\\\def\\end{matrix}", true).tag).toBe("math");
    expect(mathTree("a \\eqdef b \\leftarrow c", true).tag).toBe("math");
  });
});
