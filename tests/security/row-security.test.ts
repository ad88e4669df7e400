/**
 * Labs apart, asked of the database itself: hand-written SQL as the app's own login role, without any of our services.
 */
import fs from "node:fs";
import path from "node:path";
import type { PoolClient } from "pg";
import { beforeAll, expect, test } from "vitest";
import { grants } from "@wavekeep/api/db/schema/grants";
import { MIGRATION_COUNT } from "@wavekeep/api/db/schema-version";
import { withoutRowSecurity } from "@wavekeep/api/db/security-statements";
import { useTestApp } from "../support/app.ts";
import { buildLab, type TestLab } from "../support/factories.ts";
import { dropChecks, fillTable, listTenantKeys, type TenantKey } from "./support/foreign-rows.ts";

const server = useTestApp();
let ours: TestLab;
let theirs: TestLab;
beforeAll(async () => {
  ours = await buildLab(server, "Ours");
  theirs = await buildLab(server, "Theirs");
  await dropChecks(server.database.owner);
});

/** As the app's role, in a transaction that is rolled back. */
async function asApp<T>(labId: string | null, work: (client: PoolClient) => Promise<T>, personId = ""): Promise<T> {
  const client = await server.database.app.connect();
  try {
    await client.query("begin");
    await client.query("select set_config('app.lab', $1, true), set_config('app.person', $2, true)", [
      labId ?? "",
      personId,
    ]);
    return await work(client);
  } finally {
    await client.query("rollback");
    client.release();
  }
}

const owner = <Row extends object>(text: string, values: unknown[] = []) =>
  server.database.owner.query<Row & Record<string, unknown>>(text, values);

const listTables = async () =>
  (
    await owner<{ name: string }>("select tablename as name from pg_tables where schemaname = 'public' order by 1")
  ).rows.map(({ name }) => name);

const tenantTables = async () =>
  (
    await owner<{ name: string }>(
      "select table_name as name from information_schema.columns where table_schema = 'public' and column_name = 'lab_id' order by 1",
    )
  ).rows.map(({ name }) => name);

test("every table stands in the list of grants, and the database gives what the list says", async () => {
  const tables = await listTables();
  expect(Object.keys(grants).sort()).toEqual(tables);
  const wanted: Record<string, string[]> = {
    "insert-only": ["INSERT", "SELECT"],
    updatable: ["INSERT", "SELECT", "UPDATE"],
    changeable: ["SELECT", "UPDATE"],
    disposable: ["DELETE", "INSERT", "SELECT", "UPDATE"],
    "read-only": ["SELECT"],
    none: [],
  };
  for (const table of tables) {
    const { rows } = await owner<{ privilege: string }>(
      `select p as privilege from unnest(array['SELECT','INSERT','UPDATE','DELETE','TRUNCATE','REFERENCES','TRIGGER']) p
        where has_table_privilege('wavekeep_app', $1, p) order by 1`,
      [table],
    );
    expect([table, rows.map(({ privilege }) => privilege)]).toEqual([table, wanted[grants[table]!]]);
  }
});

test("row security is on and forced on every table but those of no lab", async () => {
  const { rows } = await owner<{ name: string; on: boolean; forced: boolean }>(
    "select relname as name, relrowsecurity as on, relforcerowsecurity as forced from pg_class where relnamespace = 'public'::regnamespace and relkind in ('r', 'p') order by 1",
  );
  const open = rows.filter(({ on, forced }) => !on || !forced).map(({ name }) => name);
  expect(open).toEqual([...withoutRowSecurity].sort());
});

test("no table holds the app's rows by a sequence, view or function that looks past row security, save the listed ones", async () => {
  const { rows: views } = await owner(
    "select 1 from pg_class where relnamespace = 'public'::regnamespace and relkind in ('v', 'm')",
  );
  expect(views).toEqual([]);
  const { rows } = await owner<{ name: string; owner: string }>(
    `select p.proname as name, pg_get_userbyid(p.proowner) as owner from pg_proc p
      where p.pronamespace = 'public'::regnamespace and p.prosecdef and has_function_privilege('wavekeep_app', p.oid, 'EXECUTE') order by 1`,
  );
  const listed = [
    "accept_invitation",
    "begin_reset",
    "bench_credentials",
    "bench_device_of",
    "finish_reset",
    "invitation_of",
    "labs_of_email",
    "labs_to_visit",
    "my_labs",
    "own_credentials",
    "search_lab",
    "set_own_password",
    "set_own_pin",
    "sign_in_lookup",
  ];
  expect(rows.map(({ name }) => name).filter((name) => !listed.includes(name))).toEqual([]);
  expect([...new Set(rows.map((row) => row.owner))]).toEqual(["wavekeep_definer"]);
  const { rows: role } = await owner(
    "select rolcanlogin, rolsuper, rolbypassrls from pg_roles where rolname = 'wavekeep_definer'",
  );
  expect(role).toEqual([{ rolcanlogin: false, rolsuper: false, rolbypassrls: false }]);
});

test("without a lab the app's role sees no tenant row at all", async () => {
  for (const table of await tenantTables()) {
    const count = await asApp(null, async (client) => (await client.query(`select 1 from ${table} limit 1`)).rowCount);
    expect([table, count]).toEqual([table, 0]);
  }
});

test("another lab's rows can be neither read, written into, changed nor removed, in any table", async () => {
  const tables = await tenantTables();
  // Their tables are filled first, by the owner, whom row security does not hold.
  for (const table of tables) await fillTable(server.database.owner, table, theirs.id);
  for (const table of tables) {
    const seenByOwner = await owner<{ n: number }>(`select count(*)::int as n from ${table} where lab_id = $1`, [
      theirs.id,
    ]);
    expect([table, seenByOwner.rows[0]!.n > 0]).toEqual([table, true]);
    const read = await asApp(
      ours.id,
      async (client) => (await client.query(`select 1 from ${table} where lab_id = $1`, [theirs.id])).rowCount,
    );
    expect([table, read]).toEqual([table, 0]);

    const grant = grants[table]!;
    if (["updatable", "changeable", "disposable"].includes(grant)) {
      const changed = await asApp(
        ours.id,
        async (client) =>
          (await client.query(`update ${table} set lab_id = lab_id where lab_id = $1`, [theirs.id])).rowCount,
      );
      expect([table, changed]).toEqual([table, 0]);
      // Nor can one of ours be moved into their lab.
      const moved = asApp(ours.id, (client) =>
        client.query(`update ${table} set lab_id = $1 where lab_id = $2`, [theirs.id, ours.id]),
      );
      const outcome = await moved.then(
        (reply) => reply.rowCount,
        (error: { code: string }) => error.code,
      );
      expect([table, outcome === 0 || outcome === "42501" || outcome === "23503" || outcome === "23505"]).toEqual([
        table,
        true,
      ]);
    }
    if (grant === "disposable") {
      const removed = await asApp(
        ours.id,
        async (client) => (await client.query(`delete from ${table} where lab_id = $1`, [theirs.id])).rowCount,
      );
      expect([table, removed]).toEqual([table, 0]);
    }
    if (["insert-only", "updatable", "disposable"].includes(grant)) {
      const written = fillTable(
        { query: (text, values) => asApp(ours.id, (client) => client.query(text, values)) },
        table,
        theirs.id,
      );
      await expect(written, table).rejects.toMatchObject({ code: "42501" });
    }
  }
});

test("another lab's rows cannot be pointed at, through any foreign key", async () => {
  const keys = await listTenantKeys(server.database.owner);
  // A key to labs is the row's own lab; every other reference between tenant tables carries the lab with it.
  expect(keys.filter((key) => !key.columns.includes("lab_id")).map((key) => key.name)).toEqual([]);
  const tried: string[] = [];
  for (const key of keys.filter(({ target }) => target !== "labs")) {
    const rivals = keys.filter(
      (other) =>
        other !== key &&
        other.table === key.table &&
        other.columns.some((column) => column !== "lab_id" && key.columns.includes(column)),
    );
    expect([key.name, await pointAtTheirs(key, rivals)]).toEqual([key.name, `23503 ${key.name}`]);
    tried.push(key.name);
  }
  expect(tried.length).toBeGreaterThan(20);
});

/** A row of our lab that names a row of theirs: refused by the key itself, also for the owner, whom no policy holds. */
async function pointAtTheirs(key: TenantKey, rivals: TenantKey[]): Promise<string> {
  const ourRow = await fillTable(server.database.owner, key.table, ours.id);
  const theirRow = await fillTable(server.database.owner, key.target, theirs.id);
  const assignments = key.columns
    .map((column, place) => ({ column, value: theirRow[key.targetColumns[place]!] }))
    .filter(({ column }) => column !== "lab_id");
  const client = await server.database.owner.connect();
  try {
    await client.query("begin");
    // Nothing but the key itself may decide.
    for (const rival of rivals) await client.query(`alter table ${rival.table} drop constraint "${rival.name}"`);
    const set = assignments.map(({ column }, place) => `${column} = $${place + 2}`).join(", ");
    await client.query(`update ${key.table} set ${set} where lab_id = $1 and ctid = $${assignments.length + 2}::tid`, [
      ours.id,
      ...assignments.map(({ value }) => value),
      ourRow["ctid"],
    ]);
    await client.query("set constraints all immediate");
    return "taken";
  } catch (error) {
    const { code, constraint } = error as { code: string; constraint?: string };
    return `${code} ${constraint}`;
  } finally {
    await client.query("rollback");
    client.release();
  }
}

test("every foreign key restricts: nothing disappears with what it points at", async () => {
  const { rows } = await owner(
    "select conname, confdeltype, confupdtype from pg_constraint where contype = 'f' and connamespace = 'public'::regnamespace and (confdeltype <> 'r' or confupdtype not in ('r', 'a'))",
  );
  expect(rows).toEqual([]);
});

test("a pooled connection carries nothing from one transaction into the next", async () => {
  const client = await server.database.app.connect();
  try {
    for (const labId of [ours.id, theirs.id]) {
      await client.query("begin");
      await client.query("select set_config('app.lab', $1, true)", [labId]);
      expect((await client.query("select id from labs")).rows).toEqual([{ id: labId }]);
      await client.query("commit");
      // Outside: the setting is empty again, and an empty one shows nothing instead of failing.
      expect((await client.query("select current_setting('app.lab', true) as lab")).rows).toEqual([{ lab: "" }]);
      expect((await client.query("select count(*)::int as n from memberships")).rows).toEqual([{ n: 0 }]);
    }
  } finally {
    client.release();
  }
});

test("requests of two labs at once, on one small pool, each see their own people", async () => {
  const idsOf = async (lab: TestLab) =>
    (await owner<{ id: string }>("select person_id as id from memberships where lab_id = $1", [lab.id])).rows
      .map(({ id }) => id)
      .sort();
  const expected = [await idsOf(ours), await idsOf(theirs)];
  const ask = async (lab: TestLab) =>
    (await lab.manager.client.get("/people")).body.people.map((person: { id: string }) => person.id);
  const replies = await Promise.all(Array.from({ length: 40 }, (_, index) => ask(index % 2 === 0 ? ours : theirs)));
  replies.forEach((ids, index) => expect([...ids].sort()).toEqual(expected[index % 2]));
});

test("the record's tables can be neither changed nor removed nor emptied by the app, nor emptied by the owner", async () => {
  for (const [table, grant] of Object.entries(grants)) {
    if (grant !== "insert-only") continue;
    const column = (
      await owner<{ name: string }>(
        "select column_name as name from information_schema.columns where table_schema = 'public' and table_name = $1 limit 1",
        [table],
      )
    ).rows[0]!.name;
    for (const statement of [
      `update ${table} set ${column} = ${column}`,
      `delete from ${table}`,
      `truncate ${table} cascade`,
    ]) {
      await expect(
        asApp(ours.id, (client) => client.query(statement)),
        statement,
      ).rejects.toMatchObject({ code: "42501" });
    }
    await expect(owner(`truncate ${table} cascade`), table).rejects.toMatchObject({ code: "42501" });
  }
});

test("hashes of passwords and tokens of resets are out of the app's reach", async () => {
  for (const table of ["credentials", "password_resets"]) {
    await expect(
      asApp(ours.id, (client) => client.query(`select * from ${table}`), ours.manager.id),
      table,
    ).rejects.toMatchObject({ code: "42501" });
  }
});

const stateClock = "select set_config('app.stated_now', '2020-01-01T00:00:00Z', true)";

test("a stated clock is refused to the app's role, in any lab", async () => {
  await owner("update labs set is_demo = true where id = $1", [ours.id]);
  for (const lab of [ours.id, theirs.id]) {
    const stated = asApp(lab, async (client) => {
      await client.query(stateClock);
      return client.query("select record_now()");
    });
    await expect(stated).rejects.toMatchObject({ code: "42501" });
  }
  await owner("update labs set is_demo = false where id = $1", [ours.id]);
});

/** As the seeding role signs in to the database: its session's own user, rolled back. */
async function asSeeder<T>(labId: string | null, work: (client: PoolClient) => Promise<T>): Promise<T> {
  const client = await server.database.owner.connect();
  try {
    await client.query("set session authorization wavekeep_seeder");
    await client.query("begin");
    await client.query("select set_config('app.lab', $1, true)", [labId ?? ""]);
    return await work(client);
  } finally {
    await client.query("rollback");
    await client.query("reset session authorization");
    client.release();
  }
}

const open = (isDemo: boolean) => `select create_lab(gen_random_uuid(), 'A lab', 'Europe/Berlin', null, ${isDemo})`;

test("the seeding role states the clock in a demo lab alone, and sees and opens no other", async () => {
  const clock = async (client: PoolClient) => {
    await client.query(stateClock);
    return (await client.query<{ now: Date }>("select record_now() as now")).rows[0]!.now.toISOString();
  };
  await expect(asSeeder(ours.id, clock)).rejects.toMatchObject({ code: "42501" });
  expect((await asSeeder(ours.id, (client) => client.query("select 1 from labs"))).rowCount).toBe(0);
  await expect(asSeeder(null, (client) => client.query(open(false)))).rejects.toMatchObject({ code: "42501" });
  await expect(asSeeder(null, (client) => client.query(open(true)))).resolves.toMatchObject({ rowCount: 1 });

  await owner("update labs set is_demo = true where id = $1", [ours.id]);
  expect(await asSeeder(ours.id, clock)).toBe("2020-01-01T00:00:00.000Z");
  await owner("update labs set is_demo = false where id = $1", [ours.id]);
});

test("the app opens no lab, not even a demo", async () => {
  for (const isDemo of [true, false]) {
    await expect(asApp(null, (client) => client.query(open(isDemo)))).rejects.toMatchObject({ code: "42501" });
  }
});

test("the trail takes only what follows its head, with the hash of its text, at the clock's time", async () => {
  const entry = (change: Record<string, string>) => {
    const values: Record<string, string> = {
      number: "(select max(number) + 1 from trail_entries)",
      at: "clock_timestamp()",
      canonical: "'{}'",
      previous_hash: "(select hash from trail_entries order by number desc limit 1)",
      hash: "encode(sha256('{}'), 'hex')",
      ...change,
    };
    return `insert into trail_entries (lab_id, action, shape, demo, ${Object.keys(values).join(", ")}) values ('${ours.id}', 'lab.changed', 'person', false, ${Object.values(values).join(", ")})`;
  };
  await expect(asApp(ours.id, (client) => client.query(entry({})))).resolves.toMatchObject({ rowCount: 1 });
  const wrong: Record<string, string>[] = [
    { number: "(select max(number) + 2 from trail_entries)" },
    { number: "(select max(number) from trail_entries)" },
    { previous_hash: `'${"0".repeat(64)}'` },
    { hash: `'${"a".repeat(64)}'` },
    { at: "clock_timestamp() - interval '1 hour'" },
    { at: "clock_timestamp() + interval '1 hour'" },
  ];
  for (const change of wrong) {
    await expect(
      asApp(ours.id, (client) => client.query(entry(change))),
      JSON.stringify(change),
    ).rejects.toMatchObject({ code: "23514" });
  }
});

test("migrations go forward in time, all of them are applied, and the server knows how many there are", async () => {
  const journal = JSON.parse(
    fs.readFileSync(path.resolve(import.meta.dirname, "../../drizzle/meta/_journal.json"), "utf8"),
  ) as { entries: { when: number; tag: string }[] };
  const whens = journal.entries.map(({ when }) => when);
  expect(whens).toEqual([...new Set(whens)].sort((a, b) => a - b));
  expect(journal.entries).toHaveLength(MIGRATION_COUNT);
  const { rows } = await owner<{ n: number }>("select count(*)::int as n from drizzle.__drizzle_migrations");
  expect(rows[0]!.n).toBe(MIGRATION_COUNT);
});

test("the owner's address never reaches the server", async () => {
  const { loadConfig } = await import("@wavekeep/api/config");
  expect(() =>
    loadConfig({
      DATABASE_URL: server.database.appUrl,
      DATABASE_OWNER_URL: server.database.ownerUrl,
      WAVEKEEP_SESSION_KEY: "x".repeat(40),
    }),
  ).toThrow(/belongs to the migrating step alone/);
});
