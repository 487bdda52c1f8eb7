import { defineConfig } from "vitest/config";

/** Tests in a real Chromium and of the installed package: one file at a time, so that their clocks are their own. */
export default defineConfig({
  test: {
    root: new URL("..", import.meta.url).pathname,
    include: ["test/browser/**/*.test.ts"],
    fileParallelism: false,
    testTimeout: 180_000,
    hookTimeout: 180_000,
    // A poll waits for what a person would wait for; how long it took is the benchmarks' business.
    expect: { poll: { timeout: 15_000 } },
  },
});
