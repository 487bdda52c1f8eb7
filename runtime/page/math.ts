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

/** @returns a `math` element, or the source in a marked `code` with what is wrong with it. */
export function mathTree(tex: string, display: boolean): Tree {
  try {
    // Its public functions give markup or live nodes only; the tree between them is what can be checked.
    // oxlint-disable-next-line no-underscore-dangle
    const built = temml.__renderToMathMLTree(tex, { displayMode: display, throwOnError: true, trust: false, maxExpand: 500, maxSize: [10, 100] }) as Built;
    const [tree] = convert(built);
    if (tree && typeof tree !== "string" && tree.tag === "math") return h("math", { ...tree.attributes, "aria-label": tex }, tree.children);
  } catch (error) {
    return h("code", { class: "tex-fault", title: `This formula cannot be read: ${reason(error)}` }, tex);
  }
  return h("code", { class: "tex-fault", title: "This formula cannot be read" }, tex);
}

function reason(error: unknown): string { return (error instanceof Error ? error.message : String(error)).replace(/^.*?ParseError:\s*/s, "").slice(0, 200); }

function convert(node: Built): readonly Child[] {
  if (node.text !== undefined) return [node.text];
  const inside = (node.children ?? []).flatMap(convert);
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
