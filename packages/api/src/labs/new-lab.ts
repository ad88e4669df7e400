/**
 * `npm run -s new-lab -- --name ... --email ... [--zone Europe/Berlin]`: opens a lab as the owner of the installation and
 * prints a one-time link for its first manager. There is no open sign-up.
 */
import { parseArgs } from "node:util";
import { newToken, tokenHash } from "../auth/passwords.ts";
import { email as emailShape, name as nameShape } from "../contract/common.ts";
import { newId } from "../db/columns.ts";
import { openDatabase, type Database } from "../db/connection.ts";
import { asWavekeep, inLab, recordNow } from "../db/tenancy.ts";
import { saveInvitation } from "../people/queries.ts";
import { addDefaultProcedures } from "../procedures/service.ts";
import { writeTrail } from "../records/trail.ts";
import { createLab } from "./queries.ts";
import { isZone } from "./service.ts";

const INVITATION_DAYS = 14;
const UNDEFINED_FUNCTION = "42883";

/**
 * Open a lab and invite its first manager.
 *
 * @param db the owner's connection, or the seeding role's for a demo lab
 * @returns the lab's id and the token of the invitation
 */
export async function openLab(
  db: Database,
  lab: { name: string; zone: string; email: string; altitudeM?: number | null; isDemo?: boolean; statedNow?: Date },
): Promise<{ labId: string; token: string }> {
  const labId = newId();
  const token = newToken();
  const ctx = asWavekeep({ labId, isDemo: lab.isDemo ?? false, zone: lab.zone, statedNow: undefined });
  await inLab(db, ctx, (tx) =>
    createLab(tx, { id: labId, name: lab.name, zone: lab.zone, altitudeM: lab.altitudeM ?? null, isDemo: ctx.isDemo }),
  );
  // A stated clock holds only once the lab is there and marked as a demo.
  const inTime = { ...ctx, statedNow: lab.statedNow };
  await inLab(db, inTime, async (tx) => {
    const now = await recordNow(tx);
    const id = newId();
    await saveInvitation(tx, {
      id,
      labId,
      email: lab.email,
      roles: ["manager"],
      tokenHash: tokenHash(token),
      invitedBy: null,
      invitedAt: now,
      expiresAt: new Date(now.getTime() + INVITATION_DAYS * 86_400_000),
    });
    const procedures = await addDefaultProcedures(tx, inTime);
    await writeTrail(tx, inTime, [
      {
        action: "lab.created",
        about: { kind: "lab", id: labId, label: lab.name },
        after: { zone: lab.zone, demo: ctx.isDemo },
      },
      { action: "person.invited", about: { kind: "invitation", id, label: lab.email }, after: { roles: ["manager"] } },
      ...procedures,
    ]);
  });
  return { labId, token };
}

async function main(): Promise<void> {
  const { values } = parseArgs({
    options: { name: { type: "string" }, email: { type: "string" }, zone: { type: "string" } },
  });
  const name = nameShape.safeParse(values.name ?? "");
  const email = emailShape.safeParse(values.email ?? "");
  const zone = values.zone ?? new Intl.DateTimeFormat().resolvedOptions().timeZone;
  const ownerUrl = process.env["DATABASE_OWNER_URL"];
  const wrong = [
    name.success ? null : "--name: write the lab's name, at most 120 characters.",
    email.success ? null : "--email: write the first manager's e-mail address.",
    isZone(zone) || zone === "UTC" ? null : `--zone: ${zone} is no time zone. Write it like Europe/Berlin.`,
    ownerUrl ? null : "DATABASE_OWNER_URL is not set: only the owner of the installation opens labs.",
  ].filter((line) => line !== null);
  if (wrong.length > 0 || !name.success || !email.success || !ownerUrl) {
    process.stderr.write(
      `${wrong.join("\n")}\nFor example: npm run -s new-lab -- --name "Spectroscopy" --email manager@example.org --zone Europe/Berlin\n`,
    );
    process.exitCode = 1;
    return;
  }
  const db = openDatabase(ownerUrl, { max: 1 });
  try {
    const { token } = await openLab(db, { name: name.data, zone, email: email.data });
    const publicUrl = (process.env["PUBLIC_URL"] ?? `http://127.0.0.1:${process.env["PORT"] ?? "4310"}`).replace(
      /\/$/,
      "",
    );
    process.stdout.write(`${publicUrl}/invitation/${token}\n`);
    process.stderr.write(
      `The lab ${name.data} is open. The link above makes ${email.data} its manager; it can be used once, within two weeks.\n`,
    );
  } catch (error) {
    if ((error as { cause?: { code?: string } }).cause?.code !== UNDEFINED_FUNCTION) throw error;
    process.stderr.write(
      "The database has no Wavekeep schema yet, or an older one. Run npm start once with the same variables, then this again. No lab was opened.\n",
    );
    process.exitCode = 1;
  } finally {
    await db.close();
  }
}

// Run by its own name in the build and in the sources; imported by the demo's seeding program, it does nothing by itself.
if (/[\\/]new-lab\.(js|ts)$/.test(process.argv[1] ?? "")) await main();
