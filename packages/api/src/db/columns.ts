/**
 * Building blocks of every table, so that tenancy is spelled one way.
 *
 * A tenant table carries `lab_id`, has the primary key (lab_id, id), one policy that shows the current lab's rows alone,
 * and points at other tenant tables by composite keys: foreign-key checks bypass row security, so a key without the
 * lab in it would let one lab point at another's row. A person is pointed at through the membership of that lab.
 */
import { sql } from "drizzle-orm";
import { customType, foreignKey, pgPolicy, primaryKey, timestamp, uuid, type AnyPgColumn } from "drizzle-orm/pg-core";
import { v7 } from "uuid";

/** The lab the transaction works in; null outside one. `nullif`: a pooled connection keeps '' after its first set_config. */
export const currentLab = sql`nullif(current_setting('app.lab', true), '')::uuid`;
/** The person the transaction works for; null before sign-in and for Wavekeep itself. */
export const currentPerson = sql`nullif(current_setting('app.person', true), '')::uuid`;

/** A new UUIDv7. */
export const newId = (): string => v7();

/** `id`: UUIDv7, made by the server. */
export const id = () => uuid("id").notNull().$defaultFn(newId);

/** `lab_id` of a tenant table. */
export const labId = () => uuid("lab_id").notNull();

/** An instant in UTC, kept to the millisecond. */
export const instant = (name: string) => timestamp(name, { withTimezone: true, mode: "date", precision: 3 });

/** Rows of the current lab alone, for reading and for writing. */
export const tenantPolicy = () =>
  pgPolicy("lab_apart", {
    for: "all",
    to: "public",
    using: sql`lab_id = ${currentLab}`,
    withCheck: sql`lab_id = ${currentLab}`,
  });

/** Key and policy of a tenant table: `(t) => [...tenant(t), …]`. */
export const tenant = (t: { labId: AnyPgColumn; id: AnyPgColumn }) => [
  primaryKey({ columns: [t.labId, t.id] }),
  tenantPolicy(),
];

/**
 * A reference to another tenant table's row, of the same lab.
 *
 * @example tenantKey([t.labId, t.checkId], [checks.labId, checks.id])
 */
export const tenantKey = (columns: [AnyPgColumn, ...AnyPgColumn[]], foreignColumns: [AnyPgColumn, ...AnyPgColumn[]]) =>
  foreignKey({ columns, foreignColumns } as Parameters<typeof foreignKey>[0])
    .onDelete("restrict")
    .onUpdate("restrict");

/** Bytes as received. */
export const bytes = customType<{ data: Buffer; driverData: Buffer }>({ dataType: () => "bytea" });
