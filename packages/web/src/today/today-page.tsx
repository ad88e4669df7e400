/** Today: what do I do now, as a sentence and a list; then the ruler of days, then the fleet. */
import type { TodayReply } from "@wavekeep/api/contract";
import { DaysRuler } from "../drawings/index.ts";
import { Asked } from "../shared/asked.tsx";
import { FleetTable } from "../shared/fleet-table.tsx";
import { countWord, sentenceCase } from "../shared/words.ts";
import {
  dayOf,
  Empty,
  formatWeekday,
  LinkButton,
  Page,
  Section,
  Skeleton,
  TextLink,
  useMay,
  useMe,
} from "../ui/index.ts";
import { TodayList } from "./today-list.tsx";
import { useToday } from "./queries.ts";

/** One sentence about how the fleet stands to its dates. */
function dueNote(due: TodayReply["due"]): string {
  // An as-left check that was asked for, or a check that waits for its review, is said as that, whatever date stood before.
  const isDated = ({ note }: { note: string }) => note !== "as-left check" && note !== "awaits review";
  const overdue = due.filter((item) => item.days < 0 && isDated(item)).length;
  const span = "The weeks ahead.";
  if (overdue === 0) return `${span} Nothing is overdue.`;
  return `${span} ${sentenceCase(countWord(overdue))} ${overdue === 1 ? "is" : "are"} overdue.`;
}

const fleetNote = (count: number) =>
  `${sentenceCase(countWord(count))} ${count === 1 ? "instrument" : "instruments"} by tolerance used at their last check, each at its worst line.`;

export function TodayPage() {
  const today = useToday();
  const me = useMe();
  const may = useMay();
  const { weekday, day } = formatWeekday(today.data?.on ?? dayOf(new Date(), me.lab.zone));
  return (
    <Page
      name="Today"
      title={today.data?.sentence ?? <span className="text-quiet">Looking what waits for you…</span>}
      aside={
        <>
          <span className="book:block">{weekday}</span> <span className="book:block">{day}</span>
        </>
      }
    >
      <Section title="For you" note="Most urgent first. An alert closes by itself when the next good check proves it.">
        <Asked query={today} rows={4}>
          {(data) => <TodayList items={data.items} />}
        </Asked>
      </Section>
      {today.data !== undefined && today.data.due.length > 0 && (
        <Section title="Due" note={dueNote(today.data.due)} className="hidden book:grid">
          <DaysRuler todayOn={today.data.on} items={today.data.due} />
        </Section>
      )}
      <Section
        title="Fleet"
        note={today.data !== undefined && today.data.fleet.length > 0 ? fleetNote(today.data.fleet.length) : undefined}
        links={<TextLink to="/instruments">All instruments</TextLink>}
      >
        {today.data === undefined ? (
          today.error === null && <Skeleton rows={9} />
        ) : today.data.fleet.length === 0 ? (
          <Empty
            text="The lab’s instruments stand here, the one nearest its limit first. None is registered yet."
            action={may("instrument.change") && <LinkButton to="/instruments/new">Register an instrument</LinkButton>}
          />
        ) : (
          <FleetTable rows={today.data.fleet} todayOn={today.data.on} />
        )}
      </Section>
    </Page>
  );
}
