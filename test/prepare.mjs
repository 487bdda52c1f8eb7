// Brings a new machine to where the tests can run, and skips what is already there: packages, Debian's Chromium, the build.

import { execFileSync, spawnSync } from "node:child_process";
import { existsSync, readFileSync, statSync } from "node:fs";

const top = new URL("..", import.meta.url).pathname;

/** Runs a command in the project's folder, its output shown; throws where it fails. */
export function run(command, ...args) {
  const { status, error } = spawnSync(command, args, { cwd: top, stdio: "inherit" });
  if (error) throw error;
  if (status !== 0) throw new Error(`${[command, ...args].join(" ")} ended with exit code ${status}`);
}

/** npm's own record of what it installed is as new as the lock file only when nothing is missing. */
function packagesAreCurrent() {
  const record = `${top}node_modules/.package-lock.json`;
  if (!existsSync(record)) return false;
  const installed = JSON.parse(readFileSync(record, "utf8")).packages;
  const wanted = JSON.parse(readFileSync(`${top}package-lock.json`, "utf8")).packages;
  return Object.entries(wanted).every(([path, it]) => path === "" || it.optional || installed[path]?.version === it.version);
}

export function preparePackages() {
  if (packagesAreCurrent()) return;
  console.log("installing packages (npm ci)");
  run("npm", "ci");
}

/** Path of a Chromium that is there, or undefined. */
export function chromiumPath() {
  return ["/usr/bin/chromium", "/usr/bin/chromium-browser"].find((path) => existsSync(path) && statSync(path).isFile());
}

export function prepareChromium() {
  if (chromiumPath()) return;
  console.log("installing Debian's Chromium (apt-get)");
  const asRoot = process.getuid?.() === 0 ? [] : ["sudo"];
  const apt = (...args) => run(...asRoot, "apt-get", ...args);
  apt("update");
  apt("install", "-y", "--no-install-recommends", "chromium", "fonts-dejavu-core");
  execFileSync(chromiumPath() ?? "chromium", ["--version"], { stdio: "inherit" });
}
