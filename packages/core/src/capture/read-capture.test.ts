import { parse } from "csv-parse/sync";
import fc from "fast-check";
import { describe, expect, it } from "vitest";
import type { FileFacts, ReadOptions, Refusal, Spectrum } from "../analysis/types.ts";
import { readCapture } from "./read-capture.ts";
import { scanNumber } from "./scan-row.ts";

const utf8 = new TextEncoder();

function read(source: string | Uint8Array, options: ReadOptions = {}): { spectrum: Spectrum; facts: FileFacts } {
  const result = readCapture(source, "capture.txt", options);
  if (result.outcome === "refused") throw new Error(`refused: ${result.code}: ${result.reason}`);
  return result;
}

function refusal(source: string | Uint8Array, options: ReadOptions = {}): Refusal {
  const result = readCapture(source, "capture.txt", options);
  if (result.outcome !== "refused") throw new Error("was read");
  return result;
}

/** Rows "axis<separator>count", twelve of them. */
function table(
  separator: string,
  axis: (i: number) => string,
  count: (i: number) => string = (i) => String(100 + i * i),
): string {
  return Array.from({ length: 12 }, (_, i) => `${axis(i)}${separator}${count(i)}`).join("\n");
}

describe("readCapture", () => {
  it("reads header, metadata and headings of a tab-separated file with CRLF endings", () => {
    const text = `Source: test lamp\nAverages: 4\nFull scale: 4095\nPixel\tCounts\n${table("\t", String)}\n`.replace(
      /\n/g,
      "\r\n",
    );
    const { spectrum, facts } = read(utf8.encode(text));
    expect(facts).toMatchObject({
      rows: 12,
      axis: "pixel",
      axisUnit: "px",
      first: 0,
      last: 11,
      delimiter: "\t",
      decimal: ".",
      missing: 0,
      encoding: "utf-8",
      headerLines: 4,
      columns: ["Pixel", "Counts"],
      axisColumn: 0,
      intensityColumn: 1,
      damagedLines: [],
    });
    expect(facts.metadata).toEqual({ Source: "test lamp", Averages: "4", "Full scale": "4095" });
    expect(spectrum.fullScaleCounts).toBe(4095);
    expect(spectrum.scansSummed).toBe(1);
    expect(spectrum.counts[3]).toBe(109);
  });

  it("gives the same numbers for LF, CRLF, CR, a byte-order mark, UTF-16 both ways, and text", () => {
    const text = `Wavelength (nm);Intensity µ\n${table(";", (i) => `${400 + i},5`)}\n`;
    const reference = read(text);
    const utf16 = (little: boolean, mark: boolean): Uint8Array => {
      const units = [...(mark ? "\ufeff" : ""), ...text].map((c) => c.charCodeAt(0));
      return Uint8Array.from(units.flatMap((u) => (little ? [u & 255, u >> 8] : [u >> 8, u & 255])));
    };
    const latin1 = Uint8Array.from([...text].map((c) => c.charCodeAt(0)));
    const sources = [
      utf8.encode(text),
      utf8.encode(text.replace(/\n/g, "\r\n")),
      utf8.encode(text.replace(/\n/g, "\r")),
      utf8.encode("\ufeff" + text),
      utf16(true, true),
      utf16(false, true),
      utf16(true, false),
      utf16(false, false),
      latin1,
    ];
    for (const source of sources) {
      const { spectrum, facts } = read(source);
      expect(spectrum.positions).toEqual(reference.spectrum.positions);
      expect(spectrum.counts).toEqual(reference.spectrum.counts);
      expect(facts.columns).toEqual(["Wavelength (nm)", "Intensity µ"]);
    }
    expect(read(latin1).facts.encoding).toBe("latin-1");
    expect(read(utf16(true, false)).facts.encoding).toBe("utf-16le");
  });

  it.each([
    [";", ","],
    ["\t", ","],
    [" ", ","],
    [",", "."],
    ["   ", "."],
    ["\t", "."],
    [";", "."],
    [" ; ", ","],
    [", ", "."],
  ])("finds delimiter %j with decimal sign %j", (delimiter, decimal) => {
    const { spectrum, facts } = read(
      table(
        delimiter,
        (i) => `${400 + i}${decimal}25`,
        (i) => `${i}${decimal}5`,
      ),
    );
    expect(facts.decimal).toBe(decimal);
    expect(facts.delimiter).toBe(delimiter.trim() === "" ? (delimiter === "\t" ? "\t" : " ") : delimiter.trim());
    expect(spectrum.positions[1]).toBe(401.25);
    expect(spectrum.counts[2]).toBe(2.5);
  });

  it("reads quoted numbers with decimal commas in a comma-separated file", () => {
    const { spectrum } = read(
      table(
        ",",
        (i) => `"${400 + i},25"`,
        (i) => `"${i},5"`,
      ),
    );
    expect(spectrum.positions[1]).toBe(401.25);
    expect(spectrum.counts[2]).toBe(2.5);
  });

  it.each([
    ["Wavelength [nm]", 1, 500, "wavelength", "nm", 500],
    ["wave", 1, 5460, "wavelength", "Å", 546],
    ["lambda", 1, 0.546, "wavelength", "µm", 546],
    ["Wavelength (Å)", 1, 2537, "wavelength", "Å", 253.7],
    ["Wavelength (A)", 1, 2537, "wavelength", "Å", 253.7],
    ["Raman shift (cm-1)", 1, 500, "wavenumber", "cm-1", 500],
    ["cm^-1", 1, 500, "wavenumber", "cm-1", 500],
    ["Drive step", 1, 500, "step", "step", 500],
    ["pixel num", 1, 500, "pixel", "px", 500],
  ] as const)("understands the axis heading %j", (heading, step, first, kind, unit, position) => {
    const { spectrum, facts } = read(`${heading},signal\n${table(",", (i) => String(first + i * step))}`);
    expect(facts.axis).toBe(kind);
    expect(facts.axisUnit).toBe(unit);
    expect(facts.first).toBe(first);
    expect(spectrum.positions[0]).toBeCloseTo(position, 9);
  });

  it("takes an axis in the thousands for nanometres when the file says so", () => {
    const { facts, spectrum } = read(`Wavelength (nm),signal\n${table(",", (i) => String(3000 + i))}`);
    expect(facts.axisUnit).toBe("nm");
    expect(spectrum.positions[0]).toBe(3000);
  });

  it("turns a descending axis round and keeps first and last in the file's order", () => {
    const { spectrum, facts } = read(`nm,counts\n${table(",", (i) => String(700 - i))}`);
    expect(facts).toMatchObject({ first: 700, last: 689 });
    expect(spectrum.wasDescending).toBe(true);
    expect(spectrum.positions[0]).toBe(689);
    expect(spectrum.counts[11]).toBe(100);
  });

  it("counts pixels from 0 when the file counts from 1", () => {
    const { spectrum, facts } = read(`pixel,counts\n${table(",", (i) => String(i + 1))}`);
    expect(spectrum.positions[0]).toBe(0);
    expect(facts.first).toBe(1);
    expect(facts.remarks.join(" ")).toContain("from 1");
  });

  it("takes the wavelength beside a running number, and obeys a correction", () => {
    const text = `index,wavelength nm,counts\n${Array.from({ length: 12 }, (_, i) => `${i},${400 + i / 2},${i * i}`).join("\n")}`;
    expect(read(text).facts).toMatchObject({ axisColumn: 1, intensityColumn: 2, axis: "wavelength" });
    expect(read(text, { axisColumn: 0, intensityColumn: 2 }).facts).toMatchObject({ axisColumn: 0, axis: "pixel" });
    expect(refusal(text, { intensityColumn: 7 }).code).toBe("no-such-column");
  });

  it("reads one column of numbers as intensities of pixels, and says so", () => {
    const { spectrum, facts } = read(Array.from({ length: 12 }, (_, i) => String((i * 7) % 5)).join("\n"));
    expect(facts.axis).toBe("pixel");
    expect(facts.axisColumn).toBeNull();
    expect(spectrum.positions[11]).toBe(11);
    expect(facts.remarks.join(" ")).toContain("one column");
  });

  it("counts blank and NaN cells, names damaged lines, keeps the foot as metadata", () => {
    const rows = Array.from({ length: 20 }, (_, i) => `${400 + i}.5,${i}`);
    rows[3] = "403.5,";
    rows[4] = "404.5,NaN";
    rows[7] = "407.5,12x";
    rows[9] = "409.5";
    const { spectrum, facts } = read(`nm,counts\n${rows.join("\n")}\nend of data: yes\n`);
    expect(facts.rows).toBe(18);
    expect(facts.missing).toBe(2);
    expect(Number.isNaN(spectrum.counts[3])).toBe(true);
    expect(facts.damagedLines.map((d) => d.line)).toEqual([9, 11]);
    expect(facts.metadata).toEqual({ "end of data": "yes" });
  });

  it("adds up the intensities as written", () => {
    const { facts } = read(`px,counts\n${table(",", String, () => "0.1")}`);
    expect(facts.intensitySum).toBeCloseTo(1.2, 15);
    expect(facts.intensityMax).toBe(0.1);
  });

  it.each([
    ["", "empty-file"],
    ["\n \n\t\n", "empty-file"],
    ["only words\nand more words\n", "one-column-text"],
    ["name,place\nlamp,bench\n", "no-numbers"],
    [table(",", (i) => String(i === 6 ? 2 : i)), "non-monotonic-axis"],
    [`nm,counts\n${table(",", (i) => String(400 + Math.floor(i / 2)))}`, "duplicate-positions"],
    ["nm,counts\n400,1\n401,2\n402,3\n", "too-few-rows"],
    [
      table(
        ",",
        (i) => `${200 + Math.floor(i / 4)},${(i % 4) * 25}`,
        (i) => `${1200 + i},5`,
      ),
      "ambiguous-number-format",
    ],
    [Array.from({ length: 40 }, (_, i) => String(400 + i)).join("\n"), "no-such-column"],
    ["##TITLE=lamp\n##XYDATA=(X++(Y..Y))\n400 1 2 3\n", "damaged-data"],
  ] as const)("refuses %j as %s", (text, code) => {
    const { reason, code: found } = refusal(utf8.encode(text));
    expect(found).toBe(code);
    expect(reason).toMatch(/\.$/);
  });

  it("refuses what is no text", () => {
    expect(refusal(Uint8Array.from({ length: 4000 }, (_, i) => (i * 7919) & 255)).code).toBe("binary-file");
    expect(refusal(Uint8Array.of(0x50, 0x4b, 3, 4, 20, 0, 6, 0)).reason).toContain("workbook");
    expect(refusal(utf8.encode("%PDF-1.7\n1 0 obj")).code).toBe("binary-file");
  });

  it("asks which sign is the decimal one when only grouping could tell", () => {
    const text = `Pixel\tCounts\n${table("\t", String, (i) => (i % 2 === 0 ? `${i + 1},234` : "999"))}`;
    expect(refusal(text).code).toBe("ambiguous-number-format");
    expect(read(text, { decimal: "." }).spectrum.counts[0]).toBe(1234);
    expect(read(text, { decimal: "," }).spectrum.counts[0]).toBe(1.234);
  });

  it("keeps a hostile metadata key as data", () => {
    const { facts } = read(`__proto__: x\n${table(",", String)}`);
    expect(Object.keys(facts.metadata)).toEqual(["__proto__"]);
    expect(Object.getPrototypeOf(facts.metadata)).toBe(Object.prototype);
  });

  it("answers on any bytes, and only with finite axes", () => {
    fc.assert(
      fc.property(
        fc.oneof(
          fc.uint8Array({ maxLength: 600 }),
          fc.string({ maxLength: 400, unit: "binary" }).map((s) => utf8.encode(s)),
          fc
            .array(fc.constantFrom(...'0123456789.,;\t \n\r"-+eE#:nmpx%/\u2212'), { maxLength: 600 })
            .map((cs) => utf8.encode(cs.join(""))),
        ),
        (bytes) => {
          const result = readCapture(bytes, "any");
          if (result.outcome === "refused") {
            expect(result.reason.length).toBeGreaterThan(10);
            return;
          }
          const { positions, counts } = result.spectrum;
          expect(positions.length).toBe(counts.length);
          for (let i = 0; i < positions.length; i += 1) {
            expect(Number.isFinite(positions[i])).toBe(true);
            if (i > 0) expect(positions[i]! > positions[i - 1]!).toBe(true);
          }
        },
      ),
      { numRuns: 2000, seed: 20260101 },
    );
  });
});

describe("scanNumber", () => {
  const scan = (text: string, decimal: "." | "," = "."): number => {
    const bytes = utf8.encode(text);
    return scanNumber(bytes, 0, bytes.length, decimal);
  };

  it("reads every double that is written shortest, and any decimal, as the language does", () => {
    fc.assert(
      fc.property(fc.double({ noNaN: true, noDefaultInfinity: true }), (value) => {
        expect(scan(String(value)) - value).toBe(0);
        expect(scan(value.toExponential(17)) - value).toBe(0);
        expect(scan(value.toPrecision(8)) - Number(value.toPrecision(8))).toBe(0);
      }),
      { numRuns: 3000, seed: 7 },
    );
  });

  it("knows signs, exponents, grouping and what is no number", () => {
    expect(scan("\u22121.5")).toBe(-1.5);
    expect(scan("+1.5E+03")).toBe(1500);
    expect(scan("1.5D+03")).toBe(1500);
    expect(scan("1,234,567.5")).toBe(1234567.5);
    expect(scan("1.234,5", ",")).toBe(1234.5);
    for (const none of ["", "-", ".", "1,23", "12,3456", "1e", "1e+", "0x10", "1.2.3", "0,123", "1 2", "e5"]) {
      expect(scan(none)).toBeNaN();
    }
  });

  it("agrees with csv-parse on a table", () => {
    const text = Array.from({ length: 500 }, (_, i) => `${i * 0.37},${(i * 7919) % 1001}.${i % 10}`).join("\n");
    const rows = parse(text) as string[][];
    const { spectrum } = read(text);
    rows.forEach((row, i) => {
      expect(spectrum.positions[i]).toBe(Number(row[0]));
      expect(spectrum.counts[i]).toBe(Number(row[1]));
    });
  });
});
