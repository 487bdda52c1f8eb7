// A printed chart in fewer bytes that looks the same: what cannot be seen is left out, marks that look alike become one path,
// and what all marks of a group share is said once.

import { shortPath } from "./shortPath.ts";

interface Element {
  readonly tag: string; readonly attributes: Record<string, string>; readonly children: readonly Child[];
  /** Paths of one shape may be joined into one; null: not with any other. */
  readonly shape?: string | null;
}
type Child = Element | string;

/** Said by the document around it, or of use to the library only. */
const dropped = /^(?:class|role|aria-.*|pointer-events|xmlns.*|version|font-family)$/;
const defaults: Readonly<Record<string, string>> = { opacity: "1", "fill-opacity": "1", "stroke-opacity": "1", "stroke-width": "1", "font-weight": "normal", "text-anchor": "start", "stroke-miterlimit": "4", x: "0", y: "0" };
/** What children take over from a group. */
const inherited = ["fill", "stroke", "stroke-width", "stroke-dasharray", "stroke-linejoin", "stroke-linecap", "fill-opacity", "stroke-opacity", "font-size", "font-weight", "text-anchor"];

/** @param svg as the chart library prints it
 *  @param root attributes of the `svg` element besides its view box */
export function compactSvg(svg: string, root: Readonly<Record<string, string>>): string {
  const [top] = read(svg).flatMap((child) => typeof child === "string" ? [] : [child]);
  const children = top.children.flatMap(simple);
  return print({ tag: "svg", attributes: { ...root, viewBox: top.attributes.viewBox }, children });
}

function read(svg: string): readonly Child[] {
  const top: Child[] = [];
  const open: Child[][] = [top];
  for (const [, close, tag, given, closed, text] of svg.matchAll(/<(\/?)([\w:]+)((?:\s+[\w:-]+="[^"]*")*)\s*(\/?)>|([^<]+)/g)) {
    const inside = open[open.length - 1];
    if (text !== undefined) { inside.push(text); continue; }
    if (close) { open.pop(); continue; }
    const children: Child[] = [];
    inside.push({ tag, attributes: Object.fromEntries([...given.matchAll(/([\w:-]+)="([^"]*)"/g)].map(([, name, value]) => [name, value])), children });
    if (!closed) open.push(children);
  }
  return top;
}

/** What is left of an element: nothing, itself, or its children. */
function simple(child: Child): readonly Child[] {
  if (typeof child === "string") return [child];
  const { tag, attributes: given } = child;
  if (given.display === "none" || given.opacity === "0" || given.d === "" || (given.class === "background" && given.fill === undefined && given.stroke === undefined)) return [];
  const attributes = Object.fromEntries(Object.entries(given).filter(([name, value]) => !dropped.test(name) && defaults[name] !== value));
  // A clipping shape is taken as it stands.
  if (tag === "defs") return [{ tag, attributes, children: child.children }];
  const moved = /^translate\(([-\d.e]+),([-\d.e]+)\)$/.exec(attributes.transform ?? "");
  const by = moved ? [Number(moved[1]), Number(moved[2])] as const : null;
  if (by !== null && ["path", "line", "text"].includes(tag)) delete attributes.transform;
  switch (tag) {
    case "line": case "path": {
      const { d, x2 = "0", y2 = "0", ...rest } = attributes, look = painted(rest);
      return [{ tag: "path", attributes: { d: shortPath(d ?? `M0,0l${x2},${y2}`, by ?? undefined), ...look }, children: [], shape: shapeOf(look, d) }];
    }
    case "text": return [{ tag, attributes: by === null ? attributes : { x: tenth(by[0]), y: tenth(by[1]), ...attributes }, children: child.children }];
    case "g": return group(attributes, child.children.flatMap(simple), by);
    default: return [{ tag, attributes, children: child.children.flatMap(simple) }];
  }
}

/** What paints: a line's width and dashes say nothing of a filled shape without one, and what shows one colour may say how dense that is. */
function painted(given: Readonly<Record<string, string>>): Record<string, string> {
  const filled = given.fill !== undefined, drawn = given.stroke !== undefined;
  return Object.fromEntries(Object.entries(given).flatMap(([name, value]) => {
    if (name.startsWith("stroke-") && !drawn) return [];
    if (name !== "opacity" || filled === drawn) return [[name, value]];
    return given[filled ? "fill-opacity" : "stroke-opacity"] === undefined ? [[filled ? "fill-opacity" : "stroke-opacity", value]] : [[name, value]];
  }));
}

/** Lines may be joined whatever their form. Filled shapes that overlap may only if they are alike, since unlike ones can cancel
 *  each other; those that show through never, since they darken each other. */
function shapeOf(look: Readonly<Record<string, string>>, d: string | undefined): string | null {
  if (Object.keys(look).some((name) => name.endsWith("opacity"))) return null;
  return look.fill === undefined ? "" : d ?? null;
}

function group(given: Record<string, string>, children: readonly Child[], by: readonly [number, number] | null): readonly Child[] {
  if (children.length === 0) return [];
  const attributes = { ...given };
  if (by !== null && by[0] === 0 && by[1] === 0) delete attributes.transform;
  let marks = joined(children.filter((child) => typeof child !== "string"));
  for (const name of inherited) {
    const value = marks[0].attributes[name];
    if (marks.length < 2 || value === undefined || attributes[name] !== undefined || marks.some((mark) => mark.attributes[name] !== value)) continue;
    attributes[name] = value;
    marks = marks.map((mark) => ({ ...mark, attributes: Object.fromEntries(Object.entries(mark.attributes).filter(([other]) => other !== name)) }));
  }
  return Object.keys(attributes).length === 0 ? marks : [{ tag: "g", attributes, children: marks }];
}

/** Paths that follow each other and look the same, as one. */
function joined(marks: readonly Element[]): readonly Element[] {
  const list: Element[] = [];
  const look = ({ attributes: { d: _d, ...rest }, shape }: Element): string => JSON.stringify([shape, rest]);
  for (const mark of marks) {
    const before = list[list.length - 1];
    if (typeof mark.shape === "string" && before !== undefined && look(before) === look(mark)) list[list.length - 1] = { ...before, attributes: { ...before.attributes, d: before.attributes.d + mark.attributes.d } };
    else list.push(mark);
  }
  return list;
}

function tenth(pixels: number): string { return String(Math.round(pixels * 10) / 10 + 0); }

function print(child: Child): string {
  if (typeof child === "string") return child;
  const attributes = Object.entries(child.attributes).map(([name, value]) => ` ${name}="${value}"`).join("");
  return `<${child.tag}${attributes}${child.children.length === 0 ? "/>" : `>${child.children.map(print).join("")}</${child.tag}>`}`;
}
