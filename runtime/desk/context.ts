// Where in a notebook's text a place is, found without parsing the whole: what completion and help ask at every key.

export type Context =
  | { readonly in: "prose" }
  /** In an expression of the prose: after `](=`. `expression` starts there. */
  | { readonly in: "number"; readonly expression: number }
  /** On a fence's opening line, after its marks. */
  | { readonly in: "fence"; readonly from: number; readonly typed: string }
  /** In a cell, at the start of a line or in an option's name. `given` are the options that the cell has. */
  | { readonly in: "option"; readonly kind: string; readonly from: number; readonly given: readonly string[] }
  /** In the expression of an option (null: before any). */
  | { readonly in: "expression"; readonly kind: string; readonly option: string | null; readonly expression: number };

interface Fence { readonly mark: string; readonly kind: string; readonly bodyFrom: number; readonly info: number; readonly infoText: string }

/** The context of `position` in `text`. Cost O(position), some tenths of a millisecond for 5,000 lines. */
export function contextAt(text: string, position: number): Context {
  const fence = fenceAt(text, position);
  if (!fence) return inProse(text, position);
  if (position < fence.bodyFrom || fence.bodyFrom < 0) return { in: "fence", from: fence.info, typed: text.slice(fence.info, position) };
  if (fence.kind === "") return { in: "prose" };
  return inCell(text, position, fence);
}

/** The fence that is open at `position`, or whose opening line holds it. */
function fenceAt(text: string, position: number): Fence | null {
  let open: Fence | null = null;
  let from = 0;
  while (from <= position) {
    const end = text.indexOf("\n", from);
    const to = end < 0 ? text.length : end;
    const line = text.slice(from, to).replace(/\r$/, "");
    const match = /^( {0,3})(`{3,}|~{3,})(.*)$/.exec(line);
    if (match && open === null) {
      const [, indent, mark, info] = match;
      if (mark[0] !== "`" || !info.includes("`")) {
        const at = from + indent.length + mark.length;
        open = { mark, kind: /^\s*([A-Za-z]+):/.exec(info)?.[1] ?? "", bodyFrom: end < 0 ? -1 : to + 1, info: at, infoText: info };
        if (position < at) return null;
      }
    } else if (match && open !== null && match[2].startsWith(open.mark) && match[3].trim() === "" && position > to) {
      open = null;
    }
    if (end < 0) break;
    from = to + 1;
  }
  return open;
}

function inProse(text: string, position: number): Context {
  const line = text.slice(text.lastIndexOf("\n", position - 1) + 1, position);
  const start = line.lastIndexOf("](");
  if (start < 0) return { in: "prose" };
  const opened = /^\]\((<?)=/.exec(line.slice(start));
  if (!opened) return { in: "prose" };
  const inside = line.slice(start + opened[0].length);
  if (opened[1] ? />/.test(inside.replace(/\\[<>]/g, "")) : closes(inside)) return { in: "prose" };
  return { in: "number", expression: position - inside.length };
}

/** Whether an expression without angle brackets has ended: its parentheses closed more often than they opened. */
function closes(text: string): boolean {
  let depth = 0;
  for (const sign of text) {
    if (sign === "(") depth++;
    else if (sign === ")" && --depth < 0) return true;
  }
  return false;
}

function inCell(text: string, position: number, fence: Fence): Context {
  const end = text.indexOf(`\n${fence.mark}`, fence.bodyFrom - 1);
  const body = text.slice(fence.bodyFrom, end < 0 ? text.length : end);
  const given = [...body.matchAll(/^([A-Za-z_$][\w$]*)\s*:/gm)].map((match) => match[1]);
  const lineFrom = text.lastIndexOf("\n", position - 1) + 1;
  const line = text.slice(lineFrom, position);
  if (/^[A-Za-z_$]?[\w$]*$/.test(line) && !bracketOpen(text.slice(fence.bodyFrom, lineFrom))) {
    return { in: "option", kind: fence.kind, from: lineFrom, given: given.filter((name) => name !== line) };
  }
  const before = text.slice(fence.bodyFrom, position);
  const heads = [...before.matchAll(/^([A-Za-z_$][\w$]*|"[^"\n]*")\s*:/gm)];
  const last = heads.findLast((head) => !bracketOpen(before.slice(0, head.index)));
  if (!last) return { in: "expression", kind: fence.kind, option: null, expression: fence.bodyFrom };
  return { in: "expression", kind: fence.kind, option: last[1], expression: fence.bodyFrom + last.index + last[0].length };
}

/** Whether a bracket of the body so far is still open: then a line at column 0 continues the option above it. */
function bracketOpen(body: string): boolean {
  const bare = body.replace(/"(?:[^"\\\n]|\\.)*"|'(?:[^'\\\n]|\\.)*'|`(?:[^`\\]|\\.)*`|\/\/[^\n]*|\/\*[\s\S]*?\*\//g, "");
  const count = (signs: RegExp): number => bare.match(signs)?.length ?? 0;
  return count(/[([{]/g) > count(/[)\]}]/g);
}
