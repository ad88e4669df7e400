import { defineConfig } from "drizzle-kit";

export default defineConfig({
  dialect: "postgresql",
  schema: "./packages/api/src/db/schema/index.ts",
  out: "./drizzle",
  // Roles are cluster-wide and made by the migrating step before the first migration.
  entities: { roles: false },
});
