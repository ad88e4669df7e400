/**
 * The trail as people read it: one sentence an action, without the actor's name, which stands strong before it.
 * Exhaustive: an action without a sentence does not compile.
 */
import { dayText } from "../instruments/dates.ts";
import type { TrailDocument } from "./trail.ts";
import type { TrailAction } from "./trail-actions.ts";

/** What a sentence may speak of. `label` is the subject's name, also where it was personal data; "—" once disposed of. */
export interface SentenceFacts {
  label: string;
  before: Record<string, unknown>;
  after: Record<string, unknown>;
  why: string | null;
  /** Personal data still held. */
  personal: Record<string, string>;
}

type Sentence = (facts: SentenceFacts) => string;

const text = (value: unknown): string =>
  value === null || value === undefined || value === ""
    ? "none"
    : Array.isArray(value)
      ? value.map(text).join(", ")
      : typeof value === "object"
        ? JSON.stringify(value)
        : words(String(value));

/** Words as people write them where the facts keep a code's: dates, and the condition an instrument was measured in. */
const words = (fact: string): string =>
  fact === "as-found" || fact === "as-left"
    ? fact.replace("-", " ")
    : fact.replace(/\b\d{4}-(0[1-9]|1[0-2])-(0[1-9]|[12]\d|3[01])\b(?!T)/g, dayText);
const because = (why: string | null): string => (why === null || why === "" ? "" : `: “${why}”`);
/** A finding of Wavekeep's own, not quoted. */
const stated = (why: string | null): string => (why === null || why === "" ? "" : `: ${why.replace(/\.$/, "")}`);
const forOwner = (after: Record<string, unknown>): string => (after["forOwner"] === true ? ", for the owner" : "");
const verdict = (after: Record<string, unknown>): string =>
  ({
    pass: after["nearLimit"] === true ? "in tolerance, near the limit" : "in tolerance",
    inconclusive: "inconclusive",
    fail: "out of tolerance",
  })[text(after["verdict"])] ?? "not judged";
const leftOut = ({ leftOut: count }: Record<string, unknown>): string =>
  typeof count !== "number" || count === 0 ? "nothing left out" : plural(count, "line left out", "lines left out");
const list = (value: unknown): string =>
  Array.isArray(value) && value.length > 0 ? value.map(text).join(", ") : "no role";
const plural = (value: unknown, one: string, many: string): string =>
  value === 1 ? `1 ${one}` : `${text(value)} ${many}`;

/** Units that names end in, as people read them. */
const units: Record<string, string> = { Nm: "nm", M: "m", Px: "px", C: "°C", Hpa: "hPa" };

/** `altitudeM` -> "altitude in m", `dueOn` -> "due on". */
function wordsOf(key: string): string {
  const [, stem, unit] = /^(.*[a-z])(Nm|M|Px|C|Hpa)$/.exec(key) ?? [];
  const name = (stem ?? key).replace(/([a-z])([A-Z])/g, "$1 $2").toLowerCase();
  return unit === undefined ? name : `${name} in ${units[unit]!}`;
}

/** " (place from A to B; serial …)": what changed; long and structured values are left to the entry's details. */
export function changes({ before, after }: Pick<SentenceFacts, "before" | "after">): string {
  const keys = [...new Set([...Object.keys(before), ...Object.keys(after)])];
  const isPlain = (value: unknown) => typeof value !== "object" || value === null;
  const parts = keys.map((key) => {
    const [from, to] = [text(before[key]), text(after[key])];
    const short = isPlain(before[key]) && isPlain(after[key]) && from.length + to.length <= 80;
    return short ? `${wordsOf(key)} from ${from} to ${to}` : wordsOf(key);
  });
  return parts.length === 0 ? "" : ` (${parts.join("; ")})`;
}

export const sentences: Record<TrailAction, Sentence> = {
  "lab.created": ({ label }) => `opened the lab ${label}`,
  "lab.changed": (f) => `changed the lab's settings${changes(f)}`,
  "person.invited": ({ label, after }) => `invited ${label} as ${list(after["roles"])}`,
  "invitation.accepted": ({ after }) => `accepted the invitation as ${list(after["roles"])}`,
  "invitation.withdrawn": ({ label }) => `withdrew the invitation of ${label}`,
  "roles.changed": (f) =>
    `changed what ${f.label} may do: ${list(f.before["roles"])} became ${list(f.after["roles"])}${approver(f)}`,
  "membership.ended": ({ label, why }) => `ended the membership of ${label}${because(why)}`,
  "deputy.appointed": ({ label, personal, after }) =>
    `appointed ${label} deputy for ${personal["forPerson"] ?? "—"} from ${text(after["fromOn"])} to ${text(after["toOn"])}`,
  "bench.enrolled": ({ label }) => `enrolled ${label} as a shared PC`,
  "bench.removed": ({ label }) => `ended bench mode on ${label}`,
  "session.begun": ({ after }) =>
    after["bench"] === undefined ? "signed in" : `signed in at the shared PC ${text(after["bench"])}`,
  "session.refused": ({ label, why }) => `refused a sign-in of ${label}${because(why)}`,
  "session.ended-everywhere": () => "signed out on every device",
  "password.changed": () => "changed the password",
  "password.reset-asked": ({ label }) => `sent ${label} a link for a new password`,
  "pin.changed": () => "set a PIN for bench mode",
  "name.changed": ({ personal }) =>
    `changed the printed name from ${personal["nameBefore"] ?? "—"} to ${personal["nameAfter"] ?? "—"}`,
  "action.refused": ({ label, why }) => `was refused: ${label}${because(why)}`,

  "instrument.registered": ({ label }) => `registered ${label}`,
  "instrument.changed": (f) => `changed ${f.label}${changes(f)}`,
  "instrument.retired": ({ label, why }) => `retired ${label}${because(why)}`,
  "configuration.begun": ({ label, before, why }) =>
    before["configurationId"] === undefined
      ? `added the configuration ${label}${because(why)}`
      : `began the configuration ${label}${typeof before["name"] === "string" ? `, in place of ${before["name"]}` : ", in place of the one before"}${because(why)}`,
  // A plain instrument's history never shows the word.
  "configuration.changed": (f) => `changed the set-up of ${f.label}${changes(f)}`,
  "configuration.ended": ({ label, why }) => `ended the configuration ${label}${because(why)}`,
  "tolerance.changed": ({ label, why }) => `set a new tolerance for ${label}${because(why)}`,
  "standing.changed": ({ label, before, after, why }) =>
    `moved ${label} from ${text(before["standing"])} to ${text(after["standing"])}${because(why)}`,
  "hold.placed": ({ label, why }) => `put ${label} on hold${stated(why)}; a manager confirms or lifts it`,
  "hold.confirmed": ({ label, after, why }) =>
    `confirmed the hold on ${label}: ${text(after["standing"])}${because(why)}`,
  "hold.lifted": ({ label, why }) => `lifted the hold on ${label}${because(why)}`,
  "hold.ended": ({ label, why }) => `put ${label} back in service${stated(why)}`,
  "due.moved": ({ label, before, after, why }) =>
    `moved the next check of ${label} from ${text(before["dueOn"])} to ${text(after["dueOn"])}${because(why)}`,
  "event.logged": ({ label, after }) => `logged for ${label}: ${text(after["title"])}`,
  "axis.entered": ({ label, after }) => `entered axis ${text(after["number"])} of ${label}`,

  "source.registered": ({ label }) => `registered the source ${label}`,
  "source.changed": (f) => `changed the source ${f.label}${changes(f)}`,
  "source.retired": ({ label, why }) => `retired the source ${label}${because(why)}`,
  "certificate.stored": ({ label, after }) => `stored the certificate ${text(after["fileName"])} of ${label}`,
  "certificate.read": ({ label }) => `took a copy of the certificate of ${label}`,
  "procedure.approved": ({ label, after }) => `put the procedure ${label} version ${text(after["version"])} in force`,
  "line-list.added": ({ label }) => `added line list ${label}`,

  "check.begun": ({ label, after }) =>
    `began check ${label}${after["condition"] === undefined ? "" : `, ${text(after["condition"])}`}`,
  "captures.stored": ({ label, after }) =>
    `brought in ${plural(after["count"], "capture", "captures")} for ${label}${after["part"] === "dark" ? ", dark" : ""}, attempt ${text(after["attempt"])}; stored byte for byte before anything was read`,
  "attempt.begun": ({ label, after, why }) =>
    `abandoned an attempt of ${label} and began attempt ${text(after["attempt"])}${because(why)}`,
  "analysis.made": ({ label, after }) =>
    `analysed ${label}, version ${text(after["version"])}: ${after["verdict"] === null ? text(after["outcome"]) : verdict(after)}`,
  "line.left-out": ({ label, after, why }) =>
    `left out ${after["species"] ? `${text(after["species"])} ` : "the line at "}${text(after["wavelengthNm"])}\u202fnm in ${label}, ${text(after["reason"])}${because(why)}`,
  "line.brought-back": ({ label, before }) =>
    `took the line at ${text(before["wavelengthNm"])}\u202fnm back into ${label}`,
  "draft.changed": (f) => `changed the draft of ${f.label}${changes(f)}`,
  "check.set-aside": ({ label, why }) => `set ${label} aside${because(why)}`,
  "check.submitted": ({ label, after }) =>
    `signed ${label} “made by” and submitted it: ${verdict(after)}; ${leftOut(after)}`,
  "check.returned": ({ label, why }) => `sent ${label} back${because(why)}`,
  "check.approved": ({ label, after }) =>
    `signed ${label} “reviewed and approved”: ${verdict(after)}${after["selfApproval"] === true ? ", a self-approval" : ""}; the record is locked`,
  "check.acknowledged": ({ label, after, why }) => `took note of ${label}${forOwner(after)}${because(why)}`,
  "check.voided": ({ label, why }) => `voided ${label}${because(why)}`,
  "as-left.asked": ({ label }) => `asked for an as-left check of ${label}`,
  "report.made": ({ label, after }) => `made report ${text(after["number"])} of ${label}`,
  "report.read": ({ label }) => `took a copy of the report of ${label}`,
  "capture.read": ({ label }) => `took a copy of the capture ${label}`,

  "alert.opened": ({ label, why }) => `opened an alert: ${label}${stated(why)}`,
  "alert.closed": ({ label, why }) => `closed the alert: ${label}${stated(why)}`,
  "alert.reopened": ({ label, why }) => `opened an alert again: ${label}${stated(why)}`,
  "alert.acknowledged": ({ label, after, why }) => `acknowledged the alert: ${label}${forOwner(after)}${because(why)}`,
  "impact.opened": ({ label, after }) =>
    `opened the impact review ${label}${after["windowFromCheck"] ? `: from the last good check, ${text(after["windowFromCheck"])}, to ${text(after["check"])}` : ": no good check is on record before"}`,
  "impact.decided": ({ label, after, why }) => `decided the impact review ${label}${forOwner(after)}${because(why)}`,
  "mail.sent": ({ label, after }) => `mailed ${label}: ${text(after["subject"])}`,
  "mail.failed": ({ label, after }) => `could not mail ${label}: ${text(after["subject"])}`,
  "head.signed": ({ after }) => `signed the head of the trail, entry ${text(after["number"])}`,
};

function approver({ before, after }: SentenceFacts): string {
  if (before["isApprover"] === after["isApprover"]) return "";
  return after["isApprover"] === true ? ", and named them approver" : ", no longer an approver";
}

/** The sentence of a stored entry, with the personal data that is still held. */
export function sentenceOf(document: TrailDocument, personal: Record<string, string>): string {
  const write = (sentences as Record<string, Sentence | undefined>)[document.action];
  const facts: SentenceFacts = {
    label: document.about.label ?? personal["about"] ?? "—",
    before: asRecord(document.before),
    after: asRecord(document.after),
    why: document.why,
    personal,
  };
  return write === undefined ? `${document.action} ${facts.label}` : write(facts);
}

const asRecord = (value: unknown): Record<string, unknown> =>
  typeof value === "object" && value !== null && !Array.isArray(value) ? (value as Record<string, unknown>) : {};
