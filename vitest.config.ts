import { defineConfig } from "vitest/config";

// Tests run from source (the `mono-src` export condition), so that a test never sees a stale build.
const shared = {
  resolve: { conditions: ["mono-src"] },
  ssr: { resolve: { conditions: ["mono-src"] } },
  oxc: { jsx: { runtime: "automatic" as const, importSource: "preact" } },
};

export default defineConfig({
  ...shared,
  test: {
    projects: [
      {
        ...shared,
        test: {
          name: "unit",
          include: ["packages/*/test/**/*.test.{ts,tsx}", "services/*/test/**/*.test.{ts,tsx}"],
          testTimeout: 30_000,
          hookTimeout: 120_000,
        },
      },
      {
        ...shared,
        test: {
          // What crosses packages, against real parts: one file at a time, for they share two cores and a broker.
          name: "whole",
          include: ["test/{oracle,journeys,browser,lint,chaos,load}/**/*.test.ts"],
          testTimeout: 300_000,
          hookTimeout: 300_000,
          fileParallelism: false,
        },
      },
    ],
  },
});
