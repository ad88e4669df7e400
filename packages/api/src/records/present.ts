/** A stored entry as people read it. */
import type { ChainState, TrailEntry } from "../contract/records.ts";
import { entryShape } from "../contract/records.ts";
import type { EntryRow } from "./queries.ts";
import { sentenceOf } from "./sentences.ts";
import type { TrailDocument } from "./trail.ts";
import type { VerifiedChain } from "./verify.ts";

/** Page of the client that shows a subject; null where there is none. */
function pageOf(document: TrailDocument): string | null {
  const { kind, id, instrument, check } = document.about;
  if (kind === "instrument") return `/instruments/${id}`;
  if (kind === "source") return `/sources/${id}`;
  if (kind === "check") return `/checks/${id}`;
  if (kind === "impact-review") return `/impact/${id}`;
  if (kind === "alert") return "/alerts";
  if (kind === "line-list") return "/sources/lines";
  if (check !== null) return `/checks/${check}`;
  if (instrument !== null) return `/instruments/${instrument}`;
  return null;
}

const asRecord = (value: unknown): Record<string, unknown> | null =>
  typeof value === "object" && value !== null && !Array.isArray(value) ? (value as Record<string, unknown>) : null;

export function presentEntry(row: EntryRow): TrailEntry {
  const document = JSON.parse(row.canonical) as TrailDocument;
  const personal = row.personal ?? {};
  const label = document.about.label ?? personal["about"] ?? "—";
  return {
    number: row.number,
    at: row.at.toISOString(),
    shape: entryShape.catch("person").parse(row.shape),
    action: row.action,
    actor: document.actor.id === null ? "Wavekeep" : (personal["actor"] ?? "somebody whose name was disposed of"),
    actorRole: document.actor.role,
    sentence: sentenceOf(document, personal),
    about: label === "" ? null : { label, to: pageOf(document) },
    hash: row.hash,
    previousHash: row.previousHash,
    before: asRecord(document.before),
    after: asRecord(document.after),
    why: document.why,
    demo: row.demo,
  };
}

/** Digits in threes with narrow no-break spaces. */
const grouped = (count: number): string => String(count).replace(/\B(?=(\d{3})+$)/g, "\u202f");

const dateIn = (zone: string, at: Date): string =>
  new Intl.DateTimeFormat("en-GB", { timeZone: zone, day: "numeric", month: "long", year: "numeric" }).format(at);

export function chainSentence(chain: VerifiedChain, zone: string): string {
  if (chain.entryCount === 0 || chain.firstAt === null) return "The trail is empty.";
  const entries = chain.entryCount === 1 ? "1 entry" : `${grouped(chain.entryCount)} entries`;
  const [first] = chain.breaks;
  if (first === undefined) return `The chain holds: ${entries} since ${dateIn(zone, chain.firstAt)}.`;
  return `The chain does not hold: at entry ${grouped(first.number)}, ${first.what}.`;
}

export function presentChain(
  chain: VerifiedChain,
  facts: { zone: string; checkedAt: Date; keyFingerprint: string; checks: number; attempts: number },
): ChainState {
  return {
    whole: chain.breaks.length === 0,
    sentence: chainSentence(chain, facts.zone),
    entryCount: chain.entryCount,
    checkedAt: facts.checkedAt.toISOString(),
    firstAt: chain.firstAt?.toISOString() ?? null,
    lastAt: chain.lastAt?.toISOString() ?? null,
    signatureCount: chain.signatureCount,
    signaturesValid: chain.signaturesValid,
    attemptCount: facts.attempts,
    checkCount: facts.checks,
    head: chain.head,
    headSignedAt: chain.headSignedAt?.toISOString() ?? null,
    keyFingerprint: facts.keyFingerprint,
    breaks: chain.breaks,
  };
}
