/**
 * Whether a lab's chain holds: one pass over its entries, batch by batch, each in a short transaction of its own. The
 * chain only grows, so what was read stays as it was.
 *
 * Of each entry: its place, its link to the one before, its hash, its canonical form, the columns beside it, the salted
 * hashes of the personal data still held, and the SHA-256 of every row it speaks of. Then every signed head: signed by
 * the key of this installation, and still the hash of that entry.
 */
import type { Database } from "../db/connection.ts";
import { inLab, type Context } from "../db/tenancy.ts";
import { canonicalText, personalHash, sha256Hex } from "./canonical.ts";
import { hashRowsNow, listEntriesAbove, listHashes, listSignedHeads, type EntryRow } from "./queries.ts";
import { isSignedHeadValid, type HeadSigner } from "./signing.ts";
import { CHAIN_START, type TrailDocument } from "./trail.ts";

export interface ChainBreak {
  number: number;
  /** What is wrong, in words. */
  what: string;
}

export interface VerifiedChain {
  entryCount: number;
  firstAt: Date | null;
  lastAt: Date | null;
  head: string;
  breaks: ChainBreak[];
  signatureCount: number;
  signaturesValid: boolean;
  headSignedAt: Date | null;
}

const BATCH = 500;
/** Once a chain is broken, the first places tell what happened; a thousand more tell nothing new. */
const MOST_BREAKS = 50;

export async function verifyChain(
  db: Database,
  ctx: Context,
  signer: Pick<HeadSigner, "fingerprint">,
): Promise<VerifiedChain> {
  const breaks: ChainBreak[] = [];
  const note = (number: number, what: string) => void (breaks.length < MOST_BREAKS && breaks.push({ number, what }));
  let [number, head, entryCount] = [0, CHAIN_START, 0];
  let [firstAt, lastAt]: [Date | null, Date | null] = [null, null];
  for (;;) {
    const batch = await inLab(db, ctx, async (tx) => {
      const rows = await listEntriesAbove(tx, number, BATCH);
      const documents = rows.map((row) => parseDocument(row.canonical));
      const named = documents.flatMap((document) => document?.rows ?? []);
      return { rows, documents, hashes: await hashRowsNow(tx, named.filter(isRowName)) };
    });
    let nextHash = 0;
    batch.rows.forEach((row, index) => {
      const document = batch.documents[index] ?? null;
      if (row.number !== number + 1)
        note(
          row.number,
          row.number === number + 2
            ? `entry ${number + 1} is missing`
            : `entries ${number + 1} to ${row.number - 1} are missing`,
        );
      if (row.previousHash !== head) note(row.number, "it does not link to the entry before it");
      if (lastAt !== null && row.at < lastAt) note(row.number, "its time lies before that of the entry before it");
      checkEntry(row, document, note);
      for (const named of document?.rows ?? []) {
        if (!isRowName(named)) continue;
        const now = batch.hashes[nextHash++];
        if (now === null || now === undefined) note(row.number, `the ${words(named.table)} it speaks of is gone`);
        else if (now !== named.sha256)
          note(row.number, `the ${words(named.table)} it speaks of was changed afterwards`);
      }
      firstAt ??= row.at;
      [number, head, lastAt, entryCount] = [row.number, row.hash, row.at, entryCount + 1];
    });
    if (batch.rows.length < BATCH) break;
  }
  return { entryCount, firstAt, lastAt, head, breaks, ...(await verifyHeads(db, ctx, signer, note)) };
}

const words = (table: string): string => `row in ${table.replaceAll("_", " ")}`;
const isRowName = (row: { table: string; id: string }): boolean =>
  /^[a-z_]+$/.test(row.table) && /^[0-9a-f-]{36}$/.test(row.id);

function parseDocument(canonical: string): TrailDocument | null {
  try {
    return JSON.parse(canonical) as TrailDocument;
  } catch {
    return null;
  }
}

function checkEntry(row: EntryRow, document: TrailDocument | null, note: (number: number, what: string) => void): void {
  if (sha256Hex(row.canonical) !== row.hash) note(row.number, "its text does not lead to its hash");
  if (document === null || canonicalText(document) !== row.canonical) {
    note(row.number, "its text is not in canonical form");
    return;
  }
  const beside: [unknown, unknown][] = [
    [document.lab, row.labId],
    [document.number, row.number],
    [document.at, row.at.toISOString()],
    [document.action, row.action],
    [document.shape, row.shape],
    [document.demo, row.demo],
    [document.previous, row.previousHash],
    [document.actor.id, row.personId],
    [document.about.kind, row.aboutKind],
    [document.about.id, row.aboutId],
    [document.about.instrument, row.instrumentId],
    [document.about.check, row.checkId],
  ];
  if (beside.some(([inText, inColumn]) => inText !== inColumn))
    note(row.number, "its columns do not say what its text says");
  // Disposal empties the personal data; what is still there must be what was hashed.
  for (const [key, value] of Object.entries(row.personal ?? {})) {
    if (row.salt === null || document.personal[key] !== personalHash(row.salt, value))
      note(row.number, "a name or address beside it was changed");
  }
}

async function verifyHeads(
  db: Database,
  ctx: Context,
  signer: Pick<HeadSigner, "fingerprint">,
  note: (number: number, what: string) => void,
) {
  const { heads, hashes } = await inLab(db, ctx, async (tx) => {
    const found = await listSignedHeads(tx);
    return {
      heads: found,
      hashes: await listHashes(
        tx,
        found.map((head) => head.number),
      ),
    };
  });
  let signaturesValid = true;
  for (const head of heads) {
    const problems = [
      isSignedHeadValid(head) ? null : "the signature over it does not fit",
      head.keyFingerprint === signer.fingerprint ? null : "it is signed with a key that is not this installation's",
      hashes.get(head.number) === head.hash ? null : "it is not the entry that was signed",
    ].filter((what) => what !== null);
    for (const what of problems) note(head.number, what);
    if (problems.length > 0) signaturesValid = false;
  }
  return { signatureCount: heads.length, signaturesValid, headSignedAt: heads.at(-1)?.signedAt ?? null };
}
