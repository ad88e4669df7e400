/**
 * Tenancy: every look at a lab's rows happens in a short transaction that says which lab, which person, which roles.
 * Row security reads those settings; outside `inLab` the app's role sees no tenant row at all.
 */
import { sql } from "drizzle-orm";
import type { Role } from "../contract/common.ts";
import { problem } from "../http/problem.ts";
import type { Database } from "./connection.ts";
import { HOUSE_LAB_ID } from "./schema/labs.ts";

/** For whom the work is done. Made once a request (or once a job) and handed to every service. */
export interface Context {
  labId: string;
  /** Null: Wavekeep itself. */
  personId: string | null;
  /** As printed in the trail. */
  personName: string;
  /** The person's own and those of a manager they stand in for today. */
  roles: Role[];
  isApprover: boolean;
  /** Instruments owned, and those of owners they stand in for today. */
  ownedInstrumentIds: string[];
  isDemo: boolean;
  /** IANA zone of the lab. */
  zone: string;
  /** The role printed in the trail: "lab manager", "deputy of …". */
  actingRole: string;
  /** Seeding only: honoured by the database for the seeding role in a demo lab, refused for everybody else. */
  statedNow?: Date;
  /** Set by the server where the request carries an Idempotency-Key. */
  idempotency?: IdempotencyClaim;
}

/** A request key to be kept in the transaction that has the effect. */
export interface IdempotencyClaim {
  route: string;
  key: string;
  requestHash: string;
  claimed: boolean;
}

export type Tx = Parameters<Parameters<Database["orm"]["transaction"]>[0]>[0];

/** Wavekeep acting by itself in the lab of a context: what follows from a deed without anybody doing it. */
export function asWavekeep(ctx: Pick<Context, "labId" | "isDemo" | "zone" | "statedNow">): Context {
  return {
    labId: ctx.labId,
    personId: null,
    personName: "Wavekeep",
    roles: [],
    isApprover: false,
    ownedInstrumentIds: [],
    isDemo: ctx.isDemo,
    zone: ctx.zone,
    actingRole: "",
    statedNow: ctx.statedNow,
  };
}

/** Where no lab is known: its chain and outbox are those of the house. */
export const houseContext = (): Context => asWavekeep({ labId: HOUSE_LAB_ID, isDemo: false, zone: "Etc/UTC" });

/**
 * One short transaction in a lab. Nothing slow may be awaited inside: no bytes received, no worker, no mail, no reply.
 *
 * @throws what `work` throws, after rolling back
 */
export function inLab<T>(db: Database, ctx: Context, work: (tx: Tx) => Promise<T>): Promise<T> {
  return db.orm.transaction(async (tx) => {
    await tx.execute(sql`select
      set_config('app.lab', ${ctx.labId}, true),
      set_config('app.person', ${ctx.personId ?? ""}, true),
      set_config('app.roles', ${ctx.roles.join(",")}, true),
      set_config('app.stated_now', ${ctx.statedNow?.toISOString() ?? ""}, true)`);
    if (ctx.statedNow !== undefined) statedClocks.set(tx, null);
    return work(tx);
  });
}

/** Transactions under a stated clock, which stands still: the database is asked once, and refuses whom it refuses. */
const statedClocks = new WeakMap<Tx, Date | null>();

/** A short transaction for one person in no lab: their own row, and the listed definer functions. */
export function inNoLab<T>(db: Database, personId: string | null, work: (tx: Tx) => Promise<T>): Promise<T> {
  return db.orm.transaction(async (tx) => {
    await tx.execute(sql`select set_config('app.lab', '', true), set_config('app.person', ${personId ?? ""}, true),
      set_config('app.roles', '', true), set_config('app.stated_now', '', true)`);
    return work(tx);
  });
}

/** The record's clock: the database's, to the millisecond, or the stated one while a demo lab is seeded. */
export async function recordNow(tx: Tx): Promise<Date> {
  const known = statedClocks.get(tx);
  if (known instanceof Date) return known;
  const { rows } = await tx.execute<{ now: Date | string }>(sql`select record_now() as now`);
  const now = new Date(rows[0]!.now);
  if (known === null) statedClocks.set(tx, now);
  return now;
}

/** True when the person holds the role in this lab, of their own or as a deputy. */
export const hasRole = (ctx: Context, role: Role): boolean => ctx.roles.includes(role);

/** True when the person owns the instrument, or stands in for its owner. */
export const ownsInstrument = (ctx: Context, instrumentId: string): boolean =>
  ctx.ownedInstrumentIds.includes(instrumentId);

/**
 * Refuse a form that was filled in on an older state of its row.
 *
 * @throws problem "stale" when the versions differ
 */
export function assertFresh(stored: { version: number }, sent: { version: number }, what: string): void {
  if (stored.version !== sent.version) {
    throw problem(
      "stale",
      `${what} was changed by somebody else while you were editing. Nothing of yours was lost: compare, and save again.`,
    );
  }
}
