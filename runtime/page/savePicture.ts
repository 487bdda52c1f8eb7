// A drawn chart as a file of its own: SVG with real colours, or PNG.

import { chartFont } from "./chartTheme.ts";
import type { ChartPart } from "../../cells/parts/part.ts";

/** The drawn picture with its title above it, as a file that needs no page: the page's present colours and ground, and the
 *  sentence that says what it shows for whoever cannot see it. */
export function standaloneSvg(svg: string, { title, alt }: Pick<ChartPart, "title" | "alt">, from: Element): string {
  const style = getComputedStyle(from), colour = (name: string, other: string): string => style.getPropertyValue(name).trim() || other;
  return titledSvg(svg.replace(/var\((--[\w-]+)\)/g, (_, name: string) => colour(name, "currentColor")), { title, alt, ground: colour("--ground", "#fff"), ink: colour("--ink", "#000") });
}

const lineHeight = 18, signWidth = 7;

/** @param svg  with width and height in pixels */
export function titledSvg(svg: string, { title, alt, ground, ink }: { readonly title: string; readonly alt: string; readonly ground: string; readonly ink: string }): string {
  const size = (name: string): number => Number(new RegExp(`^<svg [^>]*\\b${name}="([\\d.]+)`).exec(svg)?.[1]);
  const width = size("width"), lines = wrapped(title, Math.floor((width - 16) / signWidth)), above = lines.length * lineHeight + 12;
  const words = lines.map((line, i) => `<text x="8" y="${(i + 1) * lineHeight}" font-family="${escaped(chartFont)}" font-size="13" font-weight="600" fill="${ink}">${escaped(line)}</text>`);
  return `<svg xmlns="http://www.w3.org/2000/svg" width="${width}" height="${size("height") + above}" viewBox="0 0 ${width} ${size("height") + above}" role="img"><title>${escaped(title)}</title><desc>${escaped(alt)}</desc>`
    + `<rect width="100%" height="100%" fill="${ground}"/>${words.join("")}${svg.replace(/^<svg /, `<svg y="${above}" `)}</svg>`;
}

/** A text in lines of at most so many signs, broken between words. */
function wrapped(text: string, most: number): readonly string[] {
  const lines: string[] = [];
  for (const word of text.split(" ")) {
    const last = lines.at(-1);
    if (last !== undefined && last.length + 1 + word.length <= most) lines[lines.length - 1] = `${last} ${word}`;
    else lines.push(word);
  }
  return lines;
}

const escaped = (text: string): string => text.replace(/[&<>"]/g, (sign) => `&#${sign.charCodeAt(0)};`);

/** @param scale pixels of the picture per CSS pixel */
export async function pngOf(svg: string, scale: number): Promise<Uint8Array> {
  const image = new Image();
  image.src = `data:image/svg+xml;charset=utf-8,${encodeURIComponent(svg)}`;
  await image.decode();
  const canvas = document.createElement("canvas");
  canvas.width = Math.round(image.naturalWidth * scale); canvas.height = Math.round(image.naturalHeight * scale);
  const pen = canvas.getContext("2d");
  if (!pen) throw new Error("This browser gave no canvas to draw the picture on.");
  pen.drawImage(image, 0, 0, canvas.width, canvas.height);
  const blob = await new Promise<Blob | null>((resolve) => { canvas.toBlob(resolve, "image/png"); });
  if (!blob) throw new Error("This browser could not make a PNG of the picture.");
  return new Uint8Array(await blob.arrayBuffer());
}

/** A file name of the title's words. */
export function fileName(words: string, ending: string): string {
  return `${words.trim().toLowerCase().replace(/[^\p{L}\p{N}]+/gu, "-").replace(/^-+|-+$/g, "").slice(0, 60) || "chart"}.${ending}`;
}
