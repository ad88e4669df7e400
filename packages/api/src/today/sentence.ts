/** The day in words: what kinds of things wait, and how many; what the ruler of days says of a date. */
import type { TodayReply } from "../contract/work.ts";
import { listText } from "../checks/words.ts";
import { dueText } from "../instruments/dates.ts";

type Kind = TodayReply["items"][number]["kind"];

const groups: { kinds: Kind[]; one: string; many: string }[] = [
  { kinds: ["hold-decision", "impact", "alert"], one: "decision", many: "decisions" },
  { kinds: ["review"], one: "signature", many: "signatures" },
  { kinds: ["returned"], one: "check sent back", many: "checks sent back" },
  { kinds: ["due", "overdue"], one: "check", many: "checks" },
  { kinds: ["draft"], one: "draft", many: "drafts" },
];

const numbers = [
  "no",
  "one",
  "two",
  "three",
  "four",
  "five",
  "six",
  "seven",
  "eight",
  "nine",
  "ten",
  "eleven",
  "twelve",
];

/** `Three decisions and two signatures wait for you.` */
export function todaySentence(items: readonly Pick<TodayReply["items"][number], "kind">[]): string {
  const parts = groups
    .map(({ kinds, one, many }) => ({ count: items.filter((item) => kinds.includes(item.kind)).length, one, many }))
    .filter(({ count }) => count > 0);
  if (parts.length === 0) return "Nothing waits for you.";
  const text = listText(parts.map(({ count, one, many }) => `${numbers[count] ?? count} ${count === 1 ? one : many}`));
  const single = parts.length === 1 && parts[0]!.count === 1;
  return `${text[0]!.toUpperCase()}${text.slice(1)} ${single ? "waits" : "wait"} for you.`;
}

/**
 * `in 6 days`, `overdue 1 day`, `first check`. As in the fleet, an as-left check that was asked for goes before any date,
 * and so does a check that waits for its review.
 */
export function rulerNote(row: {
  asLeftAsked: boolean;
  awaitsReview: boolean;
  checkedAt: string | null;
  dueDays: number;
}): string {
  if (row.asLeftAsked) return "as-left check";
  if (row.awaitsReview) return "awaits review";
  if (row.checkedAt === null && row.dueDays >= 0) return "first check";
  return dueText(row.dueDays).replace(/^due (in )/, "$1");
}
