/** For whom a request is made: membership, roles, deputies and what is owned, read once a request. */
import { sql } from "drizzle-orm";
import { role, type Role } from "../contract/common.ts";
import type { Database } from "../db/connection.ts";
import { inLab, type Context } from "../db/tenancy.ts";

interface ContextRow extends Record<string, unknown> {
  name: string;
  zone: string;
  is_demo: boolean;
  roles: string[];
  is_approver: boolean;
  principal_roles: string[] | null;
  principal_approver: boolean | null;
  owned: string[];
}

/** Roles a deputy takes over: what a manager decides. The rest is a person's own. */
const lent: readonly Role[] = ["manager"];
const order: readonly Role[] = ["manager", "technician", "auditor"];
const words: Record<Role, string> = { manager: "lab manager", technician: "technician", auditor: "auditor" };

/** The context of a member, or null when the membership has ended or never was. */
export async function loadContext(db: Database, personId: string, labId: string): Promise<Context | null> {
  const bare: Context = {
    labId,
    personId,
    personName: "",
    roles: [],
    isApprover: false,
    ownedInstrumentIds: [],
    isDemo: false,
    zone: "Etc/UTC",
    actingRole: "",
  };
  const { rows } = await inLab(db, bare, (tx) =>
    tx.execute<ContextRow>(sql`
      with lab as (select id, zone, is_demo, (clock_timestamp() at time zone zone)::date as today from labs where id = ${labId}),
      standing_in as (
        select d.for_person_id, m.roles, m.is_approver from deputies d cross join lab
          join memberships m on m.lab_id = d.lab_id and m.person_id = d.for_person_id
          where d.lab_id = ${labId} and d.person_id = ${personId} and lab.today between d.from_on and d.to_on and m.ended_at is null
      )
      select p.name, lab.zone, lab.is_demo, m.roles, m.is_approver,
        (select array_agg(distinct r) from standing_in s, unnest(s.roles) r) as principal_roles,
        (select bool_or(is_approver) from standing_in) as principal_approver,
        array(select i.id::text from instruments i where i.lab_id = ${labId}
          and (i.owner_id = ${personId} or i.owner_id in (select for_person_id from standing_in)) order by i.id) as owned
      from memberships m join lab on lab.id = m.lab_id join people p on p.id = m.person_id
      where m.person_id = ${personId} and m.ended_at is null`),
  );
  const row = rows[0];
  if (row === undefined) return null;
  const own = row.roles.filter((text): text is Role => role.safeParse(text).success);
  const asDeputy = lent.filter((name) => (row.principal_roles ?? []).includes(name) && !own.includes(name));
  const roles = order.filter((name) => own.includes(name) || asDeputy.includes(name));
  return {
    ...bare,
    personName: row.name,
    roles,
    isApprover: row.is_approver || row.principal_approver === true,
    ownedInstrumentIds: row.owned,
    isDemo: row.is_demo,
    zone: row.zone,
    actingRole: actingRole(own, asDeputy, row),
  };
}

function actingRole(own: readonly Role[], asDeputy: readonly Role[], row: ContextRow): string {
  if (asDeputy.length > 0) return `deputy ${words[asDeputy[0]!]}`;
  const highest = order.find((name) => own.includes(name));
  if (highest !== undefined) return words[highest];
  if (row.is_approver) return "approver";
  return row.owned.length > 0 ? "instrument owner" : "member";
}
