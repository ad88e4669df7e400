/** Accepting an invitation: before a lab is known, by the mailed token. */
import { password as passwordShape } from "../contract/people.ts";
import { assertNotLocked, assertRate, countTry, forgetTries, limits } from "../auth/counters.ts";
import { hashSecret, secretFits, tokenHash } from "../auth/passwords.ts";
import { asWavekeep, inLab, inNoLab, type Context } from "../db/tenancy.ts";
import { problem } from "../http/problem.ts";
import { writeTrail } from "../records/trail.ts";
import type { Services } from "../services.ts";
import { knownRoles } from "./present.ts";
import * as queries from "./queries.ts";

/** A demo lab is seeded under a stated clock, by which its invitations are open. */
export interface StatedClock {
  labId: string;
  statedNow: Date;
}

async function findOpenOffer(
  { db }: Pick<Services, "db">,
  token: string,
  clock?: StatedClock,
): Promise<queries.OfferedRow> {
  const look = (tx: Parameters<typeof queries.findOffer>[0]) => queries.findOffer(tx, tokenHash(token));
  const offer = await (clock === undefined
    ? inNoLab(db, null, look)
    : inLab(db, asWavekeep({ ...clock, isDemo: true, zone: "Etc/UTC" }), look));
  if (offer === null)
    throw problem(
      "not-found",
      "There is no such invitation. Check that the whole link was opened, or ask for a new one.",
    );
  if (offer.state === "open") return offer;
  const sentences = {
    accepted: "This invitation was accepted already. Sign in instead.",
    withdrawn: "This invitation was withdrawn. Ask the lab for a new one.",
    expired: "This invitation is older than two weeks. Ask the lab for a new one.",
  };
  throw problem("gone", sentences[offer.state]);
}

export async function readInvitation(services: Services, token: string, host: string) {
  await assertRate(services.db, limits.tokenFromHost(host));
  const offer = await findOpenOffer(services, token);
  return {
    labName: offer.lab_name,
    email: offer.email,
    roles: knownRoles(offer.roles),
    invitedBy: offer.invited_by,
    knownPerson: offer.person_id !== null,
  };
}

/**
 * Accept. Somebody new chooses a name and a password; somebody known proves to be them with the password they have.
 *
 * @returns who, and the lab they are now a member of
 */
export async function acceptInvitation(
  services: Pick<Services, "db">,
  token: string,
  input: { name: string; password: string; host: string },
  clock?: StatedClock,
): Promise<{ personId: string; labId: string }> {
  const { db } = services;
  await assertRate(db, limits.tokenFromHost(input.host));
  const offer = await findOpenOffer(services, token, clock);
  let newHash: string | null = null;
  if (offer.person_id === null) {
    const fit = passwordShape.safeParse(input.password);
    if (!fit.success) {
      const message = fit.error.issues[0]!.message;
      throw problem("invalid-input", `The password needs another look: ${message} Nothing was stored.`, {
        fields: [{ path: "password", message }],
      });
    }
    newHash = await hashSecret(input.password);
  } else {
    const limit = limits.signInOfAddress(offer.email);
    await assertNotLocked(db, limit, "Signing in with this address");
    if (!(await secretFits(offer.password_hash, input.password))) {
      await countTry(db, limit);
      throw problem(
        "wrong-credentials",
        "You have a Wavekeep password already, and this is not it. Nothing was changed; a new one can be asked for on the sign-in page.",
        {
          fields: [{ path: "password", message: "This is not your password." }],
        },
      );
    }
    await forgetTries(db, limit);
  }
  const inItsLab = asWavekeep({
    labId: offer.lab_id,
    isDemo: offer.is_demo,
    zone: offer.zone,
    statedNow: clock?.statedNow,
  });
  return inLab(db, inItsLab, async (tx) => {
    const accepted = await queries.acceptOffer(tx, tokenHash(token), input.name, newHash);
    if (accepted === null) throw problem("gone", "This invitation is not open any more. Nothing was changed.");
    const ctx: Context = {
      ...inItsLab,
      personId: accepted.personId,
      personName: offer.person_name ?? input.name,
      roles: knownRoles(offer.roles),
      actingRole: "new member",
    };
    await writeTrail(tx, ctx, {
      action: "invitation.accepted",
      about: { kind: "person", id: accepted.personId, label: ctx.personName },
      after: { roles: ctx.roles },
    });
    return accepted;
  });
}
