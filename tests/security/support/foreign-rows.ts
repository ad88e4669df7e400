/**
 * Rows of any table for any lab, made from the catalogue alone: every column gets a value of its type that its checks and
 * keys take. So a new table is in the tests of tenancy the day it is added.
 */
import { randomUUID } from "node:crypto";

export interface Queries {
  query(text: string, values?: unknown[]): Promise<{ rows: Record<string, unknown>[] }>;
}

export interface TenantKey {
  name: string;
  table: string;
  columns: string[];
  target: string;
  targetColumns: string[];
}

/** Foreign keys of tables that carry a lab. */
export async function listTenantKeys(db: Queries): Promise<TenantKey[]> {
  const { rows } = await db.query(`
    select c.conname as name, c.conrelid::regclass::text as "table", c.confrelid::regclass::text as target,
      (select array_agg(a.attname::text order by k.place) from unnest(c.conkey) with ordinality k(num, place) join pg_attribute a on a.attrelid = c.conrelid and a.attnum = k.num) as columns,
      (select array_agg(a.attname::text order by k.place) from unnest(c.confkey) with ordinality k(num, place) join pg_attribute a on a.attrelid = c.confrelid and a.attnum = k.num) as "targetColumns"
    from pg_constraint c
    where c.contype = 'f' and c.connamespace = 'public'::regnamespace
      and exists (select 1 from pg_attribute a where a.attrelid = c.conrelid and a.attname = 'lab_id')
      -- People stand outside the labs: a membership is what joins the two.
      and not (c.conrelid = 'memberships'::regclass and c.confrelid = 'people'::regclass)
    order by 1`);
  return rows as unknown as TenantKey[];
}

interface Column {
  name: string;
  type: string;
  nullable: boolean;
  generated: boolean;
}

async function listColumns(db: Queries, table: string): Promise<Column[]> {
  const { rows } = await catalogue(db).query(
    `select a.attname::text as name, format_type(a.atttypid, null) as type, not a.attnotnull as nullable, a.attgenerated <> '' as generated
       from pg_attribute a where a.attrelid = $1::regclass and a.attnum > 0 and not a.attisdropped order by a.attnum`,
    [table],
  );
  return rows as unknown as Column[];
}

let catalogueOf: Queries | null = null;
/** The catalogue is read as whoever came first (the owner): row security says nothing about it. */
function catalogue(db: Queries): Queries {
  catalogueOf ??= db;
  return catalogueOf;
}

/**
 * Take every check constraint away: what a number or a word may be is not on trial here, and keys and policies alone are
 * to decide. Only ever on a database of a test's own.
 */
export async function dropChecks(db: Queries): Promise<void> {
  const { rows } = await db.query(
    "select conrelid::regclass::text as \"table\", conname as name from pg_constraint where contype = 'c' and connamespace = 'public'::regnamespace",
  );
  for (const { table, name } of rows as { table: string; name: string }[])
    await db.query(`alter table ${table} drop constraint "${name}"`);
}

let counter = 0;

/**
 * One more row of a table in a lab, with everything it must point at.
 *
 * @returns the row as stored, with its place in the table (`ctid`)
 * @throws what the database says
 */
export async function fillTable(db: Queries, table: string, labId: string): Promise<Record<string, unknown>> {
  const columns = await listColumns(db, table);
  // The widest key first: a narrower one over the same columns then holds as well.
  const keys = (await listTenantKeys(catalogue(db)))
    .filter((key) => key.table === table)
    .sort((a, b) => b.columns.length - a.columns.length);
  const pointing = new Set<string>();
  const values: Record<string, unknown> = {};
  for (const column of columns) {
    if (column.generated) continue;
    values[column.name] = column.nullable ? null : valueFor(column);
  }
  if ("lab_id" in values) values["lab_id"] = labId;
  for (const key of keys) {
    const wanted = key.columns.filter((column) => column !== "lab_id");
    if (wanted.length === 0 || wanted.every((column) => columns.find(({ name }) => name === column)!.nullable))
      continue;
    if (wanted.every((column) => pointing.has(column))) continue;
    // Made new each time, so that unique keys are kept.
    const pointed = await fillTable(catalogue(db), key.target, labId);
    key.columns.forEach((column, place) => (values[column] = pointed[key.targetColumns[place]!]));
    for (const column of wanted) pointing.add(column);
  }
  if (table === "memberships") Object.assign(values, { person_id: await newPerson(db), roles: [] });
  if (table === "trail_entries") return appendToTrail(db, labId);
  if (table === "trail_personal" || table === "signed_heads")
    values["number"] = (await appendToTrail(catalogue(db), labId))["number"];
  const names = Object.keys(values);
  const { rows } = await db.query(
    `insert into ${table} (${names.map((name) => `"${name}"`).join(", ")}) values (${names.map((_, place) => `$${place + 1}`).join(", ")}) returning *, ctid::text as ctid`,
    names.map((name) => values[name]),
  );
  return rows[0]!;
}

async function newPerson(db: Queries): Promise<string> {
  const id = randomUUID();
  await catalogue(db).query("insert into people (id, email, name, created_at) values ($1, $2, 'Somebody', now())", [
    id,
    `${id}@somewhere.example`,
  ]);
  return id;
}

async function appendToTrail(db: Queries, labId: string): Promise<Record<string, unknown>> {
  const { rows } = await db.query(
    `insert into trail_entries (lab_id, number, at, action, shape, demo, canonical, previous_hash, hash)
      select $1, n, clock_timestamp(), 'lab.changed', 'person', false, text, previous, encode(sha256(convert_to(text, 'UTF8')), 'hex')
        from (select n, '{"number":' || n || '}' as text, coalesce((select hash from trail_entries where lab_id = $1 and number = n - 1), repeat('0', 64)) as previous
          from (select coalesce(max(number), 0) + 1 as n from trail_entries where lab_id = $1) next) entry
      returning *, ctid::text as ctid`,
    [labId],
  );
  return rows[0]!;
}

function valueFor(column: Column): unknown {
  counter += 1;
  switch (column.type) {
    case "uuid":
      return randomUUID();
    case "text":
    case "character varying":
      return column.name === "sha256" ? counter.toString(16).padStart(64, "0") : `${column.name}-${counter}`;
    case "integer":
    case "bigint":
      return counter;
    case "double precision":
    case "numeric":
      return counter;
    case "boolean":
      return false;
    case "date":
      return "2030-01-01";
    case "bytea":
      return Buffer.from("bytes");
    case "jsonb":
    case "json":
      return "{}";
    case "text[]":
      return [];
    default:
      if (column.type.startsWith("timestamp")) return new Date().toISOString();
      throw new Error(`No value is known for ${column.name} of type ${column.type}.`);
  }
}
