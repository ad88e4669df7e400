/** The fleet with its filters, kept in the address. */
import type { FleetRow, InstrumentKind } from "@wavekeep/api/contract";
import { Asked } from "../shared/asked.tsx";
import { Filters, FilterSelect } from "../shared/filter-select.tsx";
import { FleetTable } from "../shared/fleet-table.tsx";
import { useUrlFilter } from "../shared/use-url-filter.ts";
import { countWord, kindWords, sentenceCase } from "../shared/words.ts";
import { dayOf, Empty, LinkButton, Page, Section, statusWord, TextButton, useMay, useMe } from "../ui/index.ts";
import { useFleet } from "./queries.ts";

const filters = ["kind", "state", "owner", "due", "retired"] as const;

/** A check that waits for its review was made: its date says nothing until that is decided. */
const isOverdue = (row: FleetRow): boolean => !row.awaitsReview && (row.dueDays ?? 0) < 0;

/** `Nine instruments: one on hold, one near its limit, one overdue.` */
export function fleetSentence(rows: readonly FleetRow[]): string {
  const inUse = rows.filter((row) => row.retiredAt === null);
  if (inUse.length === 0) return "No instrument is registered yet.";
  const count = (test: (row: FleetRow) => boolean) => inUse.filter(test).length;
  const parts = (
    [
      [count((row) => row.state === "out-of-tolerance"), "out of tolerance"],
      [count((row) => row.state === "on-hold"), "on hold"],
      [count((row) => row.state === "out-of-service" || row.state === "quarantined"), "out of service"],
      [count((row) => row.state === "inconclusive"), "inconclusive"],
      [count((row) => row.state === "near-limit"), "near the limit"],
      [count(isOverdue), "overdue"],
    ] as const
  ).filter(([number]) => number > 0);
  const head = `${sentenceCase(countWord(inUse.length))} ${inUse.length === 1 ? "instrument" : "instruments"}`;
  if (parts.length === 0) return `${head}, all in tolerance and in time.`;
  return `${head}: ${parts.map(([number, word]) => `${countWord(number)} ${word}`).join(", ")}.`;
}

export function InstrumentsPage() {
  const fleet = useFleet();
  const me = useMe();
  const may = useMay();
  const [filter, setFilter, clear] = useUrlFilter(filters);
  const rows = fleet.data?.items ?? [];
  const shown = rows.filter(
    (row) =>
      (filter.kind === undefined || row.kind === filter.kind) &&
      (filter.state === undefined || row.state === filter.state) &&
      (filter.owner === undefined || row.owner.id === filter.owner) &&
      (filter.due !== "overdue" || isOverdue(row)) &&
      (filter.retired === "shown" || row.retiredAt === null),
  );
  const owners = new Map(rows.map((row) => [row.owner.id, row.owner.name]));
  const states = [...new Set(rows.map((row) => row.state))];
  const isFiltered = filters.some((name) => filter[name] !== undefined);
  const register = may("instrument.change") && (
    <LinkButton to="/instruments/new" filled>
      Register an instrument
    </LinkButton>
  );
  return (
    <Page
      name="Instruments"
      title={fleet.data === undefined ? "Instruments" : fleetSentence(rows)}
      aside="Instruments"
      actions={rows.length > 0 ? register : undefined}
    >
      <Section
        title="Fleet"
        note="By tolerance used at the last check, each at its worst line."
        switches={
          <Filters>
            <FilterSelect
              label="Kind"
              every="Every kind"
              value={filter.kind}
              onChange={(value) => setFilter("kind", value)}
              choices={(Object.keys(kindWords) as InstrumentKind[]).map((kind) => ({
                value: kind,
                label: kindWords[kind],
              }))}
            />
            <FilterSelect
              label="State"
              every="Every state"
              value={filter.state}
              onChange={(value) => setFilter("state", value)}
              choices={states.map((state) => ({ value: state, label: statusWord(state) }))}
            />
            <FilterSelect
              label="Owner"
              every="Every owner"
              value={filter.owner}
              onChange={(value) => setFilter("owner", value)}
              choices={[...owners].map(([id, name]) => ({ value: id, label: name }))}
            />
            <FilterSelect
              label="Due"
              every="Any due date"
              value={filter.due}
              onChange={(value) => setFilter("due", value)}
              choices={[{ value: "overdue", label: "Overdue" }]}
            />
            <FilterSelect
              label="Retired instruments"
              every="Without retired"
              value={filter.retired}
              onChange={(value) => setFilter("retired", value)}
              choices={[{ value: "shown", label: "With retired" }]}
            />
          </Filters>
        }
      >
        <Asked query={fleet} rows={9}>
          {() =>
            shown.length > 0 ? (
              <FleetTable rows={shown} todayOn={dayOf(new Date(), me.lab.zone)} />
            ) : isFiltered ? (
              <Empty
                text="No instrument fits these filters."
                action={<TextButton onClick={clear}>Show all</TextButton>}
              />
            ) : (
              <Empty
                text="Each spectrometer of the lab stands here with its tolerance, its last errors and its next due date. Register the first one; its checks can begin at once."
                action={register}
              />
            )
          }
        </Asked>
      </Section>
    </Page>
  );
}
