/** The lab's own settings. */
import type { z } from "zod";
import type { changeLabInput, LabSettings } from "../contract/people.ts";
import { assertFresh, inLab, type Context } from "../db/tenancy.ts";
import { problem } from "../http/problem.ts";
import { canonicalText } from "../records/canonical.ts";
import { writeTrail } from "../records/trail.ts";
import type { Services } from "../services.ts";
import { findLab, lockLab, saveLab, type LabRow } from "./queries.ts";

const present = (row: LabRow, fingerprint: string): LabSettings => ({
  id: row.id,
  name: row.name,
  zone: row.zone,
  altitudeM: row.altitudeM,
  isDemo: row.isDemo,
  selfApproval: row.selfApproval,
  warningShare: row.warningShare,
  decisionRule: row.decisionRule,
  headMail: row.headMail,
  signingKeyFingerprint: fingerprint,
  version: row.version,
});

export const readLab = ({ db, signer }: Services, ctx: Context): Promise<LabSettings> =>
  inLab(db, ctx, async (tx) => present(await findLab(tx, ctx.labId), signer.fingerprint));

/** True for an IANA zone that this runtime knows. */
export function isZone(zone: string): boolean {
  try {
    new Intl.DateTimeFormat("en", { timeZone: zone });
    return zone.includes("/") || zone === "UTC";
  } catch {
    return false;
  }
}

export function changeLab(
  { db, signer }: Services,
  ctx: Context,
  input: z.output<typeof changeLabInput>,
): Promise<LabSettings> {
  const { version, ...change } = input;
  if (!isZone(change.zone)) {
    throw problem("invalid-input", `${change.zone} is no time zone that Wavekeep knows. Nothing was stored.`, {
      fields: [{ path: "zone", message: "Write it like Europe/Berlin." }],
    });
  }
  return inLab(db, ctx, async (tx) => {
    const stored = await lockLab(tx, ctx.labId);
    assertFresh(stored, { version }, "The lab's settings");
    const { headMail, ...open } = change;
    const changed = (Object.keys(open) as (keyof typeof open)[]).filter(
      (key) => canonicalText(stored[key]) !== canonicalText(open[key]),
    );
    const mailChanged = stored.headMail !== headMail;
    if (changed.length === 0 && !mailChanged) return present(stored, signer.fingerprint);
    await saveLab(tx, ctx.labId, change);
    const reply = present(await findLab(tx, ctx.labId), signer.fingerprint);
    await writeTrail(tx, ctx, {
      action: "lab.changed",
      about: { kind: "lab", id: ctx.labId, label: change.name },
      before: {
        ...pick(stored, changed),
        ...(mailChanged ? { headMail: stored.headMail === null ? "none" : "set" } : {}),
      },
      after: { ...pick(open, changed), ...(mailChanged ? { headMail: headMail === null ? "none" : "set anew" } : {}) },
      personal: mailChanged ? { headMailBefore: stored.headMail ?? "", headMailAfter: headMail ?? "" } : {},
    });
    return reply;
  });
}

const pick = <T extends object>(from: T, keys: readonly (keyof T)[]): Record<string, unknown> =>
  Object.fromEntries(keys.map((key) => [key, from[key]]));
