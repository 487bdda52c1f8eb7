// Prints a tree as HTML: every text and attribute escaped.

import type { Child } from "./tree.ts";

const empty = new Set(["area", "base", "br", "col", "embed", "hr", "img", "input", "link", "meta", "source", "track", "wbr"]);

/** @param fill gives the HTML inside an element that has an owner (a chart's SVG); it is trusted as it is. */
export function html(child: Child, fill: (own: string) => string = () => ""): string {
  if (typeof child === "string") return escapeHtml(child);
  const attributes = Object.entries(child.attributes).map(([name, value]) => value === "" ? ` ${name}` : ` ${name}="${escapeHtml(value)}"`).join("");
  if (empty.has(child.tag)) return `<${child.tag}${attributes}>`;
  const inside = child.own === null ? child.children.map((inner) => html(inner, fill)).join("") : fill(child.own);
  return `<${child.tag}${attributes}>${inside}</${child.tag}>`;
}

export function escapeHtml(text: string): string {
  return text.replace(/[&<>"']/g, (mark) => `&#${mark.charCodeAt(0)};`);
}
