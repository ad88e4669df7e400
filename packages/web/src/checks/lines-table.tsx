/** The lines of an analysis: reference, position, error, U, width, verdict; what was left out or refused with its reason. */
import type { Analysis, LineResult } from "@wavekeep/core";
import type { ReactNode } from "react";
import { ToleranceUsed, wavelengthHue } from "../drawings/index.ts";
import { useTheme } from "../shared/theme.ts";
import { flagWords, leaveOutWords, lineState, speciesWord } from "../shared/words.ts";
import {
  Decimal,
  formatNumber,
  formatPercent,
  formatQuantity,
  Status,
  Table,
  uncertaintyDecimals,
} from "../ui/index.ts";
import { hasNoEarlierAxis } from "./verdict-sentence.ts";

interface LinesTableProps {
  analysis: Analysis;
  /** Index into `analysis.lines`. */
  chosen: number | null;
  onChoose: (line: number | null) => void;
  /** Name of the person who left lines out, before their reason. */
  leftOutBy?: string;
  /** On a phone, under the line: what may be done with it. */
  action?: (line: LineResult, index: number) => ReactNode;
}

type Row = { line: LineResult; index: number };

/** What stands behind the species: a blend, neighbours fitted together, a second order. */
function speciesNote(line: LineResult): string {
  const notes: string[] = [];
  if (line.blendOfNm.length > 1) notes.push(`blend of ${line.blendOfNm.length}`);
  if (line.order > 1) notes.push(`order ${line.order}`);
  for (const flag of line.flags)
    if (flag !== "blend" && flag !== "saturated" && flag !== "second-order") notes.push(flagWords[flag]);
  return notes.join(", ");
}

const isAside = (line: LineResult) => line.status === "left-out" || line.status === "refused";

/** Why a line was not judged. Where no axis could err (a first check) the title says so for all lines at once. */
function rowReason(line: LineResult, isFirstAxis: boolean, by: string | undefined): string | null {
  if (line.leftOut !== null && line.status === "left-out") {
    const head = `${by === undefined ? "Left out" : by}: ${leaveOutWords[line.leftOut.reason]}.`;
    return `${head} ${line.leftOut.note}`;
  }
  if (line.status === "judged" || (isFirstAxis && line.status === "not-judged")) return null;
  return line.reason;
}

/** Reference wavelengths are written with as many places as their source gives, at most four. */
const referenceDecimals = (line: LineResult) => Math.min(4, (String(line.wavelengthNm).split(".")[1] ?? "").length);

export function LinesTable({ analysis, chosen, onChoose, leftOutBy, action }: LinesTableProps) {
  const theme = useTheme();
  const isFirstAxis = hasNoEarlierAxis(analysis);
  const reasonOf = (line: LineResult) => rowReason(line, isFirstAxis, leftOutBy);
  const rows: Row[] = analysis.lines
    .map((line, index) => ({ line, index }))
    .sort(
      (a, b) =>
        (a.line.indicatedNm ?? a.line.wavelengthNm ?? a.line.position) -
        (b.line.indicatedNm ?? b.line.wavelengthNm ?? b.line.position),
    );
  const errorDecimals = Math.max(2, ...analysis.lines.map((line) => uncertaintyDecimals(line.errorExpandedUncNm) ?? 0));
  const positionDecimals = analysis.axisKind === "pixel" || analysis.axisKind === "step" ? 2 : 3;
  // A width has the unit of the axis; with a known axis it is told in nm, like everything beside it.
  const nmPerStep = (line: LineResult): number | null => {
    if (analysis.axisKind === "wavelength") return 1;
    const coefficients = analysis.dispersion?.axis.coefficients;
    if (coefficients === undefined) return null;
    return coefficients.reduce(
      (slope, value, power) => (power === 0 ? slope : slope + power * value * line.position ** (power - 1)),
      0,
    );
  };
  const fwhm = (line: LineResult) => {
    const scale = nmPerStep(line);
    return scale === null ? line.fwhm : line.fwhm * Math.abs(scale);
  };
  return (
    <div className="@container">
      <div className="hidden book:block">
        <Table
          caption="Lines"
          compact
          rows={rows}
          rowKey={(row) => String(row.index)}
          tick={({ line }) => (line.wavelengthNm === null ? null : wavelengthHue(line.wavelengthNm, theme))}
          isChosen={(row) => row.index === chosen}
          onChoose={(row) => onChoose(row.index)}
          rowClassName={({ line }) => (isAside(line) ? "left-out" : "")}
          rowNote={({ line }) => reasonOf(line)}
          columns={[
            {
              key: "reference",
              head: "Reference, nm",
              className: "whitespace-nowrap",
              cell: ({ line }) =>
                line.wavelengthNm === null ? (
                  <span className="text-quiet">unnamed</span>
                ) : (
                  <Decimal value={line.wavelengthNm} decimals={referenceDecimals(line)} columnDecimals={4} />
                ),
            },
            {
              key: "species",
              head: "Species",
              cell: ({ line }) => (
                <>
                  {speciesWord(line.species)} <span className="type-note">{speciesNote(line)}</span>
                </>
              ),
            },
            {
              key: "position",
              head: `Position, ${analysis.axisUnit}`,
              numbers: true,
              className: "hidden @min-[560px]:table-cell",
              cell: ({ line }) => (
                <Decimal value={line.position} decimals={positionDecimals} columnDecimals={positionDecimals} />
              ),
            },
            {
              key: "error",
              head: "Error",
              numbers: true,
              cell: ({ line }) =>
                line.errorNm !== null && (
                  <Decimal
                    value={line.errorNm}
                    signed
                    decimals={uncertaintyDecimals(line.errorExpandedUncNm) ?? 3}
                    columnDecimals={errorDecimals}
                  />
                ),
            },
            {
              key: "U",
              head: "U",
              numbers: true,
              cell: ({ line }) =>
                line.errorExpandedUncNm !== null && (
                  <Decimal
                    value={line.errorExpandedUncNm}
                    decimals={uncertaintyDecimals(line.errorExpandedUncNm) ?? 3}
                    columnDecimals={errorDecimals}
                  />
                ),
            },
            {
              key: "fwhm",
              head: "FWHM",
              numbers: true,
              className: "hidden @min-[620px]:table-cell",
              cell: ({ line }) => <Decimal value={fwhm(line)} decimals={2} columnDecimals={2} />,
            },
            {
              key: "used",
              head: "Tolerance used",
              className: "hidden whitespace-nowrap @min-[480px]:table-cell",
              cell: ({ line }) =>
                line.status === "judged" && (
                  <ToleranceUsed
                    used={line.toleranceUsed}
                    guardShare={
                      line.guardBandNm === null || line.toleranceNm === null
                        ? null
                        : line.guardBandNm / line.toleranceNm
                    }
                    state={lineState(line).state}
                  />
                ),
            },
            {
              key: "verdict",
              head: "Verdict",
              className: "whitespace-nowrap",
              cell: ({ line }) => <Status {...lineState(line)} />,
            },
          ]}
        />
      </div>
      <ul className="book:hidden" aria-label="Lines">
        {[...rows]
          .sort(
            (a, b) =>
              (isAside(a.line) ? 1 : 0) - (isAside(b.line) ? 1 : 0) ||
              (b.line.toleranceUsed ?? -1) - (a.line.toleranceUsed ?? -1),
          )
          .map(({ line, index }) => (
            <li key={index} className={`border-hairline border-b py-2 ${isAside(line) ? "left-out" : ""}`}>
              <button
                type="button"
                className="block w-full text-left"
                aria-pressed={index === chosen}
                onClick={() => onChoose(index === chosen ? null : index)}
              >
                <span className="flex items-baseline justify-between gap-3">
                  <span>
                    <b>
                      {line.wavelengthNm === null
                        ? "unnamed"
                        : formatNumber(line.wavelengthNm, { decimals: referenceDecimals(line) })}
                    </b>{" "}
                    <span className="text-quiet">
                      {speciesWord(line.species)}
                      {line.blendOfNm.length > 1 && `, blend of ${line.blendOfNm.length}`}
                    </span>
                  </span>
                  <span>
                    {line.errorNm !== null &&
                      formatQuantity(line.errorNm, line.errorExpandedUncNm, "nm", { signed: true })}
                  </span>
                </span>
                <span className="mt-1 flex items-baseline justify-between gap-3">
                  <Status {...lineState(line)} />
                  {line.status === "judged" ? (
                    <ToleranceUsed
                      used={line.toleranceUsed}
                      guardShare={
                        line.guardBandNm === null || line.toleranceNm === null
                          ? null
                          : line.guardBandNm / line.toleranceNm
                      }
                      state={lineState(line).state}
                    />
                  ) : (
                    line.toleranceUsed !== null && (
                      <span className="type-note">{formatPercent(line.toleranceUsed)}</span>
                    )
                  )}
                </span>
              </button>
              {reasonOf(line) !== null && <p className="type-note">{reasonOf(line)}</p>}
              {action !== undefined && <div className="mt-1">{action(line, index)}</div>}
            </li>
          ))}
      </ul>
    </div>
  );
}

/** What the table does not say itself: how many were judged, of what, named how. */
export function LinesNote({ analysis }: { analysis: Analysis }) {
  const judged = analysis.lines.filter((line) => line.status === "judged").length;
  const named = analysis.lines.filter((line) => line.wavelengthNm !== null).length;
  return (
    <div className="type-note mt-3 max-w-[720px]">
      <p>
        {judged} of {named} named lines judged; beyond the outermost nothing is judged. {analysis.confidence.note}
      </p>
      {analysis.missingLinesNm.length > 0 && (
        <p>
          Expected and not found: {analysis.missingLinesNm.map((nm) => formatNumber(nm, { decimals: 3 })).join(", ")}{" "}
          nm.
        </p>
      )}
      {analysis.verdict?.reasons.map((reason) => (
        <p key={reason}>{reason}</p>
      ))}
      {analysis.warnings.map((warning) => (
        <p key={`${warning.code} ${warning.text}`}>{warning.text}</p>
      ))}
      {analysis.notIncluded.length > 0 && <p>U does not hold: {analysis.notIncluded.join(", ")}.</p>}
    </div>
  );
}
