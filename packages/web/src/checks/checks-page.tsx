/** All checks, newest first, with filters in the address. */
import { checkState, verdict as verdictShape } from "@wavekeep/api/contract";
import { useDeferredValue, useEffect, useState } from "react";
import { Asked, Older } from "../shared/asked.tsx";
import { ChecksTable } from "../shared/checks-table.tsx";
import { Filters, FilterSelect } from "../shared/filter-select.tsx";
import { useUrlFilter } from "../shared/use-url-filter.ts";
import { checkStateWords, sentenceCase } from "../shared/words.ts";
import { Empty, Field, LinkButton, Page, Section, statusWord, TextButton, useMay, verdictState } from "../ui/index.ts";
import { useChecks, useFleet, usePeople, type ChecksFilter } from "./queries.ts";

const names = ["instrument", "state", "verdict", "person", "q"] as const;

export function ChecksPage() {
  const may = useMay();
  const [filter, setFilter, clear] = useUrlFilter(names);
  const [typed, setTyped] = useState(filter.q ?? "");
  const wanted = useDeferredValue(typed);
  useEffect(() => {
    if ((filter.q ?? "") === wanted) return;
    const wait = setTimeout(() => setFilter("q", wanted), 250);
    return () => clearTimeout(wait);
  }, [wanted, filter.q, setFilter]);
  // An address is typed by people too: what is not a state is no filter.
  const asked: ChecksFilter = {
    instrumentId: filter.instrument,
    state: checkState.safeParse(filter.state).data,
    verdict: verdictShape.safeParse(filter.verdict).data,
    personId: filter.person,
    q: filter.q,
  };
  const checks = useChecks(asked);
  const fleet = useFleet();
  const people = usePeople();
  const rows = checks.data?.pages.flatMap((page) => page.items) ?? [];
  const isFiltered = names.some((name) => filter[name] !== undefined);
  const start = may("check.begin") && (
    <LinkButton to="/checks/new" filled>
      Start a check
    </LinkButton>
  );
  return (
    <Page title="Checks" aside="Newest first" actions={start}>
      <Section
        title="All checks"
        note="Each stays listed, with its attempts, whatever became of it."
        switches={
          <Filters>
            <FilterSelect
              label="Instrument"
              every="Every instrument"
              value={filter.instrument}
              onChange={(value) => setFilter("instrument", value)}
              choices={(fleet.data?.items ?? []).map((row) => ({ value: row.id, label: row.name }))}
            />
            <FilterSelect
              label="State"
              every="Every state"
              value={filter.state}
              onChange={(value) => setFilter("state", value)}
              choices={checkState.options.map((state) => ({
                value: state,
                label: sentenceCase(checkStateWords[state]),
              }))}
            />
            <FilterSelect
              label="Verdict"
              every="Every verdict"
              value={filter.verdict}
              onChange={(value) => setFilter("verdict", value)}
              choices={verdictShape.options.map((verdict) => ({
                value: verdict,
                label: sentenceCase(statusWord(verdictState(verdict))),
              }))}
            />
            <FilterSelect
              label="Made by"
              every="Everyone"
              value={filter.person}
              onChange={(value) => setFilter("person", value)}
              choices={(people.data?.people ?? []).map((person) => ({ value: person.id, label: person.name }))}
            />
          </Filters>
        }
      >
        <Field
          label="Find by number or instrument"
          labelHidden
          placeholder="Number or instrument"
          className="mb-4 max-w-[320px]"
          type="search"
          value={typed}
          onChange={(event) => setTyped(event.target.value)}
        />
        <Asked query={checks} rows={12}>
          {() =>
            rows.length > 0 ? (
              <>
                <ChecksTable checks={rows} caption="Checks, newest first" />
                <Older query={checks} />
              </>
            ) : isFiltered ? (
              <Empty
                text="No check fits these filters."
                action={
                  <TextButton
                    onClick={() => {
                      setTyped("");
                      clear();
                    }}
                  >
                    Show all
                  </TextButton>
                }
              />
            ) : (
              <Empty
                text="Each check of an instrument against a lamp stands here, from its first capture to its approval."
                action={start}
              />
            )
          }
        </Asked>
      </Section>
    </Page>
  );
}
