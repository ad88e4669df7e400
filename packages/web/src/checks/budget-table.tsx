/** The uncertainty budget of one line: contributions, their degrees of freedom, their share of u². */
import type { LineResult } from "@wavekeep/core";
import { budgetWords } from "../shared/words.ts";
import { formatNumber, NARROW_SPACE, Table } from "../ui/index.ts";
import { lineName } from "./verdict-sentence.ts";

const dofWords = (degreesOfFreedom: number | null) =>
  degreesOfFreedom === null || degreesOfFreedom > 9999 ? "∞" : formatNumber(degreesOfFreedom);
/** pm, two significant digits. */
const pm = (nm: number) => {
  const value = nm * 1000;
  return formatNumber(value, { decimals: value >= 10 ? 1 : 2 });
};

export function BudgetTable({ line, axisUnit }: { line: LineResult; axisUnit: string }) {
  if (line.errorUncNm === null || line.budget.length === 0) {
    return (
      <>
        <h3 className="strong">Uncertainty of {lineName(line, axisUnit)}</h3>
        <p className="type-note mt-1">Not estimated: {line.reason ?? "no error is known for this line"}</p>
      </>
    );
  }
  const entries = [...line.budget].sort((a, b) => b.shareOfVariance - a.shareOfVariance);
  const most = entries[0];
  return (
    <>
      <h3 className="strong">Uncertainty of {lineName(line, axisUnit)}</h3>
      <p className="type-note mt-1 mb-3">
        For 95.45{NARROW_SPACE}%{most !== undefined && `; ${budgetWords[most.contribution].toLowerCase()} weighs most`}.
      </p>
      <Table
        caption={`Uncertainty budget of ${lineName(line, axisUnit)}`}
        compact
        rows={entries}
        rowKey={(entry) => `${entry.contribution} ${entry.note}`}
        columns={[
          {
            key: "contribution",
            head: "Contribution",
            cell: (entry) => (
              <span title={entry.note}>
                {budgetWords[entry.contribution]}
                {entry.assumed && (
                  <>
                    , <i>assumed</i>
                  </>
                )}
              </span>
            ),
          },
          { key: "u", head: "u, pm", numbers: true, cell: (entry) => pm(entry.uncNm * Math.abs(entry.sensitivity)) },
          { key: "nu", head: "ν", numbers: true, cell: (entry) => dofWords(entry.degreesOfFreedom) },
          {
            key: "share",
            head: "share of u²",
            className: "whitespace-nowrap",
            cell: (entry) => (
              <svg
                width={56}
                height={7}
                className="inline-block align-middle"
                role="img"
                aria-label={`${formatNumber(entry.shareOfVariance * 100)} %`}
              >
                <line x1={0} x2={56} y1={3.5} y2={3.5} stroke="var(--hairline)" shapeRendering="crispEdges" />
                <rect x={0} y={2} width={Math.min(entry.shareOfVariance, 1) * 56} height={3} fill="var(--ink)" />
              </svg>
            ),
          },
        ]}
        foot={
          <>
            <tr>
              <td>
                <b>Combined</b>
              </td>
              <td className="numbers">{pm(line.errorUncNm)}</td>
              <td className="numbers">{dofWords(line.effectiveDegreesOfFreedom)}</td>
              <td />
            </tr>
            {line.errorExpandedUncNm !== null && (
              <tr>
                <td>
                  <b>Expanded</b>, k = {formatNumber(line.coverageFactor, { decimals: 2 })}
                </td>
                <td className="numbers strong">
                  {formatNumber(line.errorExpandedUncNm * 1000, {
                    decimals: line.errorExpandedUncNm < 0.00995 ? 1 : 0,
                  })}
                </td>
                <td />
                <td />
              </tr>
            )}
            {line.errorExpandedUncNm !== null && line.errorNm !== null && (
              <tr>
                <td>
                  <b>For use</b>, |error| + U
                </td>
                <td className="numbers">{formatNumber((Math.abs(line.errorNm) + line.errorExpandedUncNm) * 1000)}</td>
                <td />
                <td />
              </tr>
            )}
          </>
        }
      />
      {entries.some((entry) => entry.note !== "") && (
        <details className="type-note mt-2">
          <summary className="text-link inline">Where each comes from</summary>
          <dl className="mt-2 grid grid-cols-[auto_1fr] gap-x-3 gap-y-1">
            {entries
              .filter((entry) => entry.note !== "")
              .map((entry) => (
                <div key={`${entry.contribution} ${entry.note}`} className="contents">
                  <dt>{budgetWords[entry.contribution]}</dt>
                  <dd>{entry.note}</dd>
                </div>
              ))}
          </dl>
        </details>
      )}
    </>
  );
}
