// vitest.config.ts: how the tests run: two at a time, from the repository's root, with dist built once before them.
import { defineConfig } from "vitest/config";

export default defineConfig({
  test: {
    include: ["tests/**/*.test.ts"],
    globalSetup: ["tests/tooling/build-once.ts"],
    maxWorkers: 2,
    testTimeout: 180_000,
    hookTimeout: 240_000,
  },
});
