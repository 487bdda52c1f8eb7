// Which names a cell may bear.

/** Words that ECMAScript keeps for itself, in module code too. */
const RESERVED = new Set(("await break case catch class const continue debugger default delete do else enum export extends false finally for function if "
  + "implements import in instanceof interface let new null package private protected public return static super switch this throw true try typeof var void while with yield "
  + "arguments eval").split(" "));

/** Names with a fixed value. */
export const FIXED: ReadonlySet<string> = new Set(["free", "NaN", "Infinity", "undefined"]);

function isIdentifier(name: string): boolean {
  return /^[\p{ID_Start}$_][\p{ID_Continue}$\u200c\u200d]*$/u.test(name);
}

/** null where the name may be a cell's; else why not. */
export function nameFault(name: string, kinds: ReadonlySet<string>): string | null {
  if (!isIdentifier(name)) {
    const mended = name.replace(/[^\p{ID_Continue}$]+(.)?/gu, (_, next: string | undefined) => (next ?? "").toUpperCase());
    const hint = isIdentifier(mended) && !RESERVED.has(mended) ? `, such as \`${mended}\`` : "";
    return `\`${name}\` is not a name: use letters, digits, \`_\` and \`$\`, a letter first${hint}`;
  }
  if (kinds.has(name)) return `\`${name}\` is a kind of cell and cannot be a cell's name: try \`${name}1\` or say what it holds`;
  if (RESERVED.has(name)) return `\`${name}\` is a reserved word of the expression language: choose another name`;
  if (FIXED.has(name) || name === "__proto__" || name === "constructor" || name === "prototype") return `\`${name}\` has a fixed meaning in expressions: choose another name`;
  return null;
}
