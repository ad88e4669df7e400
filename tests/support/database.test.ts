import { expect, test } from "vitest";
import { useTestDatabase } from "./database.ts";

const database = useTestDatabase();

test("the app's role is no superuser, may not bypass row security and owns no table", async () => {
  const { rows } = await database.app.query(
    `select rolsuper, rolbypassrls, rolcreaterole, rolcreatedb,
            (select count(*)::int from pg_class where relowner = pg_roles.oid) as owned
       from pg_roles where rolname = current_user`,
  );
  expect(rows).toEqual([{ rolsuper: false, rolbypassrls: false, rolcreaterole: false, rolcreatedb: false, owned: 0 }]);
});

test("each file's database is a copy of its own", async () => {
  const { rows } = await database.owner.query("select current_database() as name");
  expect(rows[0].name).toMatch(/^test_[0-9a-f]{32}$/);
});
