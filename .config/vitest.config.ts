import { defineConfig } from "vitest/config";

/** Unit, property and command-line tests. The browser tests run after them, one file at a time (see test/all.mjs). */
export default defineConfig({
  test: {
    root: new URL("..", import.meta.url).pathname,
    include: ["test/**/*.test.ts"],
    exclude: ["test/browser/**", "test/bench/**"],
    testTimeout: 20_000,
  },
});
