// `npm run build`: the bundler's door is TypeScript, so it is bundled first and then run.

import { build } from "esbuild";
import { rm } from "node:fs/promises";
import { fileURLToPath, pathToFileURL } from "node:url";

const top = fileURLToPath(new URL("../..", import.meta.url));
const runner = fileURLToPath(new URL("../../.build/bundle.mjs", import.meta.url));

export async function buildAll() {
  const started = performance.now();
  await build({ entryPoints: [fileURLToPath(new URL("./bundle.ts", import.meta.url))], outfile: runner, bundle: true, platform: "node", format: "esm", target: "node20", external: ["esbuild", "@gfx/zopfli"], logLevel: "warning" });
  const { bundle } = await import(`${pathToFileURL(runner).href}?${Date.now()}`);
  const built = await bundle(top);
  await rm(runner);
  for (const { file, bytes } of built) console.log(`${file.padEnd(18)} ${(bytes / 1000).toFixed(0).padStart(6)} kB`);
  console.log(`built in ${Math.round(performance.now() - started)} ms`);
}

if (process.argv[1] === fileURLToPath(import.meta.url)) await buildAll();
