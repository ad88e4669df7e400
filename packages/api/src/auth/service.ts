/** Getting in and out: sign-in, resets, one's own password, PIN and name, shared PCs. */
import { inLab, inNoLab, asWavekeep, houseContext, type Context } from "../db/tenancy.ts";
import { problem } from "../http/problem.ts";
import { queueMail } from "../mail/outbox.ts";
import { resetMail } from "../mail/texts.ts";
import { writeTrail } from "../records/trail.ts";
import type { Services } from "../services.ts";
import { confirmPassword } from "./confirm-password.ts";
import { loadContext } from "./context.ts";
import { assertNotLocked, assertRate, countTry, forgetTries, limits, lockedFor } from "./counters.ts";
import { hashSecret, newToken, secretFits, tokenHash } from "./passwords.ts";
import * as queries from "./queries.ts";

const mismatch = () =>
  problem(
    "wrong-credentials",
    "This e-mail address and password do not belong together. Check both; a new password can be asked for below.",
  );

/** Who it is, by address and password; kept in the trail of their labs when refused. */
export async function checkSignIn(
  services: Services,
  input: { email: string; password: string; host: string },
): Promise<{ personId: string }> {
  const { db } = services;
  const ofAddress = limits.signInOfAddress(input.email);
  const fromHost = limits.signInFromHost(input.host);
  await assertNotLocked(db, ofAddress, "Signing in with this address");
  await assertNotLocked(db, fromHost, "Signing in from this network");
  const found = await inNoLab(db, null, (tx) => queries.findSignIn(tx, input.email));
  if (!(await secretFits(found?.passwordHash ?? null, input.password)) || found === null) {
    const { count } = await countTry(db, ofAddress);
    await countTry(db, fromHost);
    await recordRefusedSignIn(
      services,
      input.email,
      count >= ofAddress.tries
        ? "too many wrong passwords: locked for a quarter of an hour"
        : "wrong address or password",
    );
    throw mismatch();
  }
  await forgetTries(db, ofAddress);
  return { personId: found.personId };
}

/** The trail of every lab the address belongs to, or of the house. */
async function recordRefusedSignIn({ db }: Services, email: string, why: string): Promise<void> {
  const labs = await inNoLab(db, null, (tx) => queries.listLabsOfEmail(tx, email));
  const contexts = labs.length === 0 ? [houseContext()] : labs.map((lab) => asWavekeep(lab));
  for (const ctx of contexts) {
    await inLab(db, ctx, (tx) =>
      writeTrail(tx, ctx, { action: "session.refused", about: { kind: "person", id: "", label: email }, why }),
    );
  }
}

/** The lab to work in after signing in: where the person was last, else the first by name. Null for nobody's member. */
export async function enterLab(
  services: Services,
  personId: string,
  wantedLabId: string | null,
  benchName: string | null,
): Promise<string | null> {
  const labs = await inNoLab(services.db, personId, (tx) => queries.listMyLabs(tx));
  const last = [...labs].sort((a, b) => (b.lastSeenAt?.getTime() ?? 0) - (a.lastSeenAt?.getTime() ?? 0))[0];
  const lab = wantedLabId === null ? last : labs.find((candidate) => candidate.id === wantedLabId);
  if (lab === undefined) return null;
  const ctx = await loadContext(services.db, personId, lab.id);
  if (ctx === null) return null;
  await inLab(services.db, ctx, async (tx) => {
    await queries.touchMembership(tx, lab.id, personId);
    await writeTrail(tx, ctx, {
      action: "session.begun",
      about: { kind: "lab", id: lab.id, label: lab.name },
      after: benchName === null ? null : { bench: benchName },
    });
  });
  return lab.id;
}

/** Trail context for a person's own doings: their current lab, else the house with their name. */
const ownContext = (ctx: Context | null, personId: string, name: string): Context =>
  ctx ?? { ...houseContext(), personId, personName: name };

export async function signOutEverywhere({ db }: Services, ctx: Context | null, personId: string): Promise<void> {
  const me = await findPerson(db, personId);
  const own = ownContext(ctx, personId, me.name);
  await inLab(db, own, async (tx) => {
    await queries.endSessionsOf(tx, personId);
    await writeTrail(tx, own, {
      action: "session.ended-everywhere",
      about: { kind: "person", id: personId, label: me.name },
    });
  });
}

/** A mailed link for a new password. Says the same whether the address is known or not. */
export async function forgetPassword(services: Services, input: { email: string; host: string }): Promise<void> {
  const { db, jobs, config } = services;
  await assertRate(db, limits.resetFromHost(input.host));
  const ofAddress = limits.resetOfAddress(input.email);
  if ((await lockedFor(db, ofAddress)) > 0) return;
  await countTry(db, ofAddress);
  const token = newToken();
  const ctx = houseContext();
  await inLab(db, ctx, async (tx) => {
    const reset = await queries.beginReset(tx, input.email, tokenHash(token));
    if (reset === null) return;
    await queueMail(tx, ctx, jobs, {
      to: { address: reset.email },
      ...resetMail({ name: reset.name, link: `${config.publicUrl}/reset?token=${token}` }),
      causeKey: `password-reset:${reset.resetId}`,
    });
    await writeTrail(tx, ctx, {
      action: "password.reset-asked",
      about: { kind: "person", id: reset.personId, label: reset.email },
    });
  });
}

/** A new password by a mailed token: every session of the person ends. */
export async function resetPassword(
  { db }: Services,
  input: { token: string; password: string; host: string },
): Promise<void> {
  await assertRate(db, limits.tokenFromHost(input.host));
  const newHash = await hashSecret(input.password);
  const ctx = houseContext();
  const email = await inLab(db, ctx, async (tx) => {
    const personId = await queries.finishReset(tx, tokenHash(input.token), newHash);
    if (personId === null)
      throw problem("gone", "This link was used or is older than an hour. Nothing was changed; ask for a new one.");
    await queries.endSessionsOf(tx, personId);
    const me = await queries.findPersonByReset(tx, personId);
    await writeTrail(tx, ctx, {
      action: "password.changed",
      about: { kind: "person", id: personId, label: me.email },
      why: "by a mailed link",
    });
    return me.email;
  });
  await forgetTries(db, limits.signInOfAddress(email));
}

export async function changePassword(
  { db }: Services,
  ctx: Context | null,
  personId: string,
  sid: string,
  input: { current: string; password: string },
): Promise<void> {
  await confirmOwn(db, personId, input.current);
  const newHash = await hashSecret(input.password);
  const me = await findPerson(db, personId);
  const own = ownContext(ctx, personId, me.name);
  await inLab(db, own, async (tx) => {
    await queries.setOwnPassword(tx, newHash);
    await queries.endSessionsOf(tx, personId, sid);
    await writeTrail(tx, own, { action: "password.changed", about: { kind: "person", id: personId, label: me.name } });
  });
}

export async function changePin(
  { db }: Services,
  ctx: Context | null,
  personId: string,
  input: { current: string; pin: string },
): Promise<void> {
  await confirmOwn(db, personId, input.current);
  const newHash = await hashSecret(input.pin);
  const me = await findPerson(db, personId);
  const own = ownContext(ctx, personId, me.name);
  await inLab(db, own, async (tx) => {
    await queries.setOwnPin(tx, newHash);
    await writeTrail(tx, own, { action: "pin.changed", about: { kind: "person", id: personId, label: me.name } });
  });
}

export async function changeName({ db }: Services, ctx: Context | null, personId: string, name: string): Promise<void> {
  const me = await findPerson(db, personId);
  if (me.name === name) return;
  const own = ownContext(ctx, personId, me.name);
  await inLab(db, own, async (tx) => {
    await queries.saveOwnName(tx, personId, name);
    await writeTrail(tx, own, {
      action: "name.changed",
      about: { kind: "person", id: personId, label: me.name },
      personal: { nameBefore: me.name, nameAfter: name },
    });
  });
}

/** The field of the form is called `current` here. */
async function confirmOwn(db: Services["db"], personId: string, password: string): Promise<void> {
  try {
    await confirmPassword(db, personId, password);
  } catch (error) {
    if (error instanceof Error && "kind" in error && error.kind === "wrong-password") {
      throw problem("wrong-password", "This is not your present password. Nothing was changed.", {
        fields: [{ path: "current", message: "This is not your present password." }],
      });
    }
    throw error;
  }
}

const findPerson = async (db: Services["db"], personId: string) => {
  const me = await inNoLab(db, personId, (tx) => queries.findMe(tx, personId));
  if (me === null) throw problem("not-signed-in", "Sign in first.");
  return me;
};

export const findBench = ({ db }: Services, token: string | null): Promise<queries.BenchDevice | null> =>
  token === null ? Promise.resolve(null) : inNoLab(db, null, (tx) => queries.findBenchDevice(tx, tokenHash(token)));

/** By name and PIN on a shared PC. Five wrong PINs lock that person there for a quarter of an hour. */
export async function checkBenchSignIn(
  services: Services,
  token: string | null,
  input: { personId: string; pin: string },
): Promise<{ device: queries.BenchDevice }> {
  const { db } = services;
  const device = await findBench(services, token);
  if (token === null || device === null)
    throw problem(
      "not-allowed",
      "This PC is not enrolled for bench mode. Sign in with your password; a lab manager can enrol it in Settings.",
    );
  const limit = limits.pin(device.id, input.personId);
  await assertNotLocked(db, limit, "Your PIN on this PC");
  const found = await inNoLab(db, null, (tx) => queries.findBenchCredentials(tx, tokenHash(token), input.personId));
  if (!(await secretFits(found?.pinHash ?? null, input.pin)) || found === null) {
    const { count } = await countTry(db, limit);
    const left = limit.tries - count;
    const ctx = await benchContext(services, device);
    await inLab(db, ctx, (tx) =>
      writeTrail(tx, ctx, {
        action: "session.refused",
        about: { kind: "person", id: input.personId, label: found?.name ?? "nobody here" },
        why: `wrong PIN at ${device.name}`,
      }),
    );
    throw problem(
      "wrong-credentials",
      left > 0
        ? `This PIN does not fit. ${left === 1 ? "One try is" : `${left} tries are`} left; the password works too.`
        : "This PIN does not fit, and is now locked here for a quarter of an hour. The password works.",
      {
        fields: [{ path: "pin", message: "This PIN does not fit." }],
      },
    );
  }
  await forgetTries(db, limit);
  return { device };
}

async function benchContext({ db }: Services, device: queries.BenchDevice): Promise<Context> {
  const bare = asWavekeep({ labId: device.labId, isDemo: false, zone: "Etc/UTC" });
  const lab = await inLab(db, bare, (tx) => queries.findLabMark(tx, device.labId));
  return asWavekeep({ labId: device.labId, ...lab });
}
