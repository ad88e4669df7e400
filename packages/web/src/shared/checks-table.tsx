/** Checks as rows: in the list of all, and on an instrument's page (then without the instrument's name). */
import type { CheckSummary } from "@wavekeep/api/contract";
import { Link } from "react-router";
import { ToleranceUsed } from "../drawings/index.ts";
import {
  Decimal,
  formatPercent,
  formatQuantity,
  resultState,
  Status,
  Table,
  uncertaintyDecimals,
  When,
  type Column,
} from "../ui/index.ts";
import { checkStateWords, conditionWords, configurationPath, shortName } from "./words.ts";

/** Where a check is opened: a draft where it is made, everything else where it is read. */
export const checkPath = (check: Pick<CheckSummary, "id" | "state">): string =>
  check.state === "begun" || check.state === "returned" ? `/checks/${check.id}/edit` : `/checks/${check.id}`;

const dateOf = (check: CheckSummary) => check.submittedAt ?? check.begunAt;

/** How far a check has come: its approval's date, else the word of its state. */
function Progress({ check }: { check: CheckSummary }) {
  if (check.state === "approved" && check.approvedAt !== null) return <When at={check.approvedAt} as="short" />;
  return <>{check.state === "submitted" ? "awaits" : checkStateWords[check.state]}</>;
}

function Verdict({ check }: { check: CheckSummary }) {
  if (check.result === null) return <span className="text-quiet">no result yet</span>;
  return <Status state={resultState(check.result)} />;
}

const Used = ({ check }: { check: CheckSummary }) =>
  check.result !== null && check.result.toleranceUsed !== null ? (
    <ToleranceUsed
      used={check.result.toleranceUsed}
      guardShare={check.result.guardShare}
      state={resultState(check.result)}
    />
  ) : null;

interface ChecksTableProps {
  checks: readonly CheckSummary[];
  caption: string;
  /** One instrument's checks: its name is not repeated. */
  ofInstrument?: boolean;
  /** With `ofInstrument`: which of its configurations each was made on. */
  withConfiguration?: boolean;
  compact?: boolean;
}

export function ChecksTable({
  checks,
  caption,
  ofInstrument = false,
  withConfiguration = false,
  compact = false,
}: ChecksTableProps) {
  const decimals = Math.max(2, ...checks.map((check) => uncertaintyDecimals(check.result?.worst?.expandedUncNm) ?? 0));
  const columns: Column<CheckSummary>[] = [
    {
      key: "number",
      head: "Check",
      className: "whitespace-nowrap",
      cell: (check) => (
        <Link to={checkPath(check)} className="hover:underline">
          {check.number}
        </Link>
      ),
    },
    ...(withConfiguration
      ? [{ key: "configuration", head: "Configuration", cell: (check: CheckSummary) => check.configurationName ?? "–" }]
      : []),
    ...(ofInstrument
      ? []
      : [
          {
            key: "instrument",
            head: "Instrument",
            cell: (check: CheckSummary) => (
              <>
                <Link to={configurationPath(check)} className="strong hover:underline">
                  {check.instrumentName}
                </Link>{" "}
                <span className="type-note">
                  {check.configurationName !== null && `${check.configurationName}, `}
                  {conditionWords[check.condition]}
                </span>
              </>
            ),
          },
        ]),
    {
      key: "date",
      head: "Date",
      className: "whitespace-nowrap",
      cell: (check) => <When at={dateOf(check)} as="short" />,
    },
    ...(ofInstrument
      ? []
      : [
          {
            key: "by",
            head: "Made by",
            className: "hidden whitespace-nowrap @min-[960px]:table-cell",
            cell: (check: CheckSummary) => <span title={check.begunBy.name}>{shortName(check.begunBy.name)}</span>,
          },
        ]),
    {
      key: "lines",
      head: "Lines",
      numbers: true,
      className: "hidden @min-[640px]:table-cell",
      cell: (check) => (check.result === null ? "" : `${check.result.judgedCount}/${check.result.lineCount}`),
    },
    {
      key: "worst",
      head: "Worst, nm",
      numbers: true,
      cell: (check) =>
        check.result?.worst && (
          <Decimal
            value={check.result.worst.errorNm}
            signed
            decimals={uncertaintyDecimals(check.result.worst.expandedUncNm) ?? 3}
            columnDecimals={decimals}
          />
        ),
    },
    {
      key: "U",
      head: "U",
      numbers: true,
      className: "hidden @min-[560px]:table-cell",
      cell: (check) =>
        check.result?.worst && (
          <Decimal
            value={check.result.worst.expandedUncNm}
            decimals={uncertaintyDecimals(check.result.worst.expandedUncNm) ?? 3}
            columnDecimals={decimals}
          />
        ),
    },
    {
      key: "used",
      head: "Tolerance used",
      className: "hidden whitespace-nowrap @min-[640px]:table-cell",
      cell: (check) => <Used check={check} />,
    },
    { key: "verdict", head: "Verdict", className: "whitespace-nowrap", cell: (check) => <Verdict check={check} /> },
    {
      key: "approved",
      head: "Approved",
      className: "text-quiet whitespace-nowrap",
      cell: (check) => <Progress check={check} />,
    },
  ];
  return (
    <div className="@container">
      <Table
        caption={caption}
        columns={columns}
        rows={checks}
        rowKey={(check) => check.id}
        compact={compact}
        narrow={(check) => (
          <Link to={checkPath(check)} className="block py-1">
            <span className="flex items-baseline justify-between gap-3">
              <span className="min-w-0">
                <span className="strong">{ofInstrument ? check.number : check.instrumentName}</span>{" "}
                <span className="type-note">
                  {!ofInstrument && `${check.number}, `}
                  {(withConfiguration || !ofInstrument) &&
                    check.configurationName !== null &&
                    `${check.configurationName}, `}
                  <When at={dateOf(check)} as="short" />
                </span>
              </span>
              <Verdict check={check} />
            </span>
            <span className="flex items-center justify-between gap-3">
              {check.result?.worst ? (
                <span>
                  {formatQuantity(check.result.worst.errorNm, check.result.worst.expandedUncNm, "nm", { signed: true })}
                  <span className="type-note"> {formatPercent(check.result.toleranceUsed)} used</span>
                </span>
              ) : (
                <span />
              )}
              <span className="type-note">
                <Progress check={check} />
              </span>
            </span>
          </Link>
        )}
      />
    </div>
  );
}
