// A small tree of described elements: plain data, drawn by dom.ts in a browser and printed by html.ts anywhere.

export interface Tree {
  readonly tag: string;
  /** Tells siblings apart when they move; unkeyed ones are matched in order. */
  readonly key: string | null;
  /** `value` and `checked` are set as properties too; `open` only when the element is made, so that the reader's hand wins. */
  readonly attributes: Readonly<Record<string, string>>;
  readonly children: readonly Child[];
  /** Whoever fills this element ("chart" and its key): its inside is not touched by the drawing. */
  readonly own: string | null;
}

export type Child = Tree | string;
export type AttributeValue = string | number | boolean | null | undefined;
/** What may be handed over as a child: lists are flattened, and `null` and `false` are left out. */
export type Given = Tree | string | number | null | undefined | false | readonly Given[];

/** One element. Attributes `key` and `own` are the tree's own; `true` is an empty attribute, `false` and `null` none. */
export function h(tag: string, attributes: Readonly<Record<string, AttributeValue>> = {}, ...given: readonly Given[]): Tree {
  const kept: Record<string, string> = {};
  for (const [name, value] of Object.entries(attributes)) {
    if (name === "key" || name === "own" || value === null || value === undefined || value === false) continue;
    kept[name] = value === true ? "" : String(value);
  }
  return {
    tag, attributes: kept, children: children(given),
    key: attributes.key === undefined || attributes.key === null ? null : String(attributes.key),
    own: attributes.own === undefined || attributes.own === null ? null : String(attributes.own),
  };
}

/** Flattens, drops what is empty, and joins neighbouring texts, so that each child is one DOM node. */
function children(given: readonly Given[]): readonly Child[] {
  const list: Child[] = [];
  const add = (item: Given): void => {
    if (item === null || item === undefined || item === false || item === "") return;
    if (Array.isArray(item)) { for (const inner of item as readonly Given[]) add(inner); return; }
    const child = typeof item === "number" ? String(item) : item as Child;
    const last = list.length - 1;
    if (typeof child === "string" && typeof list[last] === "string") list[last] = (list[last] as string) + child;
    else list.push(child);
  };
  add(given);
  return list;
}

/** The text inside, as a reader without pictures would get it. */
export function textOf(child: Child): string {
  return typeof child === "string" ? child : child.children.map(textOf).join("");
}
