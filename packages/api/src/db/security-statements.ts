/**
 * Prints the security migration: forced row security, privileges by `schema/grants.ts`, then the functions of
 * `security/*.sql`. Its output is checked in as a migration of its own; every statement may be run again, so a later
 * migration that adds tables is printed the same way.
 *
 *   npx tsx packages/api/src/db/security-statements.ts > drizzle/00NN_security.sql
 */
import fs from "node:fs";
import path from "node:path";
import { grants, type Grant } from "./schema/grants.ts";

const privileges: Record<Grant, string | null> = {
  "insert-only": "select, insert",
  updatable: "select, insert, update",
  changeable: "select, update",
  disposable: "select, insert, update, delete",
  "read-only": "select",
  none: null,
};

/** Tables that hold nothing of any lab: reachable before one is known, so without row security. */
export const withoutRowSecurity = new Set(["sessions", "rate_counters"]);

function tableStatements(table: string, grant: Grant): string {
  const lines = [`revoke all on ${table} from public, wavekeep_app;`];
  if (!withoutRowSecurity.has(table)) {
    lines.unshift(`alter table ${table} enable row level security;`, `alter table ${table} force row level security;`);
  }
  const given = privileges[grant];
  if (given !== null) lines.push(`grant ${given} on ${table} to wavekeep_app;`);
  if (grant === "insert-only") {
    lines.push(
      `drop trigger if exists refuse_truncate on ${table};`,
      `create trigger refuse_truncate before truncate on ${table} for each statement execute function refuse_truncate();`,
    );
  }
  return lines.join("\n");
}

export function securityStatements(): string {
  const folder = path.join(import.meta.dirname, "security");
  const files = fs
    .readdirSync(folder)
    .filter((name) => name.endsWith(".sql"))
    .sort();
  const parts = [
    "grant usage on schema public to wavekeep_app;",
    ...files.map((name) => fs.readFileSync(path.join(folder, name), "utf8").trim()),
    ...Object.entries(grants).map(([table, grant]) => tableStatements(table, grant)),
  ];
  return `${parts.join("\n--> statement-breakpoint\n")}\n`;
}

if (process.argv[1] === import.meta.filename) process.stdout.write(securityStatements());
