/** Reports: made once when a check is approved, numbered and kept; before that, drawn as a draft and not kept. */
import { reports } from "../db/schema/index.ts";
import { asWavekeep, inLab, type Context } from "../db/tenancy.ts";
import type { Database } from "../db/connection.ts";
import type { Analyser } from "../checks/analyser.ts";
import { findCheck, findOptionalReport, findState } from "../checks/queries.ts";
import type { FileReply } from "../http/file-reply.ts";
import { isUniqueViolation } from "../instruments/conflicts.ts";
import { yearIn } from "../instruments/dates.ts";
import { takeNumber } from "../instruments/queries.ts";
import { sha256Hex } from "./canonical.ts";
import { gatherReport, type ReportFacts } from "./report-facts.ts";
import type { HeadSigner } from "./signing.ts";
import { writeTrail } from "./trail.ts";

export interface ReportWork {
  db: Database;
  signer: Pick<HeadSigner, "fingerprint">;
  analyser: Pick<Analyser, "drawReport">;
}

/**
 * The report of an approved check, made if it is not there yet: drawn with no transaction open, stored with its hash in the
 * trail. A server that stopped between approval and report makes it when it is next asked for.
 */
export async function ensureReport(
  work: ReportWork,
  ctx: Context,
  checkId: string,
): Promise<typeof reports.$inferSelect> {
  const stored = await inLab(work.db, ctx, (tx) => findOptionalReport(tx, checkId));
  if (stored !== null) return stored;
  const wavekeep = asWavekeep(ctx);
  const facts = await inLab(work.db, ctx, async (tx): Promise<ReportFacts> => {
    const check = await findCheck(tx, checkId);
    const gathered = await gatherReport(tx, ctx, checkId, null);
    const number = await takeNumber(tx, ctx, "report", yearIn(ctx.zone, gathered.madeAt));
    return { ...gathered, check, number };
  });
  const bytes = await work.analyser.drawReport({ facts, keyFingerprint: work.signer.fingerprint });
  const row = {
    labId: ctx.labId,
    checkId,
    number: facts.number!,
    sha256: sha256Hex(bytes),
    bytes,
    madeAt: facts.madeAt,
  };
  try {
    await inLab(work.db, wavekeep, async (tx) => {
      await tx.insert(reports).values(row);
      await writeTrail(tx, wavekeep, {
        action: "report.made",
        about: {
          kind: "report",
          id: checkId,
          label: facts.check.number,
          instrumentId: facts.check.instrumentId,
          checkId,
        },
        after: { number: row.number, sha256: row.sha256, sizeBytes: bytes.length, head: facts.head?.number ?? null },
      });
    });
    return row;
  } catch (error) {
    // Somebody else asked at the same moment: theirs is the report.
    if (!isUniqueViolation(error)) throw error;
    return (await inLab(work.db, ctx, (tx) => findOptionalReport(tx, checkId)))!;
  }
}

/** The stored report, or a draft marked as one; that somebody took a copy is in the trail. */
export async function readReport(work: ReportWork, ctx: Context, checkId: string): Promise<FileReply> {
  const { check, approved } = await inLab(work.db, ctx, async (tx) => ({
    check: await findCheck(tx, checkId),
    approved: (await findState(tx, checkId)) === "approved",
  }));
  if (!approved) {
    const facts = await inLab(work.db, ctx, (tx) => gatherReport(tx, ctx, checkId, null));
    const bytes = await work.analyser.drawReport({ facts, keyFingerprint: work.signer.fingerprint });
    return pdf(bytes, `${check.number}-draft.pdf`);
  }
  const report = await ensureReport(work, ctx, checkId);
  await inLab(work.db, ctx, (tx) =>
    writeTrail(tx, ctx, {
      action: "report.read",
      about: { kind: "report", id: checkId, label: check.number, instrumentId: check.instrumentId, checkId },
      after: { number: report.number, sha256: report.sha256 },
    }),
  );
  return pdf(report.bytes, `${report.number}-${check.number}.pdf`, report.sha256);
}

const pdf = (bytes: Buffer, name: string, sha256?: string): FileReply => ({
  file: { bytes, type: "application/pdf", name, inline: true, ...(sha256 === undefined ? {} : { sha256 }) },
});
