/** What happens in the story, in the order of its times. */
import { TZDate } from "@date-fns/tz";
import { addDays } from "../instruments/dates.ts";
import { lab } from "./cast.ts";
import { instruments, type DemoCheck, type DemoEvent, type DemoInstrument } from "./story.ts";

export type Step =
  | { kind: "register"; at: Date; instrument: DemoInstrument }
  | { kind: "event"; at: Date; instrument: DemoInstrument; event: DemoEvent }
  | { kind: "tolerance"; at: Date; instrument: DemoInstrument }
  | { kind: "check"; at: Date; instrument: DemoInstrument; check: DemoCheck; ordinal: number }
  | { kind: "approve"; at: Date; instrument: DemoInstrument; check: DemoCheck };

/** An instant of the story: so many days before the first day, at a clock time of the lab. */
export function moment(today: string, daysAgo: number, time: string): Date {
  const [year, month, day] = addDays(today, -daysAgo).split("-").map(Number) as [number, number, number];
  const [hours, minutes] = time.split(":").map(Number) as [number, number];
  return new Date(new TZDate(year, month - 1, day, hours, minutes, lab.zone).getTime());
}

const minutesLater = (at: Date, minutes: number): Date => new Date(at.getTime() + minutes * 60_000);

/** Minutes from the first capture of a check to its signature. */
export const CHECK_MINUTES = 53;
/** A check of the day of an adjustment is reviewed at once, any other on the next morning. */
const SAME_DAY_REVIEW_MINUTES = 100;

export function timeline(today: string): Step[] {
  const steps: Step[] = [];
  for (const instrument of instruments) {
    steps.push({ kind: "register", at: moment(today, instrument.registeredDaysAgo, "09:00"), instrument });
    for (const event of instrument.events)
      steps.push({ kind: "event", at: moment(today, event.daysAgo, event.time), instrument, event });
    const earlier = instrument.earlierTolerance;
    if (earlier) steps.push({ kind: "tolerance", at: moment(today, earlier.changedDaysAgo, earlier.time), instrument });
    const sameDay = (check: DemoCheck) =>
      instrument.checks.filter(({ daysAgo }) => daysAgo === check.daysAgo).length > 1;
    instrument.checks.forEach((check, ordinal) => {
      const at = moment(today, check.daysAgo, check.time);
      steps.push({ kind: "check", at, instrument, check, ordinal });
      if (check.until === "approved") {
        steps.push({
          kind: "approve",
          at: sameDay(check) ? minutesLater(at, SAME_DAY_REVIEW_MINUTES) : moment(today, check.daysAgo - 1, "09:40"),
          instrument,
          check,
        });
      }
    });
  }
  return steps.sort((a, b) => a.at.getTime() - b.at.getTime());
}
