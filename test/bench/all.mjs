// `npm run bench`: bundles and runs the benchmarks of this folder one after the other, and prints what they measured.
// `npm run bench -- arma page` runs those alone. A benchmark informs; it never fails a build.

import { build } from "esbuild";
import { mkdirSync, readdirSync } from "node:fs";
import { cpus } from "node:os";
import { pathToFileURL } from "node:url";

const folder = new URL(".", import.meta.url).pathname;
const cache = `${folder}../../.cache/bench/`;
mkdirSync(cache, { recursive: true });

const asked = process.argv.slice(2);
const names = readdirSync(folder).filter((file) => file.endsWith(".ts")).map((file) => file.slice(0, -3));
const unknown = asked.filter((name) => !names.includes(name));
if (unknown.length > 0) {
  console.error(`No benchmark ${unknown.join(", ")}. There are: ${names.join(", ")}.`);
  process.exit(2);
}

console.log(`Node ${process.version}, ${cpus().length} cores (${cpus()[0]?.model.trim()}), ${new Date().toISOString().slice(0, 10)}`);
for (const name of asked.length > 0 ? asked : names) {
  const outfile = `${cache}${name}.mjs`;
  await build({ entryPoints: [`${folder}${name}.ts`], outfile, bundle: true, platform: "node", format: "esm", target: "node20", packages: "external", logLevel: "error" });
  console.log(`\n== ${name}`);
  const { bench } = await import(pathToFileURL(outfile).href);
  await bench((line) => console.log(line));
}
