/** Records: whether the chain holds, the ruler of the trail, and the book itself, a day a section. */
import { date } from "@wavekeep/api/contract";
import { TrailRuler } from "../drawings/index.ts";
import { Asked, Older } from "../shared/asked.tsx";
import { Filters, FilterSelect } from "../shared/filter-select.tsx";
import { NotForYou } from "../shared/not-for-you.tsx";
import { ShapeLegend, TrailDays } from "../shared/trail-days.tsx";
import { useUrlFilter } from "../shared/use-url-filter.ts";
import { sentenceCase } from "../shared/words.ts";
import {
  Button,
  dayOf,
  Empty,
  Fact,
  Facts,
  formatCount,
  formatDate,
  formatHash,
  formatShortDay,
  Page,
  ProblemNote,
  Section,
  TextButton,
  useMay,
  useMe,
  When,
} from "../ui/index.ts";
import { useChain, useFleet, usePeople, useTrail, useTrailDays } from "./queries.ts";

const filters = ["person", "instrument", "check", "kind", "from", "to"] as const;

/** `tolerance.amended` as a choice: `Tolerance amended`. */
const kindWords = (kind: string) => sentenceCase(kind.replace(".", " ").replaceAll("-", " "));

/** Spans of time to choose from, days back from today; any other is drawn on the ruler. */
const spanDays = [7, 30, 90, 365] as const;
const daysBack = (todayOn: string, days: number) =>
  new Date(Date.parse(`${todayOn}T12:00:00Z`) - (days - 1) * 86_400_000).toISOString().slice(0, 10);
/** `from/to` of a choice as filters; null is all of the time. */
function spanDates(choice: string | null, todayOn: string): { from: string | null; to: string | null } {
  const days = Number(choice);
  return { from: choice === null ? null : daysBack(todayOn, days), to: null };
}

export function RecordsPage() {
  const may = useMay();
  if (!may("records.read")) return <NotForYou title="Records" who="a lab’s staff and auditors" />;
  return <Records />;
}

function Records() {
  const me = useMe();
  const [filter, setFilter, clear, setFilters] = useUrlFilter(filters);
  const day = (value: string | undefined) => date.safeParse(value).data;
  const fromOn = day(filter.from);
  const toOn = day(filter.to);
  const trail = useTrail({
    personId: filter.person,
    instrumentId: filter.instrument,
    checkId: filter.check,
    kind: filter.kind,
    fromOn,
    toOn,
  });
  const days = useTrailDays();
  const chain = useChain();
  const people = usePeople();
  const fleet = useFleet();
  const entries = trail.data?.pages.flatMap((page) => page.items) ?? [];
  const isFiltered = filters.some((name) => filter[name] !== undefined);
  const todayOn = dayOf(new Date(), me.lab.zone);
  const matching = toOn === undefined ? spanDays.find((days) => daysBack(todayOn, days) === fromOn) : undefined;
  const span =
    fromOn === undefined && toOn === undefined ? undefined : matching === undefined ? "drawn" : String(matching);
  const spans = [
    ...(span === "drawn"
      ? [
          {
            value: "drawn",
            label: `${fromOn === undefined ? "first entry" : formatDate(fromOn)} to ${toOn === undefined || toOn === todayOn ? "today" : formatDate(toOn)}`,
          },
        ]
      : []),
    ...spanDays.map((days) => ({ value: String(days), label: days === 365 ? "Last year" : `Last ${days} days` })),
  ];
  const readsOnly = me.roles.length === 1 && me.roles[0] === "auditor";
  const shownCount = trail.hasNextPage ? `${formatCount(entries.length)} newest` : formatCount(entries.length);
  return (
    <Page
      name="Records"
      title={
        chain.data?.sentence ?? (
          <span className="text-quiet">
            {chain.error === null ? "Checking the chain…" : "The chain could not be checked."}
          </span>
        )
      }
      state={chain.data !== undefined && !chain.data.whole ? "out-of-tolerance" : undefined}
      aside={
        <>
          <span className="book:block">Records</span> {readsOnly && <span className="book:block">reading only</span>}
        </>
      }
      actions={
        <Button busy={chain.isFetching} onClick={() => void chain.refetch()}>
          Check the chain now
        </Button>
      }
    >
      <div className="book">
        <div className="book-margin hidden book:block" />
        <div className="book-body">
          {chain.error !== null && <ProblemNote error={chain.error} className="mt-4" />}
          {chain.data !== undefined && <ChainFacts chain={chain.data} />}
        </div>
      </div>
      <Section
        title="Through time"
        switches={
          <Filters>
            <FilterSelect
              label="Person"
              every="Everyone"
              value={filter.person}
              onChange={(value) => setFilter("person", value)}
              choices={(people.data?.people ?? []).map((person) => ({ value: person.id, label: person.name }))}
            />
            <FilterSelect
              label="Instrument"
              every="Every instrument"
              value={filter.instrument}
              onChange={(value) => setFilter("instrument", value)}
              choices={(fleet.data?.items ?? []).map((row) => ({ value: row.id, label: row.name }))}
            />
            <FilterSelect
              label="Kind of entry"
              every="All kinds of entry"
              value={filter.kind}
              onChange={(value) => setFilter("kind", value)}
              choices={(days.data?.kinds ?? []).map((kind) => ({ value: kind, label: kindWords(kind) }))}
            />
            <FilterSelect
              label="Span of time"
              every="All of the time"
              value={span}
              onChange={(value) => setFilters(spanDates(value, todayOn))}
              choices={spans}
            />
            {isFiltered && (
              <TextButton className="type-note !text-accent" onClick={clear}>
                Show all
              </TextButton>
            )}
          </Filters>
        }
      >
        <Asked query={days} rows={2}>
          {(reply) => (
            <TrailRuler
              days={reply.days}
              fromOn={fromOn ?? null}
              toOn={toOn ?? null}
              todayOn={todayOn}
              onSpan={(from, to) => setFilters({ from, to })}
            />
          )}
        </Asked>
        <div className="mt-3 flex flex-wrap items-baseline justify-between gap-x-8 gap-y-2">
          <ShapeLegend />
          {trail.data !== undefined && (
            <p className="type-note">
              {shownCount}
              {chain.data !== undefined && ` of ${formatCount(chain.data.entryCount)}`} entries
              {filter.check !== undefined && ", of one check"}
            </p>
          )}
        </div>
      </Section>
      <div className="mt-6">
        {trail.data === undefined || entries.length === 0 ? (
          <Section title="Entries" className="!mt-0">
            <Asked query={trail} rows={10}>
              {() => (
                <Empty
                  text={
                    isFiltered
                      ? "No entry fits these filters."
                      : "Everything that is done in the lab is written here, entry after entry."
                  }
                  action={isFiltered && <TextButton onClick={clear}>Show all</TextButton>}
                />
              )}
            </Asked>
          </Section>
        ) : (
          <>
            {trail.error !== null && <ProblemNote error={trail.error} className="mb-4" />}
            <TrailDays entries={entries} />
            <div className="book">
              <div className="book-margin hidden book:block" />
              <div className="book-body">
                <Older query={trail} />
              </div>
            </div>
          </>
        )}
      </div>
    </Page>
  );
}

function ChainFacts({ chain }: { chain: NonNullable<ReturnType<typeof useChain>["data"]> }) {
  const { lab } = useMe();
  return (
    <>
      <Facts>
        <Fact label="Checked">
          <When at={chain.checkedAt} />
        </Fact>
        <Fact label="First and last entry">
          {chain.firstAt === null || chain.lastAt === null ? (
            "none"
          ) : (
            <>
              {formatShortDay(chain.firstAt, lab.zone)}; <When at={chain.lastAt} />
            </>
          )}
        </Fact>
        <Fact label="Signatures">
          {formatCount(chain.signatureCount)},{" "}
          {chain.signaturesValid ? "all valid" : <b className="text-out">not all valid</b>}
        </Fact>
        <Fact label="Attempts">
          {formatCount(chain.attemptCount)} in {formatCount(chain.checkCount)} checks
        </Fact>
        <Fact label="Head of the chain">
          <span title={`${chain.head}; signed with key ${chain.keyFingerprint}`}>{formatHash(chain.head)}</span>
          {chain.headSignedAt !== null && (
            <span className="type-note">
              {" "}
              signed <When at={chain.headSignedAt} as="short" />
            </span>
          )}
        </Fact>
      </Facts>
      {chain.breaks.length > 0 && (
        <ul className="caution mt-4">
          {chain.breaks.map((item) => (
            <li key={`${item.number} ${item.what}`}>
              <b>Entry {formatCount(item.number)}</b>: {item.what}
            </li>
          ))}
        </ul>
      )}
    </>
  );
}
