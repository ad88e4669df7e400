/** The trail as a book: a day a section, entries threaded on one ink line, each opening to what stood before and after. */
import type { TrailEntry } from "@wavekeep/api/contract";
import { useState } from "react";
import { Link } from "react-router";
import {
  dayOf,
  formatClock,
  formatHash,
  formatInstant,
  formatSeal,
  formatWeekday,
  Section,
  useZone,
  zoneName,
} from "../ui/index.ts";

const shapeWords: Record<TrailEntry["shape"], string> = {
  person: "by a person",
  wavekeep: "by Wavekeep",
  signature: "a signature",
  amendment: "an amendment",
  "out-of-tolerance": "out of tolerance",
};

/** The shape of an entry, 12 x 12, as it sits on the thread. */
export function EntryShape({ shape }: { shape: TrailEntry["shape"] }) {
  return (
    <svg width={12} height={12} viewBox="0 0 12 12" className="flex-none" role="img" aria-label={shapeWords[shape]}>
      {shape === "person" && <circle cx={6} cy={6} r={2} fill="var(--ink)" />}
      {shape === "wavekeep" && <path d="M1.5 6h9" stroke="var(--ink)" strokeWidth={1.5} />}
      {shape === "signature" && (
        <>
          <circle cx={6} cy={6} r={4} fill="var(--ground)" stroke="var(--ink)" strokeWidth={1.25} />
          <circle cx={6} cy={6} r={1.5} fill="var(--ink)" />
        </>
      )}
      {shape === "amendment" && (
        <path d="M6 1.5 10.5 6 6 10.5 1.5 6z" fill="var(--ground)" stroke="var(--ink)" strokeWidth={1.25} />
      )}
      {shape === "out-of-tolerance" && <rect x={1.5} y={1.5} width={9} height={9} fill="var(--out)" />}
    </svg>
  );
}

/** The shapes with their words. */
export function ShapeLegend() {
  return (
    <ul className="type-note flex flex-wrap gap-x-7 gap-y-1">
      {(Object.keys(shapeWords) as TrailEntry["shape"][]).map((shape) => (
        <li key={shape} className="flex items-center gap-2">
          <span aria-hidden="true" className="flex">
            <EntryShape shape={shape} />
          </span>
          {shapeWords[shape]}
        </li>
      ))}
    </ul>
  );
}

/** Entries grouped by their day in the lab's zone, in the order they come. */
export function daysOf(entries: readonly TrailEntry[], zone: string): { on: string; entries: TrailEntry[] }[] {
  const days: { on: string; entries: TrailEntry[] }[] = [];
  for (const entry of entries) {
    const on = dayOf(entry.at, zone);
    const last = days.at(-1);
    if (last?.on === on) last.entries.push(entry);
    else days.push({ on, entries: [entry] });
  }
  return days;
}

export function TrailDays({ entries }: { entries: readonly TrailEntry[] }) {
  const zone = useZone();
  return (
    <>
      {daysOf(entries, zone).map((day, index) => {
        const { weekday, day: date } = formatWeekday(day.on);
        return (
          <Section
            key={day.on}
            className="!mt-0"
            title={
              <>
                <span className="book:block">{weekday}</span>{" "}
                <span className="font-normal text-quiet book:block">{date}</span>
              </>
            }
          >
            <div className="before:bg-ink relative -mt-3 pt-3 before:absolute before:top-0 before:bottom-0 before:left-[5.5px] before:w-px">
              {index === 0 && (
                <div
                  aria-hidden="true"
                  className="type-label hidden grid-cols-[74px_minmax(0,1fr)_120px_80px] gap-x-4 pb-1 book:grid"
                >
                  <span className="text-right">Time, {zoneName(day.entries[0]?.at ?? new Date(), zone)}</span>
                  <span>Entry</span>
                  <span>About</span>
                  <span className="text-right">Seal</span>
                </div>
              )}
              <ol className="pb-8">
                {day.entries.map((entry) => (
                  <Entry key={entry.number} entry={entry} />
                ))}
              </ol>
            </div>
          </Section>
        );
      })}
    </>
  );
}

function Entry({ entry }: { entry: TrailEntry }) {
  const zone = useZone();
  const [isOpen, setOpen] = useState(false);
  const id = `entry-${entry.number}`;
  return (
    <li className="relative pl-6 book:pl-0">
      <span className="absolute top-[10px] left-0 bg-transparent">
        <EntryShape shape={entry.shape} />
      </span>
      <div className="grid gap-x-4 py-[7px] book:grid-cols-[74px_minmax(0,1fr)_120px_80px]">
        <time dateTime={entry.at} title={formatInstant(entry.at, zone, true)} className="text-quiet book:text-right">
          {formatClock(entry.at, zone)}
        </time>
        <button
          type="button"
          aria-expanded={isOpen}
          aria-controls={id}
          className="max-w-[640px] self-start text-left hover:underline hover:decoration-(--graph) hover:underline-offset-3"
          onClick={() => setOpen(!isOpen)}
        >
          <b>{entry.actor}</b> {entry.sentence}
        </button>
        <span className="type-note min-w-0 -mt-[2px]">
          {entry.about !== null &&
            (entry.about.to === null ? (
              <span title={entry.about.label} className="line-clamp-2 min-h-6 pt-1 wrap-anywhere">
                {entry.about.label}
              </span>
            ) : (
              <Link
                to={entry.about.to}
                title={entry.about.label}
                className="text-accent line-clamp-2 min-h-6 w-fit pt-1 wrap-anywhere hover:underline"
              >
                {entry.about.label}
              </Link>
            ))}
        </span>
        <span
          className="type-note hidden pt-[2px] text-right book:block"
          title={`Entry ${entry.number}, SHA-256 ${entry.hash}`}
        >
          {formatSeal(entry.hash)}
        </span>
      </div>
      <div id={id} hidden={!isOpen} className="pb-3 book:pl-[90px]">
        {isOpen && <EntryDetail entry={entry} />}
      </div>
    </li>
  );
}

/** What stood before and after, as it is sealed. */
function EntryDetail({ entry }: { entry: TrailEntry }) {
  const parts = [
    ["Before", entry.before],
    ["After", entry.after],
  ] as const;
  return (
    <div className="border-hairline border-l pl-4">
      {entry.why !== null && <p className="mb-2 max-w-[720px]">Reason: {entry.why}</p>}
      <div className="grid gap-x-6 gap-y-3 wide:grid-cols-2">
        {parts.map(
          ([label, value]) =>
            value !== null && (
              <div key={label} className="min-w-0">
                <h3 className="type-label">{label}</h3>
                <pre className="type-note text-ink break-words whitespace-pre-wrap font-sans">
                  {JSON.stringify(value, null, 2)}
                </pre>
              </div>
            ),
        )}
      </div>
      <p className="type-note mt-2 break-all">
        Entry {entry.number}, {entry.action}
        {entry.actorRole !== null && `, as ${entry.actorRole}`}
        {entry.demo && ", in a demo lab"}. Seal {formatHash(entry.hash)}, after {formatHash(entry.previousHash)}.
      </p>
    </div>
  );
}
