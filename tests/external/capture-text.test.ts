/**
 * Files in the ways that instruments write them: each read as its writer meant it, and the scanner held to a general-purpose CSV parser.
 */
import { parse } from "csv-parse/sync";
import fs from "node:fs";
import path from "node:path";
import { describe, expect, it } from "vitest";
import { readCapture, type FileFacts, type Spectrum } from "../../packages/core/src/index.ts";
import { fileOf, isPresent, mercuryCaptures, neonSeries } from "./support/real-capture.ts";

interface Table {
  delimiter: string;
  decimal: string;
  /** Counted from 1. */
  fromLine: number;
  toLine?: number;
  columns: [number, number];
}
interface Expected extends Partial<FileFacts> {
  refused?: string;
  readings?: number;
  fullScaleCounts?: number;
  scansSummed?: number;
  damaged?: number[];
  samples?: number;
  remark?: string;
  table?: Table;
  jcamp?: boolean;
}

const folder = path.resolve(import.meta.dirname, "../fixtures/capture-text");
const expected = JSON.parse(fs.readFileSync(path.join(folder, "expected.json"), "utf8")) as Record<string, Expected>;
const names = Object.keys(expected);

function read(file: string): { spectrum: Spectrum; facts: FileFacts } {
  const result = readCapture(fs.readFileSync(file), path.basename(file));
  if (result.outcome === "refused") throw new Error(`${file}: ${result.code}: ${result.reason}`);
  return result;
}

/** Axis and counts as csv-parse and the language's own number conversion have them, in file order. */
function byGeneralParser(text: string, table: Table): { axis: number[]; counts: number[] } {
  const numberOf = (cell: string): number => {
    const bare = cell.trim();
    return bare === "" || bare === "NaN" ? NaN : Number(table.decimal === "," ? bare.replace(",", ".") : bare);
  };
  const rows = parse(text, {
    bom: true,
    delimiter: table.delimiter,
    record_delimiter: ["\r\n", "\n", "\r"],
    from_line: table.fromLine,
    ...(table.toLine === undefined ? {} : { to_line: table.toLine }),
    relax_column_count: true,
  }) as string[][];
  return {
    axis: rows.map((row) => numberOf(row[table.columns[0]]!)),
    counts: rows.map((row) => numberOf(row[table.columns[1]]!)),
  };
}

function textOf(file: string): string {
  const bytes = fs.readFileSync(file);
  const { encoding } = read(file).facts;
  return new TextDecoder(encoding === "latin-1" ? "latin1" : encoding).decode(bytes);
}

describe("invented files", () => {
  it("are all there", () => {
    expect(
      fs
        .readdirSync(folder)
        .filter((name) => !/\.(json|md)$/.test(name))
        .sort(),
    ).toEqual(names.sort());
  });

  it.each(names.filter((name) => expected[name]!.refused === undefined))("%s is read as it was meant", (name) => {
    const {
      fullScaleCounts,
      scansSummed,
      damaged,
      samples,
      remark,
      table: _table,
      jcamp,
      metadata,
      intensitySum,
      ...facts
    } = expected[name]!;
    const { outcome: _outcome, ...plain } = facts as typeof facts & { outcome?: string };
    const found = read(path.join(folder, name));
    expect(found.facts).toMatchObject(plain);
    if (intensitySum !== undefined) expect(found.facts.intensitySum).toBeCloseTo(intensitySum, 9);
    if (metadata !== undefined) expect(found.facts.metadata).toMatchObject(metadata);
    if (fullScaleCounts !== undefined) expect(found.spectrum).toMatchObject({ fullScaleCounts, scansSummed });
    expect(found.facts.damagedLines.map(({ line }) => line)).toEqual(damaged ?? []);
    expect(found.spectrum.positions).toHaveLength(samples ?? found.facts.rows);
    expect(found.facts.format).toBe(jcamp ? "jcamp-dx" : undefined);
    if (remark !== undefined) expect(found.facts.remarks.join(" ")).toContain(remark);
    for (let i = 1; i < found.spectrum.positions.length; i += 1) {
      expect(found.spectrum.positions[i]!).toBeGreaterThan(found.spectrum.positions[i - 1]!);
    }
  });

  it.each(names.filter((name) => expected[name]!.refused !== undefined))("%s is refused in a sentence", (name) => {
    const result = readCapture(fs.readFileSync(path.join(folder, name)), name);
    expect(result).toMatchObject({ outcome: "refused", code: expected[name]!.refused });
    if (result.outcome !== "refused") return;
    expect(result.reason).toMatch(/\.$/);
    expect(result.line).toBeGreaterThan(0);
    expect(result.readings?.length).toBe(expected[name]!.readings);
  });
});

describe("the scanner", () => {
  const realFiles = ["ne-raman-bench.csv", "ar-arc-angstrom.csv", ...neonSeries];
  const mercury = mercuryCaptures.filter(isPresent);
  const tables: [string, string, Table][] = [
    ...names.flatMap((name): [string, string, Table][] => {
      const { table } = expected[name]!;
      return table === undefined ? [] : [[name, path.join(folder, name), table]];
    }),
    ...realFiles.map((name): [string, string, Table] => [
      name,
      fileOf(name),
      { delimiter: ",", decimal: ".", fromLine: 2, columns: [0, 1] },
    ]),
    ...mercury.map((name): [string, string, Table] => {
      const lines = fs.readFileSync(fileOf(name), "utf8").split(/\r\n|\n|\r/);
      const first = lines.findIndex((line) => /^[-+.\d]+\t[-+.\deE]+$/.test(line));
      return [name, fileOf(name), { delimiter: "\t", decimal: ".", fromLine: first + 1, columns: [0, 1] }];
    }),
  ];

  it.each(tables)("gives the numbers of a general-purpose parser, bit for bit: %s", (_name, file, table) => {
    const { facts, spectrum } = read(file);
    const general = byGeneralParser(textOf(file), table);
    expect(facts.rows).toBe(general.axis.length);
    expect(facts.first).toBe(general.axis[0]);
    expect(facts.last).toBe(general.axis[general.axis.length - 1]);
    const counts = general.counts.filter((_, i) => i === 0 || general.axis[i] !== general.axis[i - 1]);
    if (counts.length < general.counts.length || facts.inverted) return;
    expect(Array.from(spectrum.counts)).toEqual(spectrum.wasDescending ? counts.reverse() : counts);
  });

  it("takes every recorded capture the right way up, and finds each of them turned over", () => {
    for (const file of [...realFiles, ...mercury].map(fileOf)) {
      const { spectrum, facts } = read(file);
      expect(facts.inverted).toBeUndefined();
      const rows = Array.from(spectrum.counts, (count, i) => `${i},${-count}`);
      const turned = readCapture(`Pixel,Signal\n${rows.join("\n")}\n`, "turned");
      expect(turned).toMatchObject({ outcome: "read", facts: { inverted: true } });
    }
  });

  it.skipIf(mercury.length < mercuryCaptures.length)(
    "reads the two mercury captures too (they lie beside the project and are absent here otherwise)",
    () => {
      for (const name of mercury) expect(read(fileOf(name)).facts.axis).toBe("pixel");
    },
  );
});
