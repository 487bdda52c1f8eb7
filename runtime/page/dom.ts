// Draws a tree into the document, changing only what differs, so that focus, selection and scrolling stay.

import type { Child, Tree } from "./tree.ts";

/** Told when an element with an owner comes and goes. */
export interface Owner {
  mounted(own: string, element: Element): void;
  unmounted(own: string, element: Element): void;
}

const spaces: Readonly<Record<string, string>> = { svg: "http://www.w3.org/2000/svg", math: "http://www.w3.org/1998/Math/MathML" };

/** Makes a drawing inside `parent`; call the result with the new children as often as wanted. */
export function drawing(parent: Element, owner: Owner): (next: readonly Child[]) => void {
  let now: readonly Child[] = [];
  parent.replaceChildren();
  return (next) => { patchChildren(parent, now, next, owner); now = next; };
}

function patchChildren(parent: Element, before: readonly Child[], after: readonly Child[], owner: Owner): void {
  if (before === after) return;
  if (continues(before, after)) {
    // Mostly the same children in the same order: no lists and tables are needed then.
    let node = parent.firstChild;
    for (let i = 0; i < after.length; i++) {
      const next: ChildNode | null = node?.nextSibling ?? null;
      if (node !== null && before[i] !== after[i]) patch(node, before[i], after[i], owner);
      node = next;
    }
    return;
  }
  const nodes = [...parent.childNodes];
  const matches = match(before, after);
  const used = new Set(matches);
  // Those that go leave first: then what stays is mostly in order already, and nothing has to move.
  before.forEach((child, i) => { if (!used.has(i)) { leave(child, nodes[i], owner); nodes[i].remove(); } });
  let cursor: ChildNode | null = parent.firstChild;
  after.forEach((child, i) => {
    const old = matches[i];
    const node = old < 0 ? make(child, parent, owner) : nodes[old];
    if (old >= 0) patch(node, before[old], child, owner);
    if (node === cursor) cursor = cursor.nextSibling;
    else place(parent, node, cursor);
    if (old < 0) enter(child, node, owner);
  });
}

/** Whether each child continues the one at its place. */
function continues(before: readonly Child[], after: readonly Child[]): boolean {
  if (before.length !== after.length) return false;
  for (let i = 0; i < after.length; i++) {
    const a = before[i]; const b = after[i];
    if (a === b) continue;
    if (typeof a === "string" || typeof b === "string") { if (typeof a !== typeof b) return false; continue; }
    if (a.tag !== b.tag || a.key !== b.key || a.own !== b.own) return false;
  }
  return true;
}

/** For each new child the index of the old one that it continues, or -1. Keys first; unkeyed ones in order, by tag. */
function match(before: readonly Child[], after: readonly Child[]): number[] {
  const keyed = new Map<string, number>();
  const loose = new Map<string, number[]>();
  before.forEach((child, i) => {
    const key = keyOf(child);
    if (key !== null) keyed.set(key, i);
    else { const tag = tagOf(child); const list = loose.get(tag); if (list) list.push(i); else loose.set(tag, [i]); }
  });
  const taken = new Map<string, number>();
  return after.map((child) => {
    const key = keyOf(child);
    if (key !== null) { const i = keyed.get(key); if (i === undefined) return -1; keyed.delete(key); return i; }
    const tag = tagOf(child);
    const next = taken.get(tag) ?? 0;
    taken.set(tag, next + 1);
    return loose.get(tag)?.[next] ?? -1;
  });
}

function keyOf(child: Child): string | null {
  return typeof child === "string" || child.key === null ? null : `${child.tag}\n${child.key}`;
}

function tagOf(child: Child): string { return typeof child === "string" ? "#text" : child.own === null ? child.tag : `${child.tag} ${child.own}`; }

/** Moves without losing focus where the browser can. */
function place(parent: Element, node: ChildNode, before: ChildNode | null): void {
  const able = parent as Element & { moveBefore?: (node: Node, before: Node | null) => void };
  if (node.parentNode === parent && able.moveBefore) able.moveBefore(node, before);
  else parent.insertBefore(node, before);
}

function make(child: Child, parent: Element, owner: Owner): ChildNode {
  if (typeof child === "string") return document.createTextNode(child);
  const inherited = parent.namespaceURI === spaces.svg || parent.namespaceURI === spaces.math ? parent.namespaceURI : null;
  const space = spaces[child.tag] ?? inherited;
  const element = space === null ? document.createElement(child.tag) : document.createElementNS(space, child.tag);
  if (child.own === null) for (const inner of child.children) { const node = make(inner, element, owner); element.append(node); enter(inner, node, owner); }
  for (const [name, value] of Object.entries(child.attributes)) setAttribute(element, name, value);
  return element;
}

function enter(child: Child, node: ChildNode, owner: Owner): void {
  if (typeof child !== "string" && child.own !== null) owner.mounted(child.own, node as Element);
}

function leave(child: Child, node: ChildNode, owner: Owner): void {
  if (typeof child === "string") return;
  if (child.own !== null) { owner.unmounted(child.own, node as Element); return; }
  const nodes = [...node.childNodes];
  child.children.forEach((inner, i) => leave(inner, nodes[i], owner));
}

function patch(node: ChildNode, before: Child, after: Child, owner: Owner): void {
  if (before === after) return;
  if (typeof before === "string" || typeof after === "string") { if (before !== after) node.nodeValue = after as string; return; }
  const element = node as Element;
  if (after.own === null) patchChildren(element, before.children, after.children, owner);
  patchAttributes(element, before, after);
}

function patchAttributes(element: Element, before: Tree, after: Tree): void {
  for (const name of Object.keys(before.attributes)) {
    if (after.attributes[name] !== undefined || name === "open") continue;
    element.removeAttribute(name);
    if (name === "checked" && element instanceof HTMLInputElement) element.checked = false;
  }
  for (const [name, value] of Object.entries(after.attributes)) {
    if (name === "open") continue;
    if (name === "value" || name === "checked" || before.attributes[name] !== value) setAttribute(element, name, value);
  }
}

function setAttribute(element: Element, name: string, value: string): void {
  if (name === "value" && (element instanceof HTMLInputElement || element instanceof HTMLSelectElement)) {
    // A text that is being typed stays as typed.
    const typing = element === document.activeElement && element instanceof HTMLInputElement && element.type === "text" && element.dataset.typing === "yes";
    if (!typing && element.value !== value) element.value = value;
    if (element instanceof HTMLSelectElement) return;
  }
  if (name === "checked" && element instanceof HTMLInputElement) { if (!element.checked) element.checked = true; }
  if (element.getAttribute(name) !== value) element.setAttribute(name, value);
}
