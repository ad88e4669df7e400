import path from "node:path";
import { defineConfig } from "vitest/config";

const at = (relative: string) => path.resolve(import.meta.dirname, relative);

/**
 * One project a kind of test. Each brings what it needs: `api` a throw-away PostgreSQL with a migrated template
 * database, `browser` a whole Wavekeep started by scripts/start.mjs in a folder of its own.
 */
export default defineConfig({
  test: {
    projects: [
      {
        test: {
          name: "core",
          root: at("packages/core"),
          include: ["src/**/*.test.ts"],
          testTimeout: 120_000,
        },
      },
      {
        test: {
          name: "external",
          root: at("tests/external"),
          include: ["**/*.test.ts"],
          testTimeout: 120_000,
        },
      },
      {
        test: {
          name: "scripts",
          root: at("scripts"),
          include: ["**/*.test.ts"],
          testTimeout: 30_000,
        },
      },
      {
        test: {
          name: "api",
          root: at("."),
          include: [
            "packages/api/src/**/*.test.ts",
            "tests/api/**/*.test.ts",
            "tests/security/**/*.test.ts",
            "tests/support/**/*.test.ts",
          ],
          globalSetup: [at("tests/support/database-setup.ts")],
          testTimeout: 30_000,
          hookTimeout: 60_000,
        },
      },
      {
        extends: at("packages/web/vite.config.ts"),
        test: {
          name: "web",
          root: at("packages/web"),
          include: ["src/**/*.test.{ts,tsx}"],
          environment: "happy-dom",
          // Style sheets are read as text only, where a test asks for one with `?raw`.
          css: { include: [/\?raw/] },
          testTimeout: 15_000,
        },
      },
      {
        test: {
          name: "browser",
          root: at("tests/browser"),
          include: ["**/*.test.ts"],
          globalSetup: [at("tests/support/browser-setup.ts")],
          testTimeout: 120_000,
          hookTimeout: 60_000,
          // The tests of one file follow each other through one story; files share the two cores with the server.
          fileParallelism: false,
        },
      },
    ],
  },
});
