// `npm run demo`: brings a new machine to the main example. Installs where packages are missing or old, builds where the
// source is newer than what was built, then opens the notebook. What is there already is left as it is.

import { spawn, spawnSync } from "node:child_process";
import { existsSync, readFileSync, readdirSync, statSync } from "node:fs";
import { join } from "node:path";
import { fileURLToPath } from "node:url";

const top = fileURLToPath(new URL("../..", import.meta.url));
const command = join(top, ".build/lagbook.js");

/** npm keeps its own record of what it installed; it says whether the lock file asks for something else. */
function packagesAreCurrent() {
  const record = join(top, "node_modules/.package-lock.json");
  if (!existsSync(record)) return false;
  const installed = JSON.parse(readFileSync(record, "utf8")).packages;
  const wanted = JSON.parse(readFileSync(join(top, "package-lock.json"), "utf8")).packages;
  return Object.entries(wanted).every(([path, it]) => path === "" || it.optional || installed[path]?.version === it.version);
}

/** Time of the newest file below a folder, in ms. */
function newest(folder) {
  let time = 0;
  for (const entry of readdirSync(folder, { withFileTypes: true })) {
    const path = join(folder, entry.name);
    time = Math.max(time, entry.isDirectory() ? newest(path) : statSync(path).mtimeMs);
  }
  return time;
}

function buildIsCurrent() {
  const parts = ["lagbook.js", "frame.html", "desk.js", "desk.css", "desk.html", "shell.js", "catalogue.json"].map((name) => join(top, ".build", name));
  if (!parts.every((path) => existsSync(path))) return false;
  const built = statSync(command).mtimeMs;
  const sources = Math.max(newest(join(top, "stdlib")), newest(join(top, "cells")), newest(join(top, "runtime")), statSync(join(top, "package-lock.json")).mtimeMs, statSync(join(top, "package.json")).mtimeMs);
  return built >= sources;
}

function run(program, ...args) {
  const { status, error } = spawnSync(program, args, { cwd: top, stdio: "inherit" });
  if (error) throw error;
  if (status !== 0) throw new Error(`${[program, ...args].join(" ")} ended with exit code ${status}`);
}

try {
  if (!packagesAreCurrent()) { console.log("installing packages (npm ci)"); run("npm", "ci"); }
  if (!buildIsCurrent()) { console.log("building"); run(process.execPath, "runtime/host/build.mjs"); }
  const child = spawn(process.execPath, [command, "open", "examples/ferry.md", ...process.argv.slice(2)], { cwd: top, stdio: "inherit" });
  // Ctrl-C reaches the child by the terminal; a signal sent to this process alone is passed on.
  for (const signal of ["SIGINT", "SIGTERM"]) process.on(signal, () => child.kill(signal));
  child.on("exit", (code) => { process.exitCode = code ?? 0; });
} catch (error) {
  console.error(error instanceof Error ? error.message : String(error));
  process.exitCode = 1;
}
