import { defineConfig } from "vitest/config";

export default defineConfig({
  test: {
    include: ["test/**/*.test.ts"],
    setupFiles: ["test/setup.ts"],
    globalSetup: [".build/test-setup.mjs"],
    testTimeout: 60_000,
    hookTimeout: 60_000,
  },
});
