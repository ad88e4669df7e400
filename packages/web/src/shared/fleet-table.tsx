/** The fleet: a row an instrument, showing its worst configuration, most of its tolerance used first. */
import type { FleetRow } from "@wavekeep/api/contract";
import { Link } from "react-router";
import { LineStrip, ToleranceUsed } from "../drawings/index.ts";
import {
  Decimal,
  Due,
  formatNumber,
  formatShortDate,
  NARROW_SPACE,
  Status,
  Table,
  uncertaintyDecimals,
  When,
  type Column,
} from "../ui/index.ts";
import { kindNotes, speciesWord } from "./words.ts";

/** `array, 340–1030 nm`; a Raman bench is known by its laser; with several configurations, the one shown goes first. */
export function kindNote(
  row: Pick<FleetRow, "kind" | "laserNm" | "rangeFirstNm" | "rangeLastNm" | "configurationName">,
): string {
  const span =
    row.kind === "raman" && row.laserNm !== null
      ? formatNumber(row.laserNm, { decimals: Number.isInteger(row.laserNm) ? 0 : 1 })
      : `${formatNumber(row.rangeFirstNm)}–${formatNumber(row.rangeLastNm)}`;
  const name = row.configurationName === null ? "" : `${row.configurationName}, `;
  return `${name}${kindNotes[row.kind]}, ${span}${NARROW_SPACE}nm`;
}

/** Most used first; what was never judged and what is retired last, by name. */
export function byToleranceUsed(a: FleetRow, b: FleetRow): number {
  if ((a.retiredAt === null) !== (b.retiredAt === null)) return a.retiredAt === null ? -1 : 1;
  return (b.toleranceUsed ?? -1) - (a.toleranceUsed ?? -1) || (a.name < b.name ? -1 : 1);
}

/** What is due, in words: an as-left check that was asked for goes before any date, and so does a review that is awaited. */
function DueCell({ row, todayOn }: { row: FleetRow; todayOn: string }) {
  if (row.retiredAt !== null) return <span className="text-quiet">retired</span>;
  if (row.asLeftAsked) return <>as-left check</>;
  if (row.awaitsReview) return <>awaits review</>;
  if (row.dueOn === null || row.dueDays === null) return <span className="text-quiet">no date</span>;
  if (row.dueDays > 10) return <>{formatShortDate(row.dueOn, todayOn)}</>;
  return <Due on={row.dueOn} days={row.dueDays} />;
}

const stateWord = (row: FleetRow) =>
  row.state === "restricted" && row.restriction !== null ? `restricted to ${row.restriction}` : undefined;

function Used({ row }: { row: FleetRow }) {
  if (row.toleranceUsed === null)
    return <span className="text-quiet">{row.checkedAt === null ? "none yet" : "no line judged"}</span>;
  // A hold is not a measure: the meter is coloured by how much is used.
  const state = row.toleranceUsed > 1 ? "out-of-tolerance" : row.state;
  return <ToleranceUsed used={row.toleranceUsed} guardShare={row.guardShare} state={state} />;
}

const Strip = ({ row, width }: { row: FleetRow; width?: number }) => (
  <LineStrip lines={row.strip} fromNm={row.rangeFirstNm} toNm={row.rangeLastNm} size="mini" width={width} />
);

interface FleetTableProps {
  rows: readonly FleetRow[];
  /** Today in the lab's zone, `yyyy-mm-dd`. */
  todayOn: string;
}

export function FleetTable({ rows, todayOn }: FleetTableProps) {
  const errorDecimals = Math.max(2, ...rows.map((row) => uncertaintyDecimals(row.worst?.expandedUncNm) ?? 2));
  const columns: Column<FleetRow>[] = [
    {
      key: "name",
      head: "Instrument",
      className: "@min-[980px]:whitespace-nowrap",
      cell: (row) => (
        <>
          <Link to={`/instruments/${row.id}`} className="strong hover:underline">
            {row.name}
          </Link>{" "}
          <span className="type-note">{kindNote(row)}</span>
        </>
      ),
    },
    { key: "state", head: "State", cell: (row) => <Status state={row.state} word={stateWord(row)} /> },
    { key: "used", head: "Tolerance used", className: "whitespace-nowrap", cell: (row) => <Used row={row} /> },
    {
      key: "strip",
      head: "Errors over the range",
      className: "hidden @min-[700px]:table-cell",
      cell: (row) => (
        <div className="-my-1">
          <Strip row={row} />
        </div>
      ),
    },
    {
      key: "worst",
      head: "Worst line",
      className: "hidden whitespace-nowrap @min-[980px]:table-cell",
      cell: (row) =>
        row.worst !== null &&
        `${speciesWord(row.worst.species)} ${formatNumber(row.worst.wavelengthNm, { decimals: 3 })}`,
    },
    {
      key: "error",
      head: "Error",
      numbers: true,
      className: "hidden @min-[980px]:table-cell",
      cell: (row) =>
        row.worst !== null && (
          <Decimal
            value={row.worst.errorNm}
            signed
            decimals={uncertaintyDecimals(row.worst.expandedUncNm) ?? 3}
            columnDecimals={errorDecimals}
            unit="nm"
          />
        ),
    },
    {
      key: "checked",
      head: "Checked",
      className: "hidden whitespace-nowrap @min-[860px]:table-cell",
      cell: (row) => (row.checkedAt === null ? "–" : <When at={row.checkedAt} as="short" />),
    },
    { key: "due", head: "Due", className: "whitespace-nowrap", cell: (row) => <DueCell row={row} todayOn={todayOn} /> },
  ];
  return (
    <div className="@container">
      <Table
        caption="Instruments by tolerance used"
        columns={columns}
        rows={[...rows].sort(byToleranceUsed)}
        rowKey={(row) => row.id}
        narrow={(row) => (
          <Link to={`/instruments/${row.id}`} className="block py-1">
            <span className="flex items-baseline justify-between gap-3">
              <span className="min-w-0">
                <span className="strong">{row.name}</span> <span className="type-note">{kindNote(row)}</span>
              </span>
              <Status state={row.state} word={stateWord(row)} className="flex-none" />
            </span>
            <span className="mt-1 flex items-center justify-between gap-2">
              <Used row={row} />
              <span className="hidden min-[340px]:block">
                <Strip row={row} width={116} />
              </span>
              <span className="type-note text-ink min-w-[72px] text-right">
                <DueCell row={row} todayOn={todayOn} />
              </span>
            </span>
          </Link>
        )}
      />
    </div>
  );
}
