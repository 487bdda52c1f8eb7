// TeX mathematics as a MathML tree: the one door to temml. Its markup is never parsed: its own tree is walked,
// and only MathML elements and harmless attributes are taken over.

import temml from "temml";
import { h } from "./tree.ts";
import type { Child, Tree } from "./tree.ts";

interface Built {
  readonly type?: string; readonly text?: string; readonly classes?: readonly string[];
  readonly attributes?: Readonly<Record<string, string>>; readonly style?: Readonly<Record<string, string>>; readonly children?: readonly Built[];
}

const elements = new Set(["math", "maction", "menclose", "merror", "mfrac", "mi", "mmultiscripts", "mn", "mo", "mover", "mpadded", "mphantom", "mprescripts", "mroot", "mrow", "ms", "mspace", "msqrt", "mstyle", "msub", "msubsup", "msup", "mtable", "mtd", "mtext", "mtr", "munder", "munderover", "none", "semantics"]);
const attributes = new Set(["accent", "accentunder", "columnalign", "columnlines", "columnspacing", "columnspan", "depth", "dir", "display", "displaystyle", "fence", "form", "height", "largeop", "linethickness", "lspace", "mathcolor", "mathsize", "mathvariant", "maxsize", "minsize", "movablelimits", "notation", "rowalign", "rowlines", "rowspacing", "rowspan", "rspace", "scriptlevel", "separator", "stretchy", "symmetric", "voffset", "width"]);

/** What a browser lays out without standing still: 10,000 signs make some 17,000 elements. */
const mostSigns = 10_000, mostNested = 100;
/** A formula's own commands would be its alone, and a few of them make millions of signs out of a line. */
const defining = new Set(["\\def", "\\gdef", "\\edef", "\\xdef", "\\let", "\\futurelet", "\\newcommand", "\\renewcommand", "\\providecommand"]);

/** @returns a `math` element, or the source in a marked `code` with what is wrong with it. */
export function mathTree(tex: string, display: boolean): Tree {
  try {
    checkSize(tex);
    // Its public functions give markup or live nodes only; the tree between them is what can be checked.
    // oxlint-disable-next-line no-underscore-dangle
    const built = temml.__renderToMathMLTree(tex, { displayMode: display, throwOnError: true, trust: false, maxExpand: 5000, maxSize: [10, 100] }) as Built;
    const [tree] = convert(built);
    if (tree && typeof tree !== "string" && tree.tag === "math") return h("math", { ...tree.attributes, "aria-label": tex }, tree.children);
  } catch (error) {
    return h("code", { class: "tex-fault", title: `This formula cannot be read: ${reason(error)}` }, tex);
  }
  return h("code", { class: "tex-fault", title: "This formula cannot be read" }, tex);
}

/** Before the package reads it, since that is what would not end. */
function checkSize(tex: string): void {
  if (tex.length > mostSigns) throw new Error(`it has ${tex.length} signs, and up to ${mostSigns} are drawn: divide it`);
  const own = tex.match(/\\(?:[A-Za-z]+|[^])/g)?.find((command) => defining.has(command));
  if (own !== undefined) throw new Error(`${own} defines a command, which a formula cannot: write it out where it is used`);
}

function reason(error: unknown): string {
  // What reads the formula calls itself for each level, and has no words for too many.
  if (error instanceof RangeError) return tooDeep;
  const message = error instanceof Error ? error.message : String(error);
  return message.includes("Too many expansions") ? "it has too many commands: divide it" : message.replace(/^.*?ParseError:\s*/s, "").slice(0, 200);
}
const tooDeep = `it is nested too deeply: up to ${mostNested} levels are drawn`;

function convert(node: Built, depth = 0): readonly Child[] {
  if (node.text !== undefined) return [node.text];
  if (depth > mostNested) throw new RangeError(tooDeep);
  const inside = (node.children ?? []).flatMap((child) => convert(child, depth + 1));
  // A fragment, or an element that is not MathML: only its contents.
  if (node.type === undefined || !elements.has(node.type)) return inside;
  const kept: Record<string, string> = {};
  for (const [name, value] of Object.entries(node.attributes ?? {})) if (attributes.has(name)) kept[name] = String(value);
  const classes = (node.classes ?? []).filter((word) => /^[\w-]+$/.test(word)).join(" ");
  if (classes) kept.class = classes;
  const style = Object.entries(node.style ?? {}).filter(([, value]) => /^[-\w.%# ]+$/.test(String(value))).map(([name, value]) => `${name.replace(/[A-Z]/g, (c) => `-${c.toLowerCase()}`)}:${value}`).join(";");
  if (style) kept.style = style;
  return [h(node.type, kept, inside)];
}
