/** History of one instrument: its entries of the trail. */
import type { Instrument } from "@wavekeep/api/contract";
import { Asked, Older } from "../shared/asked.tsx";
import { TrailDays } from "../shared/trail-days.tsx";
import { Empty, Section, TextLink } from "../ui/index.ts";
import { useInstrumentTrail } from "./queries.ts";

export function HistoryTab({ instrument }: { instrument: Instrument }) {
  const trail = useInstrumentTrail(instrument.id);
  const entries = trail.data?.pages.flatMap((page) => page.items) ?? [];
  return (
    <>
      <Section
        plain
        title="History"
        note="Each entry is sealed into the chain of the lab."
        links={<TextLink to={`/records?instrument=${instrument.id}`}>In Records</TextLink>}
      >
        <Asked query={trail} rows={8}>
          {() =>
            entries.length === 0 ? (
              <Empty text="Nothing is on record about it yet." />
            ) : (
              <p className="type-note">Newest first; press an entry to see what stood before and after.</p>
            )
          }
        </Asked>
      </Section>
      {entries.length > 0 && (
        <div className="mt-6">
          <TrailDays entries={entries} />
          <div className="book">
            <div className="book-margin" />
            <div className="book-body">
              <Older query={trail} />
            </div>
          </div>
        </div>
      )}
    </>
  );
}
