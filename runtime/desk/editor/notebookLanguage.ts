// The language of the editor: Markdown, with our cells' own reading inside their fences.

import { javascriptLanguage } from "@codemirror/lang-javascript";
import { markdown, markdownLanguage } from "@codemirror/lang-markdown";
import { StreamLanguage } from "@codemirror/language";
import type { StreamParser } from "@codemirror/language";
import type { Extension } from "@codemirror/state";
import type { Catalogue } from "../catalogue.ts";

export function notebookLanguage(catalogue: Catalogue): Extension {
  const functions = new Set([...catalogue.functions.map((entry) => entry.name.split(".")[0]), ...catalogue.kinds.filter((kind) => kind.callable).map((kind) => kind.name)]);
  const cell = StreamLanguage.define(cellReader(functions));
  const byKind = new Map(catalogue.kinds.map((kind) => [`${kind.name}:`, kind.body === "code" ? javascriptLanguage : cell]));
  return markdown({ base: markdownLanguage, codeLanguages: (info) => byKind.get(info) ?? null, completeHTMLTags: false });
}

interface Reading { /** Open brackets. */ depth: number; /** The comment or template that runs over the line's end. */ inside: "comment" | "template" | null }

/** Colours the body of a cell: options at column 0, then an expression. It need not be right about broken text, only steady. */
function cellReader(functions: ReadonlySet<string>): StreamParser<Reading> {
  return {
    name: "cell",
    startState: () => ({ depth: 0, inside: null }),
    copyState: (state) => ({ ...state }),
    token(stream, state) {
      if (state.inside === "comment") { state.inside = stream.skipTo("*/") ? (stream.match("*/"), null) : (stream.skipToEnd(), "comment"); return "comment"; }
      if (state.inside === "template") return template(stream, state);
      if (stream.sol() && state.depth === 0 && (stream.match(/^[A-Za-z_$][\w$]*(?=\s*:)/) || stream.match(/^"(?:[^"\\]|\\.)*"(?=\s*:)/))) return "propertyName";
      if (stream.eatSpace()) return null;
      if (stream.match("//")) { stream.skipToEnd(); return "comment"; }
      if (stream.match("/*")) { state.inside = "comment"; return "comment"; }
      if (stream.match(/^"(?:[^"\\]|\\.)*"?/) || stream.match(/^'(?:[^'\\]|\\.)*'?/)) return "string";
      if (stream.match("`")) { state.inside = "template"; return template(stream, state); }
      if (stream.match(/^(?:\d[\d_]*\.?[\d_]*|\.\d+)(?:e[+-]?\d+)?/i)) return "number";
      if (stream.match(/^(?:true|false)\b/)) return "bool";
      if (stream.match(/^(?:null|NaN|undefined|Infinity)\b/)) return "null";
      const name = stream.match(/^[A-Za-z_$][\w$]*/);
      if (name) return functions.has(stream.current()) && /^\s*[.(]/.test(stream.string.slice(stream.pos)) ? "variableName.function" : "variableName";
      const sign = stream.next();
      if (sign === "(" || sign === "[" || sign === "{") state.depth++;
      else if ((sign === ")" || sign === "]" || sign === "}") && state.depth > 0) state.depth--;
      return "operator";
    },
  };
}

function template(stream: Parameters<StreamParser<Reading>["token"]>[0], state: Reading): string {
  while (!stream.eol()) {
    const sign = stream.next();
    if (sign === "\\") stream.next();
    else if (sign === "`") { state.inside = null; break; }
  }
  return "string";
}
