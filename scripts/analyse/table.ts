/** The same result for a person at the terminal. */
import { roundResult } from "@wavekeep/core";
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
    lines.push(row(["position", "wavelength nm", "species", "error nm", "U nm", "FWHM", "flags"]));
    for (const line of result.lines) lines.push(row(cellsOf(line)));
  }
  if (result.dispersion !== null) {
    const { degree, rmsNm, rmsPx } = result.dispersion;
    lines.push(
      `  axis of degree ${degree}, RMS ${rmsNm.toPrecision(3)} nm (${rmsPx.toPrecision(3)} of the file's unit)`,
    );
  }
  if (result.notIncluded.length > 0 && result.lines.some((line) => line.errorNm !== null)) {
    lines.push(`  U does not hold: ${result.notIncluded.join(", ")}`);
  }
  return `${lines.join("\n")}\n`;
}

const verdictWords = { pass: "in tolerance", inconclusive: "inconclusive", fail: "out of tolerance" };

function cellsOf(line: LineDocument): string[] {
  const error =
    line.errorNm === null || line.errorExpandedUncNm === null
      ? null
      : roundResult(line.errorNm, line.errorExpandedUncNm);
  return [
    line.position.toFixed(3),
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
