// ECMAScript of the notebook's own, run isolated.

import { OptionError, type CodeBody, type Kind } from "./kind.ts";
import { inWords } from "./parts/describe.ts";
import { mixedFormat } from "./parts/format.ts";


export const script: Kind<CodeBody, Readonly<Record<string, unknown>>> = {
  name: "script",
  sentence: "ECMAScript whose exports become names; it runs isolated, with copies of the values that it reads.",
  options: {},
  body: "code",
  example: "export const share = 0.5;",
  run: async ({ source, inputs }, context) => {
    const exported = await context.importCode(source, inputs);
    if (Object.hasOwn(exported, "default")) throw new OptionError(null, "a script exports names, as in `export const share = …`; a default export has none");
    return exported;
  },
  show: (result) => {
    const rows = Object.entries(result).map(([name, value]) => [name, typeof value === "number" || typeof value === "boolean" ? value : inWords(value)]);
    if (rows.length === 0) return [{ part: "text", tone: "note", text: "This script exports nothing, so nothing can refer to it." }];
    return [{ part: "table", columns: [{ title: "export" }, { title: "value", align: "right", format: mixedFormat(rows.map(([, value]) => value)) }], rows }];
  },
};
