// A path's data in few bytes: steps from point to point, in tenths of a pixel.

/** How many numbers each command takes. */
const takes: Readonly<Record<string, number>> = { m: 2, l: 2, t: 2, h: 1, v: 1, c: 6, s: 4, q: 4, a: 7, z: 0 };

/** @param d  path data as SVG 1.1 has it
 *  @param by moves the path by so many pixels
 *  @returns path data that starts with an absolute place, so that two of them may follow each other; no point is further than 0.05 pixels from where it was */
export function shortPath(d: string, by: readonly [number, number] = [0, 0]): string {
  // Where the given path is, in pixels; where the printed one is, in whole tenths, so that rounding never adds up.
  let at = [...by], start = at, pen = [0, 0], penStart = pen, printed = "", last = "";
  const put = (command: string, ...numbers: readonly number[]): void => {
    // A repeated command need not be named; after a move its name would mean a line.
    if (command !== last || command === "m") printed += command;
    for (const number of numbers) { const text = brief(number); printed += /[a-zA-Z]$/.test(printed) || text.startsWith("-") ? text : ` ${text}`; }
    last = command;
  };
  const lineTo = ([dx, dy]: readonly number[]): void => {
    if (dy === 0) { if (dx !== 0) put("h", dx); } else if (dx === 0) put("v", dy); else put("l", dx, dy);
  };
  for (const [, letter, rest] of d.matchAll(/([a-zA-Z])([^a-zA-Z]*(?:e-?\d[^a-zA-Z]*)*)/g)) {
    const kind = letter.toLowerCase(), absolute = kind !== letter, width = takes[kind];
    if (width === undefined) throw new RangeError(`shortPath: ${letter} is no path command`);
    const numbers = (rest.match(/-?(?:\d+\.?\d*|\.\d+)(?:e-?\d+)?/g) ?? []).map(Number);
    if (kind === "z") { put("z"); at = start; pen = penStart; continue; }
    for (let i = 0; i < numbers.length; i += width) {
      const given = numbers.slice(i, i + width);
      const from = absolute ? by : at;
      const [x, y] = kind === "h" ? [from[0] + given[0], at[1]] : kind === "v" ? [at[0], from[1] + given[0]] : [from[0] + given[width - 2], from[1] + given[width - 1]];
      const steps = (pairs: readonly number[]): number[] => pairs.map((number, k) => tenths(from[k % 2] + number) - pen[k % 2]);
      const step = [tenths(x) - pen[0], tenths(y) - pen[1]];
      if (kind === "m" && i === 0) {
        if (printed === "") put("M", tenths(x), tenths(y)); else put("m", ...step);
        start = [x, y]; penStart = [tenths(x), tenths(y)];
      } else if (kind === "a") put("a", ...radii(given[0], given[1], step), given[2] * 10, given[3] * 10, given[4] * 10, ...step);
      else if (kind === "c" || kind === "s" || kind === "q") put(kind, ...steps(given));
      else if (kind === "t") put("t", ...step);
      else lineTo(step);
      at = [x, y]; pen = [tenths(x), tenths(y)];
    }
  }
  return printed;
}

/** Radii of an arc, in tenths. Half a circle stays one: a radius longer than half its step would bulge. */
function radii(rx: number, ry: number, [dx, dy]: readonly number[]): readonly [number, number] {
  const half = Math.round(Math.hypot(dx, dy) * 5) / 10;
  return rx === ry && Math.abs(rx * 10 - half) <= 0.8 ? [half, half] : [Math.round(rx * 100) / 10, Math.round(ry * 100) / 10];
}

/** Whole tenths of a pixel; never the negative zero. */
function tenths(pixels: number): number { return Math.round(pixels * 10) + 0; }

function brief(tenth: number): string { return String(tenth / 10).replace(/^(-?)0\./, "$1."); }
