/** The same result for a person at the terminal. */
import { roundResult, type AxisUnit } from "@wavekeep/core";
import type { LineDocument, ResultDocument } from "./analyse-file.ts";

export function tableOf(result: ResultDocument): string {
  const lines = [result.file.name];
  if ("rows" in result.file) {
    const { rows, axis, axisUnit, first, last } = result.file;
    lines.push(`  ${rows} rows, ${axis} axis, ${first} to ${last} ${axisUnit}`);
    for (const remark of result.file.remarks) lines.push(`  ${remark}`);
  }
  lines.push(`  ${result.outcome}${result.verdict === null ? "" : `, ${verdictWords[result.verdict]}`}`);
  if (result.reason !== null) lines.push(`  ${result.reason}`);
  if (result.lines.length > 0) {
    const unit = "errorPerCm" in result.lines[0]! ? "cm-1" : "nm";
    lines.push(row(["position", "wavelength nm", "species", `error ${unit}`, `U ${unit}`, "FWHM", "flags"]));
    const decimals = "rows" in result.file ? (decimalsOf[result.file.axisUnit] ?? 3) : 3;
    for (const line of result.lines) lines.push(row(cellsOf(line, decimals)));
  }
  if (result.dispersion !== null) {
    const { degree, rmsNm, rmsPx } = result.dispersion;
    lines.push(
      `  axis of degree ${degree}, RMS ${rmsNm.toPrecision(3)} nm (${rmsPx.toPrecision(3)} of the file's unit)`,
    );
  }
  if (result.notIncluded.length > 0 && result.lines.some((line) => errorOf(line).error !== null)) {
    lines.push(`  U does not hold: ${result.notIncluded.join(", ")}`);
  }
  return `${lines.join("\n")}\n`;
}

/** Of a position, where not 3. */
const decimalsOf: Partial<Record<AxisUnit, number>> = { eV: 6, µm: 6 };
const verdictWords = { pass: "in tolerance", inconclusive: "inconclusive", fail: "out of tolerance" };

function errorOf(line: LineDocument): { error: number | null; expandedUnc: number | null } {
  return {
    error: line.errorPerCm ?? line.errorNm ?? null,
    expandedUnc: line.errorExpandedUncPerCm ?? line.errorExpandedUncNm ?? null,
  };
}

function cellsOf(line: LineDocument, decimals: number): string[] {
  const { error: found, expandedUnc } = errorOf(line);
  const error = found === null || expandedUnc === null ? null : roundResult(found, expandedUnc);
  return [
    line.position.toFixed(decimals),
    line.wavelengthNm === null ? "-" : line.wavelengthNm.toFixed(4),
    line.species ?? "-",
    error === null ? "-" : error.value,
    error === null ? "-" : error.expandedUnc,
    line.fwhm.toPrecision(3),
    line.flags.join(" "),
  ];
}

const widths = [11, 14, 8, 10, 9, 8, 0];

function row(cells: string[]): string {
  return `  ${cells.map((cell, i) => (i === cells.length - 1 ? cell : cell.padStart(widths[i]!))).join("  ")}`.trimEnd();
}
