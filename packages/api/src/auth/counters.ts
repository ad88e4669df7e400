/** Counters for rate limits and lock-out, in PostgreSQL, so that several processes count together. */
import { eq, sql } from "drizzle-orm";
import type { Database } from "../db/connection.ts";
import { rateCounters } from "../db/schema/index.ts";
import { problem } from "../http/problem.ts";

export interface Limit {
  /** What is counted, with whom: "sign-in:someone@example.org". */
  key: string;
  /** Tries allowed in one window. */
  tries: number;
  windowSeconds: number;
}

const MINUTE = 60;

/** Every limit of the product in one place. */
export const limits = {
  signInOfAddress: (email: string): Limit => ({
    key: `sign-in:${email.toLowerCase()}`,
    tries: 8,
    windowSeconds: 15 * MINUTE,
  }),
  signInFromHost: (host: string): Limit => ({ key: `sign-in-from:${host}`, tries: 100, windowSeconds: 15 * MINUTE }),
  confirmation: (personId: string): Limit => ({ key: `confirm:${personId}`, tries: 8, windowSeconds: 15 * MINUTE }),
  pin: (deviceId: string, personId: string): Limit => ({
    key: `pin:${deviceId}:${personId}`,
    tries: 5,
    windowSeconds: 15 * MINUTE,
  }),
  resetOfAddress: (email: string): Limit => ({
    key: `reset:${email.toLowerCase()}`,
    tries: 5,
    windowSeconds: 60 * MINUTE,
  }),
  resetFromHost: (host: string): Limit => ({ key: `reset-from:${host}`, tries: 60, windowSeconds: 60 * MINUTE }),
  tokenFromHost: (host: string): Limit => ({ key: `token-from:${host}`, tries: 200, windowSeconds: 15 * MINUTE }),
};

/** Count one try. @returns tries so far in this window, this one included, and when it ends */
export async function countTry(db: Database, limit: Limit): Promise<{ count: number; endsInSeconds: number }> {
  const { rows } = await db.orm.execute<{ points: number; seconds: number }>(sql`
    insert into rate_counters (key, points, expires_at)
      values (${limit.key}, 1, clock_timestamp() + make_interval(secs => ${limit.windowSeconds}))
    on conflict (key) do update set
      points = case when rate_counters.expires_at <= clock_timestamp() then 1 else rate_counters.points + 1 end,
      expires_at = case when rate_counters.expires_at <= clock_timestamp() then excluded.expires_at else rate_counters.expires_at end
    returning points, ceil(extract(epoch from expires_at - clock_timestamp()))::int as seconds`);
  return { count: rows[0]!.points, endsInSeconds: Math.max(1, rows[0]!.seconds) };
}

/** Seconds until the limit opens again; 0 while it is open. */
export async function lockedFor(db: Database, limit: Limit): Promise<number> {
  const { rows } = await db.orm.execute<{ seconds: number }>(sql`
    select ceil(extract(epoch from expires_at - clock_timestamp()))::int as seconds from rate_counters
      where key = ${limit.key} and points >= ${limit.tries} and expires_at > clock_timestamp()`);
  return rows[0]?.seconds ?? 0;
}

export async function forgetTries(db: Database, limit: Limit): Promise<void> {
  await db.orm.delete(rateCounters).where(eq(rateCounters.key, limit.key));
}

const minutes = (seconds: number): string => (seconds <= 90 ? "a minute" : `${Math.ceil(seconds / 60)} minutes`);

/** @throws problem "locked" while too many tries failed */
export async function assertNotLocked(db: Database, limit: Limit, what: string): Promise<void> {
  const seconds = await lockedFor(db, limit);
  if (seconds > 0) {
    throw problem("locked", `${what} failed too often and is locked for ${minutes(seconds)}. Nothing was changed.`, {
      retryAfterSeconds: seconds,
    });
  }
}

/** @throws problem "too-many" once the limit is passed */
export async function assertRate(db: Database, limit: Limit): Promise<void> {
  const { count, endsInSeconds } = await countTry(db, limit);
  if (count > limit.tries) {
    throw problem("too-many", `There were too many tries from here. Try again in ${minutes(endsInSeconds)}.`, {
      retryAfterSeconds: endsInSeconds,
    });
  }
}
