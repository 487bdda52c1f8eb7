// The one door to the bundler: makes of the source everything that is shipped, in the folder `.build`.
//   engine, cells and stdlib  ->  a worker's text  ->  beside the page's script in the frame's document
//   the desk                  ->  desk.js, desk.css, desk.html
//   the command               ->  lagbook.js, and pieces that it loads when they are needed

import { gzipAsync } from "@gfx/zopfli";
import { build } from "esbuild";
import type { BuildOptions, Plugin } from "esbuild";
import { chmod, copyFile, mkdir, readFile, readdir, rm, writeFile } from "node:fs/promises";
import { join } from "node:path";
import { pathToFileURL } from "node:url";
import { dense } from "../desk/dense.ts";
import { frameDocument } from "./frame.ts";

export interface Built { readonly file: string; readonly bytes: number }

/** Builds all parts. @param top the project's folder */
export async function bundle(top: string): Promise<readonly Built[]> {
  const out = join(top, ".build");
  await mkdir(out, { recursive: true });
  const version = (JSON.parse(await readFile(join(top, "package.json"), "utf8")) as { version: string }).version;
  const define = { LAGBOOK_VERSION: JSON.stringify(version) };
  const from = (path: string): string => join(top, "runtime", path);
  // The parts that nothing else waits for are made side by side with the three stages of the frame.
  await Promise.all([
    frame(from, define, out), desk(from, define, out), command(from, define, out), catalogue(from, define, out),
    text(from("desk/shell.ts"), { define }).then((script) => writeFile(join(out, "shell.js"), script)),
  ]);
  const names = (await readdir(out)).filter((name) => /\.(js|html|css|json|txt)$/.test(name)).sort();
  return Promise.all(names.map(async (file) => ({ file, bytes: (await readFile(join(out, file))).length })));
}

async function frame(from: (path: string) => string, define: Record<string, string>, out: string): Promise<void> {
  const engine = await text(from("host/engineWorker.ts"), { define: { ...define, requestAnimationFrame: "lagbookSoon" }, inject: [from("host/soon.ts")], conditions: ["worker"] });
  const page = await text(from("page/entry.ts"), { define });
  const document = frameDocument(page, engine);
  await writeFile(join(out, "frame.html"), document);
  // As it stands in every exported file; packed here once, there is time for a packer that tries harder.
  await writeFile(join(out, "live.txt"), dense(await gzipAsync(Buffer.from(document), { numiterations: 1 })));
}

async function desk(from: (path: string) => string, define: Record<string, string>, out: string): Promise<void> {
  await build({ ...browser, entryPoints: [from("desk/desk.ts")], outfile: join(out, "desk.js"), define });
  await build({ ...browser, entryPoints: [from("desk/desk.css")], outfile: join(out, "desk.css"), loader: {} });
  await build({ ...browser, entryPoints: [from("page/page.css")], outfile: join(out, "page.css"), loader: {} });
  await copyFile(from("desk/desk.html"), join(out, "desk.html"));
}

async function command(from: (path: string) => string, define: Record<string, string>, out: string): Promise<void> {
  // Pieces bear a hash of their content: those of an earlier build would stay for ever.
  await rm(join(out, "pieces"), { recursive: true, force: true });
  await build({
    entryPoints: [from("host/lagbook.ts"), from("host/computing.ts"), from("host/helper.ts")], outdir: out, chunkNames: "pieces/[name]-[hash]", bundle: true, splitting: true, format: "esm", platform: "node", target: "node20",
    minify: true, keepNames: false, legalComments: "none", loader: { ".css": "text" }, define: { ...define, LAGBOOK_BUNDLED: "true" }, logLevel: "warning",
    // Packages written for `require` ask for Node's own modules by it, and for the name of their file.
    banner: { js: "#!/usr/bin/env node\nimport { createRequire as lagbookRequire } from \"node:module\"; import { fileURLToPath as lagbookPath } from \"node:url\"; const require = lagbookRequire(import.meta.url), __filename = lagbookPath(import.meta.url);" },
  });
  await chmod(join(out, "lagbook.js"), 0o755);
}

async function catalogue(from: (path: string) => string, define: Record<string, string>, out: string): Promise<void> {
  const made = join(out, "catalogue.mjs");
  await build({ entryPoints: [from("host/catalogue.ts")], outfile: made, bundle: true, format: "esm", platform: "node", target: "node20", define, logLevel: "warning" });
  const { catalogueText } = await import(`${pathToFileURL(made).href}?${Date.now()}`) as { catalogueText: () => string };
  await writeFile(join(out, "catalogue.json"), catalogueText());
  await rm(made);
}

/** Parts of the chart library that no Vega-Lite view asks for: trees, forces, clouds of words, cross filters, placed labels. */
const unaskedTransforms = /node_modules\/vega-(?:hierarchy|force|wordcloud|crossfilter|label)\//;

/** Parts of vega-embed that the page's charts never come to, by what they export. Their specifications name no schema (its reader, and
 *  versions compared) and no theme, are patched by a function (not by a list of changes) and run by our closures; they have a tooltip of
 *  our own, and neither a menu, which prints the source and posts it to an editor, nor the menu's style. */
const unaskedOfEmbed: Readonly<Record<string, readonly string[]>> = {
  "vega-schema-url-parser": ["default"], "semver/functions/satisfies.js": ["default"], "vega-themes": [], "fast-json-patch/index.mjs": ["applyPatch"],
  "vega-interpreter": ["expressionInterpreter"], "vega-tooltip": ["Handler"], "json-stringify-pretty-compact": ["default"], "./post.js": ["default"], "./style.js": ["default"],
};

/** Leaves both out. What should be asked for after all says so by its name. */
const withoutUnasked: Plugin = {
  name: "without unasked",
  setup(made) {
    made.onLoad({ filter: unaskedTransforms }, () => ({ contents: "" }));
    // Its built file has some of the parts inside; in its source they stand apart.
    made.onResolve({ filter: /^vega-embed$/ }, async ({ kind, resolveDir, pluginData }) => {
      if (pluginData === "as it is") return null;
      const { path } = await made.resolve("vega-embed", { kind, resolveDir, pluginData: "as it is" });
      return { path: path.replace(/build.embed\.js$/, "src/embed.ts") };
    });
    made.onResolve({ filter: /./ }, ({ path, importer }) => /vega-embed.src.embed\.ts$/.test(importer) && Object.hasOwn(unaskedOfEmbed, path) ? { path, namespace: "unasked" } : null);
    made.onLoad({ filter: /./, namespace: "unasked" }, ({ path }) => ({
      contents: unaskedOfEmbed[path].map((name) => `export ${name === "default" ? "default" : `const ${name} =`} () => { throw new Error(${JSON.stringify(`${path} was left out of the page`)}); };`).join("\n"),
    }));
  },
};

const browser: BuildOptions = { plugins: [withoutUnasked], bundle: true, minify: true, format: "iife", platform: "browser", target: "es2022", legalComments: "none", loader: { ".css": "text" }, logLevel: "warning" };

/** The script of one entry, as text. */
async function text(entry: string, more: BuildOptions): Promise<string> {
  const result = await build({ ...browser, ...more, entryPoints: [entry], write: false });
  const [file] = result.outputFiles ?? [];
  if (!file) throw new Error(`nothing was built from ${entry}`);
  return file.text;
}
