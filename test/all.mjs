// `npm test`: prepares the machine, then types, lint, build, unit and property tests, and the browser tests, the fast ones first.

import { prepareChromium, preparePackages, run } from "./prepare.mjs";

try {
  preparePackages();
  run("npm", "run", "--silent", "types");
  run("npm", "run", "--silent", "lint");
  run("npm", "run", "--silent", "build");
  run("npm", "run", "--silent", "unit");
  prepareChromium();
  run("npm", "run", "--silent", "browser");
} catch (error) {
  console.error(error.message);
  process.exitCode = 1;
}
