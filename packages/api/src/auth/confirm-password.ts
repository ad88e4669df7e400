/** The password asked for again, where somebody signs. Services that sign take the proof, not the password. */
import { sql } from "drizzle-orm";
import type { Database } from "../db/connection.ts";
import { inNoLab } from "../db/tenancy.ts";
import { problem } from "../http/problem.ts";
import { assertNotLocked, countTry, forgetTries, limits } from "./counters.ts";
import { secretFits } from "./passwords.ts";

const proven: unique symbol = Symbol("proven");

/** That the person was asked for their password and gave it; or that a demo lab is being seeded, which is said so. */
export interface PasswordProof {
  readonly personId: string;
  readonly kind: "password" | "demo seeding";
  readonly [proven]: true;
}

/**
 * Ask the stored hash whether this is the person's password. Eight wrong tries lock it for a quarter of an hour.
 *
 * @throws problem "wrong-password" or "locked"
 */
export async function confirmPassword(db: Database, personId: string, password: string): Promise<PasswordProof> {
  const limit = limits.confirmation(personId);
  await assertNotLocked(db, limit, "Confirming with your password");
  const { rows } = await inNoLab(db, personId, (tx) =>
    tx.execute<{ password_hash: string }>(sql`select password_hash from own_credentials()`),
  );
  if (!(await secretFits(rows[0]?.password_hash ?? null, password))) {
    await countTry(db, limit);
    throw problem(
      "wrong-password",
      "This is not your password. Nothing was signed and nothing is lost; type it again.",
      {
        fields: [{ path: "password", message: "This is not your password." }],
      },
    );
  }
  await forgetTries(db, limit);
  return { personId, kind: "password", [proven]: true };
}

/**
 * For the seeding program, which signs for invented people: the proof says so, and the database lets it write in a demo
 * lab under a stated clock alone.
 */
export const seedingProof = (personId: string): PasswordProof => ({ personId, kind: "demo seeding", [proven]: true });
