/** What is printed in any dialect reads back as it was; two readings that fit are asked; nothing a file may hold throws, hangs or grows. */
import fc from "fast-check";
import { describe, expect, it } from "vitest";
import type { ReadCapture, ReadOptions } from "../analysis/types.ts";
import { readCapture } from "./read-capture.ts";

const utf8 = new TextEncoder();

interface Dialect {
  delimiter: "," | ";" | "\t" | " ";
  decimal: "." | ",";
  thousands: "" | "," | "." | "'" | " " | "\u00a0" | "\u202f";
  quoted: boolean;
  ending: "\n" | "\r\n" | "\r";
  encoding: "utf-8" | "utf-8-mark" | "utf-16le" | "utf-16be" | "latin-1";
  header: "none" | "heading" | "two-rows" | "metadata";
  descending: boolean;
  exponent: boolean;
  foot: boolean;
}

interface Table {
  axis: number[];
  counts: (number | null)[];
}

/** Columns as an instrument would write them in a dialect. */
function print(table: Table, dialect: Dialect): Uint8Array {
  const { delimiter, decimal, thousands, quoted, header } = dialect;
  const number = (value: number, digits: number): string => {
    const [mantissa, power] = (dialect.exponent ? value.toExponential(9) : value.toFixed(digits)).split("e");
    const [whole, fraction] = mantissa!.split(".");
    const grouped = thousands === "" ? whole! : whole!.replace(/\B(?=(\d{3})+$)/g, thousands);
    const text =
      grouped + (fraction === undefined ? "" : decimal + fraction) + (power === undefined ? "" : `E${power}`);
    return quoted ? `"${text}"` : text;
  };
  const rows = table.axis.map((at, i) => {
    const count = table.counts[i]!;
    return `${number(at, 4)}${delimiter}${count === null ? "NaN" : number(count, 2)}`;
  });
  if (dialect.descending) rows.reverse();
  const lines =
    header === "none"
      ? rows
      : header === "two-rows"
        ? [`Wavelength${delimiter}Signal`, `nm${delimiter}counts`, ...rows]
        : header === "heading"
          ? [`Wavelength${delimiter === " " ? "" : " "}(nm)${delimiter}Signal`, ...rows]
          : [
              "# Lamp: neon, invented",
              "Integration time (ms) = 20",
              "",
              `"Wavelength (nm)"${delimiter}"Signal"`,
              ...rows,
            ];
  if (dialect.foot) lines.push("end of data");
  const text = lines.join(dialect.ending) + dialect.ending;
  if (dialect.encoding === "utf-8") return utf8.encode(text);
  if (dialect.encoding === "utf-8-mark") return utf8.encode(`\ufeff${text}`);
  const units = [...text].map((letter) => letter.charCodeAt(0));
  if (dialect.encoding === "latin-1") return Uint8Array.from(units);
  const little = dialect.encoding === "utf-16le";
  return Uint8Array.from(
    [0xfeff, ...units].flatMap((unit) => (little ? [unit & 255, unit >> 8] : [unit >> 8, unit & 255])),
  );
}

const dialects: fc.Arbitrary<Dialect> = fc
  .record({
    delimiter: fc.constantFrom(",", ";", "\t", " "),
    decimal: fc.constantFrom(".", ","),
    thousands: fc.constantFrom("", "", ",", ".", "'", " ", "\u00a0", "\u202f"),
    quoted: fc.boolean(),
    ending: fc.constantFrom("\n", "\r\n", "\r"),
    encoding: fc.constantFrom("utf-8", "utf-8-mark", "utf-16le", "utf-16be", "latin-1"),
    header: fc.constantFrom("none", "heading", "two-rows", "metadata"),
    descending: fc.boolean(),
    exponent: fc.boolean(),
    foot: fc.boolean(),
  } as const)
  .filter(
    ({ delimiter, decimal, thousands, quoted, encoding }) =>
      thousands !== decimal &&
      // A sign inside numbers that also parts them needs quotes; blanks as delimiter can't group.
      !(delimiter === thousands && !quoted) &&
      !(delimiter === " " && thousands === " ") &&
      !(delimiter === "," && decimal === "," && quoted === false) &&
      !(encoding === "latin-1" && thousands === "\u202f"),
  ) as fc.Arbitrary<Dialect>;

/** Strictly rising axis in nm, counts with two decimals; some gaps. Fractions are never all of three digits: nothing is open. */
const tables: fc.Arbitrary<Table> = fc
  .array(
    fc.record({
      step: fc.integer({ min: 1, max: 9999 }),
      count: fc.oneof(
        { weight: 9, arbitrary: fc.integer({ min: -5_000, max: 900_000_000 }) },
        { weight: 1, arbitrary: fc.constant(null) },
      ),
    }),
    { minLength: 12, maxLength: 60 },
  )
  .map((rows) => {
    let at = 2_000_000;
    const axis = rows.map(({ step }) => (at += step) / 10_000);
    const counts = rows.map(({ count }) => (count === null ? null : count / 100));
    counts[0] ??= 1;
    return { axis, counts };
  });

describe("a printed capture", () => {
  it("reads back as it was, in every dialect", () => {
    fc.assert(
      fc.property(tables, dialects, (table, dialect) => {
        const result = readCapture(print(table, dialect), "printed", { inverted: false });
        expect(result).toMatchObject({ outcome: "read" });
        if (result.outcome !== "read") return;
        expect(Array.from(result.spectrum.positions)).toEqual(table.axis);
        expect(Array.from(result.spectrum.counts)).toEqual(table.counts.map((count) => count ?? NaN));
        expect(result.facts).toMatchObject({
          rows: table.axis.length,
          axis: "wavelength",
          delimiter: dialect.delimiter,
          missing: table.counts.filter((count) => count === null).length,
        });
        if (!dialect.exponent) expect(result.facts.decimal).toBe(dialect.decimal);
      }),
      { numRuns: 500, seed: 20260301 },
    );
  });

  it("reads back where the comma parts the columns and is the decimal sign too", () => {
    fc.assert(
      fc.property(tables, fc.integer({ min: 1, max: 4 }), fc.boolean(), (table, decimals, withHeading) => {
        const axis = table.axis.map((_, i) => (300 + 0.25 * i).toFixed(2));
        const counts = table.counts.map((count) => Math.abs(count ?? 7).toFixed(decimals));
        const rows = axis.map((at, i) => `${at},${counts[i]!}`.replaceAll(".", ","));
        const text = `${withHeading ? "nm,counts\n" : ""}${rows.join("\n")}\n`;
        let result = readCapture(text, "printed", { inverted: false });
        if (!withHeading && result.outcome === "refused") {
          // Without headings the last pieces may be a column of their own: asked, with the right answer among the offers.
          const right = result.readings?.find(({ options }) => options.cellsPerColumn?.join() === "2,2");
          expect(right).toBeDefined();
          result = readCapture(text, "printed", right!.options);
        }
        expect(result).toMatchObject({ outcome: "read", facts: { delimiter: ",", decimal: "," } });
        if (result.outcome !== "read") return;
        expect(Array.from(result.spectrum.positions)).toEqual(axis.map(Number));
        expect(Array.from(result.spectrum.counts)).toEqual(counts.map(Number));
      }),
      { numRuns: 100, seed: 4 },
    );
  });
});

/** A refusal's readings, each read: what the person gets whichever is chosen. */
function choices(text: string): ReadCapture[] {
  const asked = readCapture(text, "open");
  expect(asked).toMatchObject({ outcome: "refused", code: "ambiguous-number-format" });
  if (asked.outcome !== "refused") return [];
  return (asked.readings ?? []).map(({ options, firstRow, description }) => {
    const result = readCapture(text, "open", options);
    expect(description).toMatch(/\.$/);
    if (result.outcome === "read") {
      expect(firstRow).toContain(result.facts.first);
      expect(firstRow).toContain(result.spectrum.counts[0]);
    }
    return result;
  });
}

const rowsOf = (row: (i: number) => string, n = 24): string => Array.from({ length: n }, (_, i) => row(i)).join("\n");

describe("two readings that both fit", () => {
  it("are asked: a mark before three digits", () => {
    for (const delimiter of [";", "\t", " "]) {
      const text = `Pixel${delimiter}Counts\n${rowsOf((i) => `${i}${delimiter}${1 + (i % 7)},${100 + i}`)}\n`;
      const [point, comma, ...more] = choices(text);
      expect(more).toEqual([]);
      expect(point).toMatchObject({ outcome: "read", facts: { intensityMax: 7120, decimal: "." } });
      expect(comma).toMatchObject({ outcome: "read", facts: { intensityMax: 7.12, decimal: "," } });
    }
  });

  it("are decided by one row anywhere in the file", () => {
    const rows = Array.from({ length: 3000 }, (_, i) => `${i};${1 + (i % 7)},${100 + (i % 100)}`);
    expect(readCapture(`Pixel;Counts\n${rows.join("\n")}`, "open").outcome).toBe("refused");
    rows[1717] = "1717;0,125";
    expect(readCapture(`Pixel;Counts\n${rows.join("\n")}`, "told")).toMatchObject({
      outcome: "read",
      facts: { decimal: "," },
    });
    rows[1717] = "1717;1,234.5";
    expect(readCapture(`Pixel;Counts\n${rows.join("\n")}`, "told")).toMatchObject({
      outcome: "read",
      facts: { decimal: "." },
    });
  });

  it("are decided by the axis' unit, or by another number of the file", () => {
    const rows = rowsOf((i) => `${400 + i},125;${1 + (i % 7)},${100 + i}`);
    expect(readCapture(`Wavelength (nm);Counts\n${rows}`, "told")).toMatchObject({
      outcome: "read",
      facts: { decimal: ",", first: 400.125 },
    });
    const counts = rowsOf((i) => `${i};${1 + (i % 7)},${100 + i}`);
    expect(readCapture(`Gain: 1,5\nPixel;Counts\n${counts}`, "told")).toMatchObject({
      outcome: "read",
      facts: { decimal: "," },
    });
    expect(readCapture(`Gain: 1.5\nPixel;Counts\n${counts}`, "told")).toMatchObject({
      outcome: "read",
      facts: { decimal: "." },
    });
  });

  it("are asked: commas that may be decimal signs too", () => {
    const text = rowsOf((i) => `${i},${100 + (i % 7)},${1000 + i * i}`);
    const read = choices(text);
    expect(read.map((one) => (one.outcome === "read" ? one.facts.columns.length : 0)).sort()).toEqual([2, 3]);
    expect(readCapture(`Pixel,Dark,Lamp\n${text}`, "told")).toMatchObject({
      outcome: "read",
      facts: { columns: ["Pixel", "Dark", "Lamp"] },
    });
    expect(readCapture(`Pixel,Lamp\n${text}`, "told")).toMatchObject({
      outcome: "read",
      facts: { columns: ["Pixel", "Lamp"] },
    });
  });
});

describe("corrections", () => {
  const two = `Wavelength (nm),Channel A (V),Channel B (V)\n${rowsOf((i) => `${400 + i / 2},${i % 5},${(i * 3) % 11}`)}`;
  const read = (text: string, options: ReadOptions): ReadCapture =>
    readCapture(text, "corrected", { inverted: false, ...options });

  it("choose a column by its name, with or without its unit", () => {
    for (const intensityName of ["Channel B (V)", "channel b", "  CHANNEL  B ", "B (V)"]) {
      expect(read(two, { intensityName })).toMatchObject({ outcome: "read", facts: { intensityColumn: 2 } });
    }
    expect(read(two, { intensityName: "Channel" })).toMatchObject({ outcome: "refused", code: "no-such-column" });
  });

  it("no axis is left beside the intensities asked for: refused, and read where the samples are to be counted", () => {
    const lone = Array.from({ length: 40 }, (_, i) => `NaN\t${100 + ((i * 37) % 11)}`).join("\n");
    expect(read(lone, { intensityColumn: 1 })).toMatchObject({ outcome: "refused", code: "no-such-column" });
    expect(read(lone, { intensityColumn: 1, axisColumn: null })).toMatchObject({
      outcome: "read",
      facts: { axis: "pixel", rows: 40 },
    });
  });

  it("take the axis of the kind that is asked for", () => {
    const text = `Pixel,Wavelength (nm),Counts\n${rowsOf((i) => `${100 + i},${400 + i / 2},${i % 5}`)}`;
    expect(read(text, {})).toMatchObject({ facts: { axisColumn: 1, axisUnit: "nm" } });
    expect(read(text, { axisUnit: "px" })).toMatchObject({ facts: { axisColumn: 0, axisUnit: "px", first: 100 } });
    const frequency = (unit: string): string => `Frequency (${unit}),Counts\n${rowsOf((i) => `${20000 + i},${i % 5}`)}`;
    expect(read(frequency("cm-1"), {})).toMatchObject({ outcome: "read", facts: { axis: "wavenumber" } });
    expect(read(frequency("THz"), {})).toMatchObject({ outcome: "refused", code: "no-such-column" });
  });

  it("turn a signal over or leave it", () => {
    const down = `Pixel,Signal\n${rowsOf((i) => `${i},${i === 11 || i === 12 || i === 13 ? -500 : -(i % 3)}`, 40)}`;
    const guessed = readCapture(down, "down");
    expect(guessed).toMatchObject({ outcome: "read", facts: { inverted: true, intensityMax: 0 } });
    if (guessed.outcome === "read") expect(guessed.spectrum.counts[12]).toBe(500);
    const kept = read(down, { inverted: false });
    if (kept.outcome === "read") expect(kept.spectrum.counts[12]).toBe(-500);
    const window = `nm,PMT (uA)\n${rowsOf((i) => `${546 + i / 50},${(-0.02 - 4 * Math.exp(-0.5 * ((i - 14) / 4) ** 2)).toFixed(4)}`, 30)}`;
    expect(readCapture(window, "a line fills its window")).toMatchObject({ facts: { inverted: true } });
    const dead = `Pixel,Signal\n${rowsOf((i) => `${i},${i === 30 ? 0 : 1000 + (i % 5) + (Math.abs(i - 15) < 3 ? 60 : 0)}`, 60)}`;
    expect(readCapture(dead, "one dead pixel")).not.toHaveProperty("facts.inverted");
  });

  it("skip lines, take another table, forbid grouping", () => {
    const table = (from: number): string => rowsOf((i) => `${from + i},${i % 4}`, 12);
    const text = `Pixel,Counts\n${table(0)}\n\nPixel,Counts\n${table(0)}\n12,9\n`;
    expect(read(text, {})).toMatchObject({ outcome: "read", facts: { rows: 13, tables: 2 } });
    expect(read(text, { table: 0 })).toMatchObject({ outcome: "read", facts: { rows: 12 } });
    expect(read(text, { table: 5 })).toMatchObject({ outcome: "refused", code: "no-such-column" });
    expect(read(text, { skipLines: 13 })).toMatchObject({ outcome: "read", facts: { rows: 13 } });
    const grouped = rowsOf((i) => `${i};1,234`);
    expect(read(grouped, { decimal: ".", thousands: "none" })).toMatchObject({ outcome: "refused" });
    expect(read(grouped, { thousands: "," })).toMatchObject({ outcome: "read", facts: { intensityMax: 1234 } });
  });
});

describe("damage", () => {
  const rows = (broken: (i: number) => boolean): string =>
    `Wavelength (nm);Counts\n${rowsOf((i) => (broken(i) ? `${400 + i}` : `${400 + i};${i}`), 60)}`;

  it("is named and left out where it is little, and refused with its first line where it is much", () => {
    expect(
      readCapture(
        rows((i) => i % 20 === 3),
        "some",
      ),
    ).toMatchObject({
      outcome: "read",
      facts: { rows: 57, damagedLines: [{ line: 5 }, { line: 25 }, { line: 45 }] },
    });
    expect(
      readCapture(
        rows((i) => i % 3 === 2),
        "much",
      ),
    ).toMatchObject({ outcome: "refused", code: "damaged-data", line: 4 });
  });

  it("does not pass for numbers: a row with one too many is left out", () => {
    const text = `nm,counts\n${rowsOf((i) => (i === 9 ? "409,1,234" : `${400 + i},${100 + i}`))}`;
    expect(readCapture(text, "torn")).toMatchObject({
      outcome: "read",
      facts: { rows: 23, damagedLines: [{ line: 11 }] },
    });
  });
});

describe("hostile files", () => {
  const valid = [
    `Wavelength (nm);Counts\r\n${rowsOf((i) => `${400 + i},25;${1000 + ((i * 7919) % 97)},5`)}\r\n`,
    `##TITLE=a\n##JCAMP-DX=4.24\n##DATA TYPE=EMISSION SPECTRUM\n##XUNITS=NANOMETERS\n##YUNITS=COUNTS\n##FIRSTX=400\n##LASTX=419\n##NPOINTS=20\n##XFACTOR=1\n##YFACTOR=1\n##XYDATA=(X++(Y..Y))\n400A00J1j2%S3K4\n408A04k4J2T%J1\n417A05%\n##END=\n`,
    `##TITLE=b\n##DATA TYPE=UV/VIS SPECTRUM\n##XUNITS=NANOMETERS\n##NPOINTS=10\n##XYPOINTS=(XY..XY)\n${rowsOf((i) => `${400 + i}, ${i * i};`, 10)}\n##END=\n`,
    `# a=1\nnm,a,b\nunits,,\n${rowsOf((i) => `${400 + i},"1,00${i % 10}",${i}`)}\n[end]\n`,
  ].map((text) => utf8.encode(text));

  /** A reading or a refusal with its sentence; nothing else, and a spectrum that holds. */
  function holds(result: ReadCapture): void {
    if (result.outcome === "refused") {
      expect(result.reason.length).toBeGreaterThan(10);
      expect(result.line === null || result.line > 0).toBe(true);
      return;
    }
    const { positions, counts } = result.spectrum;
    expect(positions.length).toBe(counts.length);
    for (let i = 0; i < positions.length; i += 1) {
      expect(Number.isFinite(positions[i])).toBe(true);
      if (i > 0) expect(positions[i]! > positions[i - 1]!).toBe(true);
      expect(Number.isFinite(counts[i]) || Number.isNaN(counts[i])).toBe(true);
    }
  }

  it("changed, cut, repeated and spliced, end in a reading or a typed refusal", () => {
    const edits = fc.array(
      fc.record({
        at: fc.nat(2000),
        remove: fc.nat(12),
        insert: fc.oneof(
          fc.uint8Array({ maxLength: 4 }),
          fc
            .constantFrom("\n", ",", ";", "\t", "\u0000", "##", "=", "$$", '"', "E+400", "S9", "%", "-", "1e999", "((")
            .map((t) => utf8.encode(t)),
        ),
      }),
      { minLength: 1, maxLength: 6 },
    );
    fc.assert(
      fc.property(fc.constantFrom(...valid), edits, (original, changes) => {
        let bytes = Array.from(original);
        for (const { at, remove, insert } of changes) {
          const from = at % (bytes.length + 1);
          bytes = [...bytes.slice(0, from), ...insert, ...bytes.slice(from + remove)];
        }
        holds(readCapture(Uint8Array.from(bytes), "changed"));
      }),
      { numRuns: 1000, seed: 20260302 },
    );
  });

  const many = 1_000_000;
  const jcamp = (data: string): string =>
    `##TITLE=x\n##FIRSTX=1\n##LASTX=2\n##NPOINTS=9\n##XYDATA=(X++(Y..Y))\n${data}\n##END=\n`;
  it.each([
    ["a million commas", () => ",".repeat(many)],
    ["a million quotes", () => '"'.repeat(many)],
    ["a million tabs and line ends", () => "\t\n".repeat(many / 2)],
    ["one line of a million digits", () => "7".repeat(many)],
    ["a million numbers in one line", () => "1,".repeat(many)],
    ["a hundred thousand lines, words and numbers by turns", () => "1,2\nabc\n".repeat(many / 20)],
    ["two hundred thousand metadata lines", () => "a: b\n".repeat(many / 5)],
    ["lines of blanks", () => `${" ".repeat(900)}x\n`.repeat(1000)],
    ["a packed count of a thousand million", () => jcamp("1A1S999999999")],
    ["packed counts without end", () => jcamp("1A1S99999\n".repeat(200))],
    ["a packed number of a million digits", () => jcamp(`1A${"9".repeat(many)}`)],
    ["blanks within a packed table", () => jcamp(`1A1${" ".repeat(many)}`)],
    ["empty lines within a packed table", () => jcamp(`1A1${"\n".repeat(many)}2A1`)],
    ["a hundred thousand titles", () => "##TITLE=x\n".repeat(many / 10)],
  ])("%s: answered in time", (_name, make) => {
    const text = make();
    const cpu = process.cpuUsage();
    holds(readCapture(text, "huge"));
    const { user, system } = process.cpuUsage(cpu);
    // A plain pass takes some hundredths of a second; what grows with the square of the length would take minutes.
    expect((user + system) / 1e6).toBeLessThan(5);
  });
});
