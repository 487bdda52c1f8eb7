// Prose: the Markdown tree as described elements. Raw HTML is shown as the text that it is.

import { h, textOf } from "./tree.ts";
import type { Child, Given, Tree } from "./tree.ts";
import { mathTree } from "./math.ts";
import { liveNumber } from "./liveNumber.ts";
import type { NumberReport } from "../engine/messages.ts";
import type { Node } from "./pageState.ts";

/** Any node of the Markdown tree, seen loosely: unknown kinds of node show their contents. */
interface Any {
  readonly type: string; readonly children?: readonly Any[]; readonly value?: string; readonly url?: string; readonly title?: string | null;
  readonly alt?: string | null; readonly depth?: number; readonly ordered?: boolean | null; readonly start?: number | null; readonly spread?: boolean | null;
  readonly checked?: boolean | null; readonly lang?: string | null; readonly identifier?: string; readonly label?: string | null;
  readonly align?: readonly ("left" | "right" | "center" | null)[] | null; readonly position?: { readonly start: { readonly offset?: number }; readonly end: { readonly offset?: number } };
}

export interface ProseContext {
  /** `[text]: destination` by identifier. */
  readonly definitions: ReadonlyMap<string, { readonly url: string; readonly title: string | null }>;
  /** Footnotes by identifier, numbered from 1 in the order in which they are first referred to. */
  readonly footnotes: ReadonlyMap<string, number>;
  /** Anchors of headings, by node. */
  readonly anchors: ReadonlyMap<unknown, string>;
  /** The live numbers of this block, in order. */
  readonly numbers: readonly NumberReport[];
  readonly canAccept: boolean;
  readonly canEdit: boolean;
}

/** One top-level block of prose. */
export function prose(node: Node, context: ProseContext): readonly Child[] {
  const left = [...context.numbers];
  return [...new Prose(context, left).show(node as Any)];
}

class Prose {
  private readonly context: ProseContext;
  /** Live numbers not yet met. */
  private readonly left: NumberReport[];
  constructor(context: ProseContext, left: NumberReport[]) { this.context = context; this.left = left; }

  show(node: Any): readonly Child[] {
    const made = this.one(node);
    if (made === null) return [];
    return (Array.isArray(made) ? made : [made]) as readonly Child[];
  }

  private all(node: Any): Given { return (node.children ?? []).map((child) => this.show(child)); }

  private one(node: Any): Child | readonly Child[] | null {
    switch (node.type) {
      case "text": return node.value ?? "";
      case "paragraph": return this.paragraph(node);
      case "heading": return this.heading(node);
      case "emphasis": return h("em", {}, this.all(node));
      case "strong": return h("strong", {}, this.all(node));
      case "delete": return h("del", {}, this.all(node));
      case "inlineCode": return h("code", {}, node.value);
      case "break": return h("br");
      case "thematicBreak": return h("hr");
      case "blockquote": return h("blockquote", {}, this.all(node));
      case "list": return h(node.ordered ? "ol" : "ul", { start: node.ordered && node.start !== 1 ? node.start : null }, (node.children ?? []).map((item) => this.item(item, node.spread === true)));
      case "code": return h("pre", { tabindex: 0 }, h("code", {}, node.value));
      case "html": return h("code", { class: "raw", title: "HTML is shown as text" }, node.value);
      case "math": return this.display(node);
      case "inlineMath": return mathTree(node.value ?? "", false);
      case "link": return this.link(node, node.url ?? "", node.title);
      case "linkReference": return this.reference(node);
      case "image": return image(node.url ?? "", node.alt ?? "");
      case "imageReference": return image(this.context.definitions.get(node.identifier ?? "")?.url ?? "", node.alt ?? "");
      case "footnoteReference": return this.footnote(node);
      case "table": return this.table(node);
      case "definition": case "footnoteDefinition": return null;
      default: return node.children ? node.children.flatMap((child) => this.show(child)) : node.value ?? null;
    }
  }

  /** `$$…$$` written on one line, alone in its paragraph, is set as display too. */
  private paragraph(node: Any): Tree {
    const [only, ...others] = node.children ?? [];
    if (others.length === 0 && only?.type === "inlineMath" && marksAround(only) >= 4) return this.display(only);
    return h("p", {}, this.all(node));
  }

  private display(node: Any): Tree {
    return h("div", { class: "math-block", tabindex: 0, role: "group", "aria-label": "formula" }, mathTree(node.value ?? "", true));
  }

  private heading(node: Any): Tree {
    const depth = Math.min(6, Math.max(1, node.depth ?? 1));
    return h(`h${depth}`, { id: this.context.anchors.get(node) }, this.all(node));
  }

  /** An item of a tight list has its text without a paragraph around it. */
  private item(node: Any, spread: boolean): Tree {
    const box = typeof node.checked === "boolean" ? h("input", { type: "checkbox", disabled: true, checked: node.checked, "aria-label": node.checked ? "done" : "to do" }) : null;
    const loose = spread || node.spread === true;
    const inside = (node.children ?? []).map((child) => !loose && child.type === "paragraph" ? this.all(child) : this.show(child));
    return h("li", { class: box ? "task" : null }, box, box ? " " : null, inside);
  }

  private link(node: Any, url: string, title: string | null | undefined): Child | readonly Child[] {
    if (url.startsWith("=")) {
      const at = this.left.findIndex((number) => number.expression === url.slice(1));
      if (at >= 0) { const [number] = this.left.splice(at, 1); return liveNumber(number, this.context); }
      return h("span", { class: "live undecided", title: "not computed yet" }, this.all(node));
    }
    const href = safeLink(url);
    if (href === null) return h("span", { class: "dead-link", title: `This link is not shown as one: ${url}` }, this.all(node));
    const outside = !href.startsWith("#");
    const heading = `${headingPrefix}${href.slice(1)}`;
    const goal = !outside && [...this.context.anchors.values()].includes(heading) ? `#${heading}` : href;
    return h("a", { href: goal, title, rel: outside ? "noopener noreferrer nofollow" : null, target: outside ? "_blank" : null }, this.all(node));
  }

  private reference(node: Any): Child | readonly Child[] {
    const found = this.context.definitions.get(node.identifier ?? "");
    if (found && !found.url.startsWith("=")) return this.link(node, found.url, found.title);
    return ["[", ...(node.children ?? []).flatMap((child) => this.show(child)), "]"];
  }

  private footnote(node: Any): Child {
    const number = this.context.footnotes.get(node.identifier ?? "");
    if (number === undefined) return `[^${node.label ?? node.identifier ?? ""}]`;
    return h("sup", { class: "footnote-mark" }, h("a", { href: `#note-${number}`, id: `note-from-${number}`, "aria-label": `note ${number}` }, String(number)));
  }

  private table(node: Any): Tree {
    const [head, ...rows] = node.children ?? [];
    const cell = (tag: string) => (child: Any, i: number): Tree => h(tag, { class: node.align?.[i] ? `to-${node.align[i]}` : null, scope: tag === "th" ? "col" : null }, this.all(child));
    return h("div", { class: "table-box", tabindex: 0, role: "group", "aria-label": "table" },
      h("table", {}, h("thead", {}, h("tr", {}, (head?.children ?? []).map(cell("th")))), h("tbody", {}, rows.map((row) => h("tr", {}, (row.children ?? []).map(cell("td")))))));
  }
}

/** Characters of a node's source beyond its value. */
function marksAround(node: Any): number {
  const from = node.position?.start.offset; const to = node.position?.end.offset;
  return from === undefined || to === undefined ? 0 : to - from - (node.value ?? "").length;
}

/** Only http, https, mailto and places of this page are links. */
export function safeLink(url: string): string | null {
  if (url.startsWith("#")) return `#${anchor(decode(url.slice(1)))}`;
  return /^(?:https?:\/\/|mailto:)/i.test(url) ? url : null;
}

function decode(text: string): string { try { return decodeURIComponent(text); } catch { return text; } }

/** Pictures come with the text as data, never from elsewhere. */
function image(url: string, alt: string): Tree {
  if (/^data:image\/(?:png|jpeg|gif|webp|svg\+xml|avif)[;,]/i.test(url)) return h("img", { src: url, alt });
  return h("span", { class: "no-picture" }, `[picture, not loaded: ${alt || url || "no description"}]`);
}

/** A heading's words as an anchor: lower case, hyphens for spaces, letters and digits of any script. */
export const headingPrefix = "part-";

export function anchor(words: string): string {
  return words.trim().toLowerCase().replace(/[^\p{L}\p{N}\s_-]/gu, "").replace(/\s+/g, "-") || "part";
}

/** The words of a node, for anchors and the contents list. */
export function wordsOf(node: Node): string {
  const blank: ProseContext = { definitions: new Map(), footnotes: new Map(), anchors: new Map(), numbers: [], canAccept: false, canEdit: false };
  return prose(node, blank).map(textOf).join("").trim();
}
