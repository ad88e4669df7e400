/** The drift of one configuration: ribbon, the events that moved it, every point as numbers. */
import type { Configuration, DriftReply, Instrument } from "@wavekeep/api/contract";
import { Link } from "react-router";
import { conditionWords, eventKindWords } from "../shared/words.ts";
import {
  Button,
  Decimal,
  Empty,
  formatDate,
  formatQuantity,
  Section,
  Status,
  Table,
  uncertaintyDecimals,
  useMay,
  verdictState,
  When,
} from "../ui/index.ts";
import { DriftSection } from "./drift-section.tsx";
import { useDrift } from "./queries.ts";

type Point = DriftReply["points"][number];

interface DriftTabProps {
  instrument: Instrument;
  configuration: Configuration;
  show: (what: string) => void;
}

export function DriftTab({ instrument, configuration, show }: DriftTabProps) {
  const drift = useDrift(configuration.id);
  const may = useMay();
  const points = [...(drift.data?.points ?? [])].reverse();
  const events = [...(drift.data?.events ?? [])].reverse();
  return (
    <>
      <DriftSection instrument={instrument} configuration={configuration} plain />
      <Section
        title="Events"
        note="A move, a new lamp, an adjustment: what may have moved the axis. One that breaks the series is never drawn through."
      >
        {events.length === 0 ? (
          <Empty
            text="Nothing was logged for it yet."
            action={
              configuration.toOn === null &&
              may("event.log", { instrumentId: instrument.id }) && (
                <Button onClick={() => show("event")}>Log an event</Button>
              )
            }
          />
        ) : (
          <Table
            caption={`Events of ${instrument.name}`}
            rows={events}
            rowKey={(event) => event.id}
            columns={[
              {
                key: "on",
                head: "Date",
                className: "whitespace-nowrap",
                cell: (event) => formatDate(event.happenedOn),
              },
              { key: "title", head: "Event", cell: (event) => <b>{event.title}</b> },
              { key: "kind", head: "Kind", cell: (event) => eventKindWords[event.kind] },
              {
                key: "step",
                head: "Step at mid-range",
                cell: (event) =>
                  event.stepNm === null
                    ? "–"
                    : formatQuantity(event.stepNm, undefined, "nm", { signed: true, decimals: 3 }),
              },
              { key: "breaks", head: "Series", cell: (event) => (event.breaksDrift ? "begins anew" : "goes on") },
              { key: "by", head: "Logged by", cell: (event) => event.recordedBy.name },
            ]}
            rowNote={(event) => (event.note === "" ? null : event.note)}
            narrow={(event) => (
              <div className="py-1">
                <p>
                  <b>{event.title}</b> <span className="type-note">{formatDate(event.happenedOn)}</span>
                </p>
                <p className="type-note">
                  {eventKindWords[event.kind]}, {event.breaksDrift ? "series begins anew" : "series goes on"}
                  {event.stepNm !== null &&
                    `, ${formatQuantity(event.stepNm, undefined, "nm", { signed: true, decimals: 3 })}`}
                  {event.note !== "" && `. ${event.note}`}
                </p>
              </div>
            )}
          />
        )}
      </Section>
      {points.length > 0 && (
        <Section title="Points" note="nm, newest first; U for 95.45 %.">
          <PointsTable points={points} />
        </Section>
      )}
    </>
  );
}

function PointsTable({ points }: { points: readonly Point[] }) {
  const decimals = Math.max(2, ...points.map((point) => uncertaintyDecimals(point.largestExpandedUncNm) ?? 2));
  const pair = (value: number, unc: number) => (
    <>
      <Decimal value={value} signed decimals={uncertaintyDecimals(unc) ?? 3} columnDecimals={decimals} />
      <span className="text-quiet"> ± </span>
      <Decimal value={unc} decimals={uncertaintyDecimals(unc) ?? 3} columnDecimals={decimals} />
    </>
  );
  return (
    <div className="@container">
      <Table
        caption="Points of the drift series"
        compact
        rows={points}
        rowKey={(point) => point.checkId}
        columns={[
          {
            key: "number",
            head: "Check",
            className: "whitespace-nowrap",
            cell: (point) => (
              <Link to={`/checks/${point.checkId}`} className="hover:underline">
                {point.checkNumber}
              </Link>
            ),
          },
          { key: "at", head: "Date", className: "whitespace-nowrap", cell: (point) => <When at={point.at} as="day" /> },
          {
            key: "condition",
            head: "Condition",
            className: "hidden @min-[880px]:table-cell",
            cell: (point) => conditionWords[point.condition],
          },
          {
            key: "largest",
            head: "Largest",
            numbers: true,
            cell: (point) => pair(point.largestErrorNm, point.largestExpandedUncNm),
          },
          {
            key: "mid",
            head: "At mid-range",
            numbers: true,
            className: "hidden @min-[640px]:table-cell",
            cell: (point) => pair(point.midErrorNm, point.midExpandedUncNm),
          },
          {
            key: "scale",
            head: "Scale error",
            numbers: true,
            className: "hidden @min-[760px]:table-cell",
            cell: (point) => pair(point.scaleErrorNm, point.scaleExpandedUncNm),
          },
          {
            key: "verdict",
            head: "Verdict",
            className: "whitespace-nowrap",
            cell: (point) => <Status state={verdictState(point.verdict)} />,
          },
        ]}
        narrow={(point) => (
          <Link to={`/checks/${point.checkId}`} className="flex items-baseline justify-between gap-3 py-1">
            <span>
              {point.checkNumber}{" "}
              <span className="type-note">
                <When at={point.at} as="day" />
              </span>
            </span>
            <span className="whitespace-nowrap">
              {formatQuantity(point.largestErrorNm, point.largestExpandedUncNm, "nm", { signed: true })}
            </span>
          </Link>
        )}
      />
    </div>
  );
}
