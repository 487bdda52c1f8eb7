// A drawn chart as a file of its own: SVG with real colours, or PNG.

/** Puts the page's present colours in place of its variables, on the page's present ground. */
export function standaloneSvg(svg: string, from: Element): string {
  const style = getComputedStyle(from);
  const resolved = svg.replace(/var\((--[\w-]+)\)/g, (_, name: string) => style.getPropertyValue(name).trim() || "currentColor");
  const ground = style.getPropertyValue("--ground").trim() || "#fff";
  return resolved.replace(/<svg ([^>]*)>/, (tag) => `${tag}<rect width="100%" height="100%" fill="${ground}"/>`);
}

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
