/** An absorption standard's certificate as a table: `wavelengthNm,expandedUncNm`, one band a row; `coverageFactor` where it is not 2. */
import fs from "node:fs";
import path from "node:path";
import type { BandCertificate } from "@wavekeep/core";
import { parse } from "csv-parse/sync";
import { UsageError } from "./usage.ts";

const usualCoverageFactor = 2;

/** @throws {UsageError} in a sentence, with the row */
export function readCertificate(file: string): BandCertificate {
  let text: string;
  try {
    text = fs.readFileSync(file, "utf8");
  } catch (error) {
    throw new UsageError(
      `--bands: ${file} could not be opened (${(error as NodeJS.ErrnoException).code ?? "unknown"}).`,
    );
  }
  let rows: string[][];
  try {
    rows = parse(text, {
      bom: true,
      delimiter: [",", ";", "\t"],
      comment: "#",
      relax_column_count: true,
      skip_empty_lines: true,
      trim: true,
    });
  } catch (error) {
    throw new UsageError(`--bands: ${file} could not be read as a table (${(error as Error).message}).`);
  }
  const isHeading = rows.length > 0 && rows[0]!.every((cell) => !(cell !== "" && Number.isFinite(numberOf(cell))));
  const headings = isHeading ? rows[0]!.map((cell) => cell.toLowerCase().replace(/[^a-z]/g, "")) : [];
  const find = (pattern: RegExp, otherwise: number): number => {
    const found = headings.findIndex((heading) => pattern.test(heading));
    return found >= 0 || isHeading ? found : otherwise;
  };
  const columns = {
    wavelength: find(/^wavelength/, 0),
    unc: find(/unc|^u(?:nm)?$/, 1),
    factor: find(/coverage|^k$/, 2),
  };
  if (columns.wavelength < 0 || columns.unc < 0) {
    throw new UsageError(`--bands: ${file} needs the columns wavelengthNm and expandedUncNm.`);
  }
  const bands = rows.slice(isHeading ? 1 : 0).map((row, index) => {
    const wavelengthNm = numberOf(row[columns.wavelength] ?? "");
    const expandedUncNm = numberOf(row[columns.unc] ?? "");
    const stated = row[columns.factor] ?? "";
    const coverageFactor = stated === "" ? usualCoverageFactor : numberOf(stated);
    if (!(wavelengthNm > 0) || !(expandedUncNm >= 0) || !(coverageFactor > 0)) {
      throw new UsageError(
        `--bands: ${file}, band ${index + 1} ("${row.join(", ")}"): wavelength in nm and expanded uncertainty in nm are needed.`,
      );
    }
    return { wavelengthNm, expandedUncNm, coverageFactor };
  });
  if (bands.length === 0) throw new UsageError(`--bands: ${file} holds no band.`);
  const { material, bandwidthNm } = statedIn(text);
  return { material: material ?? path.basename(file).replace(/\.[^.]*$/, ""), bandwidthNm, bands };
}

function numberOf(cell: string): number {
  const text = cell.trim();
  return text === "" ? NaN : Number(/^[-+]?\d+,\d+$/.test(text) ? text.replace(",", ".") : text);
}

/** Comment lines may name the material and the bandwidth that the values are certified for: `# material: ...`, `# bandwidthNm: 1`. */
function statedIn(text: string): { material: string | null; bandwidthNm: number | null } {
  const material = /^#[ \t]*material[ \t]*[:=][ \t]*(\S.*)$/im.exec(text)?.[1]?.trim() ?? null;
  const bandwidth = /^#[ \t]*(?:spectral[ \t]*)?bandwidth[^:=\n]*[:=][ \t]*([\d.]+)/im.exec(text)?.[1];
  const bandwidthNm = bandwidth === undefined ? NaN : Number(bandwidth);
  return { material, bandwidthNm: bandwidthNm > 0 ? bandwidthNm : null };
}
