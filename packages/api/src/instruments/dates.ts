/** Dates in the lab's zone, and how they are written in sentences (`14 Jan 2027`, `08:42 CET`). */

/** Making a format costs far more than using it: one a zone. */
const dateFormats = new Map<string, Intl.DateTimeFormat>();
function dateFormat(zone: string): Intl.DateTimeFormat {
  const known = dateFormats.get(zone);
  if (known !== undefined) return known;
  const made = new Intl.DateTimeFormat("en-GB", { timeZone: zone, year: "numeric", month: "2-digit", day: "2-digit" });
  dateFormats.set(zone, made);
  return made;
}

/** `yyyy-mm-dd` of an instant in an IANA zone. */
export function dateIn(zone: string, instant: Date): string {
  const parts = dateFormat(zone).formatToParts(instant);
  const part = (type: string) => parts.find((one) => one.type === type)?.value ?? "";
  return `${part("year").padStart(4, "0")}-${part("month")}-${part("day")}`;
}

/** Calendar year of an instant in a zone: that of check numbers. */
export const yearIn = (zone: string, instant: Date): number => Number(dateIn(zone, instant).slice(0, 4));

const dayMs = 86_400_000;
const noon = (date: string): number => Date.parse(`${date}T12:00:00Z`);

/** A date some days later (or earlier). */
export const addDays = (date: string, days: number): string =>
  new Date(noon(date) + days * dayMs).toISOString().slice(0, 10);

/** Days from one date to another, negative when `to` lies before. */
export const daysBetween = (from: string, to: string): number => Math.round((noon(to) - noon(from)) / dayMs);

const months = ["Jan", "Feb", "Mar", "Apr", "May", "Jun", "Jul", "Aug", "Sep", "Oct", "Nov", "Dec"];

/** `14 Jan 2027`. */
export function dayText(date: string): string {
  return `${Number(date.slice(8, 10))} ${months[Number(date.slice(5, 7)) - 1]} ${date.slice(0, 4)}`;
}

/** `14 Jan`, with the year only where it is another one than `around`'s. */
export const shortDayText = (date: string, around: string): string =>
  date.slice(0, 4) === around.slice(0, 4) ? dayText(date).slice(0, -5) : dayText(date);

/** `08:42 CET` in the lab's zone. */
export function clockText(zone: string, instant: Date): string {
  const parts = new Intl.DateTimeFormat("en-GB", {
    timeZone: zone,
    hour: "2-digit",
    minute: "2-digit",
    hourCycle: "h23",
    timeZoneName: "short",
  }).formatToParts(instant);
  const part = (type: string) => parts.find((one) => one.type === type)?.value ?? "";
  return `${part("hour")}:${part("minute")} ${part("timeZoneName")}`;
}

/** `14 Jan 2027, 08:42 CET`. */
export const momentText = (zone: string, instant: Date): string =>
  `${dayText(dateIn(zone, instant))}, ${clockText(zone, instant)}`;

/** `due in 6 days`, `due today`, `overdue 3 days`. */
export function dueText(days: number): string {
  if (days === 0) return "due today";
  const count = Math.abs(days);
  const span = `${count} ${count === 1 ? "day" : "days"}`;
  return days > 0 ? `due in ${span}` : `overdue ${span}`;
}

/** An instant from a raw query, where the driver hands over text. */
export const toInstant = (value: Date | string): Date => (value instanceof Date ? value : new Date(value));
