/** The command line's promise for tables of past results: the published keys, headings and dates as people write them, sentences for what is wrong. */
import fs from "node:fs";
import os from "node:os";
import path from "node:path";
import { describe, expect, it } from "vitest";
import { isoDateOfDay } from "../../packages/core/src/index.ts";
import { judgeFile } from "../../scripts/drift/judge-file.ts";
import { main } from "../../scripts/drift/main.ts";
import { readOptions } from "../../scripts/drift/options.ts";
import { readResults } from "../../scripts/drift/read-results.ts";
import { runCommand } from "./support/run-command.ts";
import { createDraws, simulateHistory, trueKinds, type SimulatedHistory } from "./support/drift-history.ts";

const encode = (text: string): Uint8Array => new TextEncoder().encode(text);
const options = (...words: string[]) => readOptions(["results.csv", "--tolerance", "0.5", ...words]);

function tableOf(history: SimulatedHistory): string {
  const rows = ["date,temperatureC,source,lineNm,measuredNm,uncNm"];
  for (const check of history.checks) {
    for (const line of check.lines) {
      rows.push(
        [
          isoDateOfDay(check.day),
          check.temperatureC,
          check.source,
          line.wavelengthNm,
          line.measuredNm.toFixed(5),
          line.uncNm.toFixed(5),
        ].join(","),
      );
    }
  }
  return `${rows.join("\n")}\n`;
}

describe("the document", () => {
  it("has the published keys", () => {
    const document = judgeFile(encode(tableOf(simulateHistory("drift", createDraws(4243)))), options());
    expect(Object.keys(document)).toEqual(
      expect.arrayContaining([
        "outcome",
        "kind",
        "why",
        "signals",
        "rateNmPerYear",
        "rateUnc",
        "crossing",
        "charts",
        "coreVersion",
      ]),
    );
    expect(document).toMatchObject({ outcome: "judged", kind: "drift", reason: null });
    expect(document.crossing).toMatchObject({ coverage: 0.95 });
    expect(Object.keys(document.signals[0]!)).toEqual(expect.arrayContaining(["index", "date", "kind"]));
    for (const chart of document.charts) {
      expect(chart).toMatchObject({ centre: expect.any(Number), limits: { upper: expect.any(Number) } });
      expect(chart.points.length).toBeGreaterThan(0);
    }
  });

  it.each(trueKinds)("judges a table of a history that is %s", (kind) => {
    const history = simulateHistory(kind, createDraws(9200 + trueKinds.indexOf(kind)));
    const document = judgeFile(encode(tableOf(history)), options());
    expect(document.kind).toBe(kind);
    if (kind === "stable") expect(document.crossing).toEqual({ date: null, low: null, high: null, coverage: 0.95 });
    if (kind === "drift" || kind === "scale") {
      expect(Math.abs(document.rateNmPerYear! - history.rateNmPerYear)).toBeLessThan(4 * document.rateUnc!);
    }
    if (kind === "step") expect(document.step!.index).toBe(history.place);
    if (kind === "mislabelled") expect(document.odd!.index).toBe(history.place);
  });

  it("is one line of JSON on stdout, or text; wrong calls exit 2 with a sentence, refused tables 1", () => {
    const folder = fs.mkdtempSync(path.join(os.tmpdir(), "wavekeep-drift-"));
    const file = path.join(folder, "results.csv");
    fs.writeFileSync(file, tableOf(simulateHistory("step", createDraws(9203))));
    const run = (...argv: string[]) => runCommand(main, argv);
    const json = run(file, "--tolerance", "0.5", "--json");
    expect(json.code).toBe(0);
    expect(JSON.parse(json.out)).toMatchObject({ outcome: "judged", kind: "step" });
    expect(json.out.trim().split("\n")).toHaveLength(1);
    expect(run(file, "--tolerance", "0.5").out).toMatch(/^step \(\d+ checks\)\nFrom the check of /);
    expect(run(file, "--tolerance", "much")).toMatchObject({ code: 2, err: expect.stringContaining("--tolerance") });
    expect(run(file, "--columns", "datum")).toMatchObject({ code: 2, err: expect.stringContaining("FIELD=HEADING") });
    const missing = run(path.join(folder, "none.csv"), "--tolerance", "0.5", "--json");
    expect(missing.code).toBe(1);
    expect(JSON.parse(missing.out)).toMatchObject({ outcome: "refused", reason: expect.stringContaining("ENOENT") });
    fs.rmSync(folder, { recursive: true, force: true });
  });

  it("says how few checks there are", () => {
    const table = tableOf(simulateHistory("stable", createDraws(1))).split("\n");
    const document = judgeFile(encode(table.slice(0, 12).join("\n")), options());
    expect(document).toMatchObject({ outcome: "too-few", kind: null });
    expect(document.reason).toMatch(/^There (is|are) \d checks?; a history is judged from 6 on/);
  });
});

describe("reading", () => {
  const lines = [404.656, 435.833, 546.074];
  /** Ten monthly checks of three lines under the headings of one place. */
  const table = (
    headings: string[],
    date: (year: number, month: number, day: number) => string,
    number: (value: number) => string,
    delimiter: string,
  ): string =>
    [
      headings.join(delimiter),
      ...Array.from({ length: 10 }, (_, i) =>
        lines.map((line) =>
          [date(2025, i + 1, 14), number(21.5), "Hg", number(line), number(line + 0.01 * i), number(0.012)].join(
            delimiter,
          ),
        ),
      ).flat(),
    ].join("\r\n");
  const two = (value: number): string => String(value).padStart(2, "0");
  const point = (value: number): string => value.toFixed(4);
  const comma = (value: number): string => value.toFixed(4).replace(".", ",");
  const iso = (y: number, m: number, d: number): string => `${y}-${two(m)}-${two(d)}`;
  const dotted = (y: number, m: number, d: number): string => `${two(d)}.${two(m)}.${y}`;
  const german = "Datum;Raumtemperatur (°C);Lampe;Sollwert [nm];Istwert [nm];Messunsicherheit [nm]".split(";");

  const expectTen = (bytes: Uint8Array, ...words: string[]): void => {
    const read = readResults(bytes, options(...words));
    if (read.outcome === "refused") throw new Error(read.reason);
    expect(read.wrongRows).toEqual([]);
    expect(read.checks).toHaveLength(10);
    read.checks.forEach((check, i) => {
      expect(isoDateOfDay(check.day)).toBe(iso(2025, i + 1, 14));
      expect(check.lines.map((line) => line.wavelengthNm)).toEqual(lines);
      for (const line of check.lines) {
        expect(line.errorNm).toBeCloseTo(0.01 * i, 6);
        expect(line.ownUncNm).toBeCloseTo(0.012, 9);
      }
      expect(check.source).toBe("Hg");
      expect(check.temperatureC).toBeCloseTo(21.5, 9);
    });
  };

  it.each([
    ["date,temperatureC,source,lineNm,measuredNm,uncNm", ","],
    ["Date\tRoom temperature (°C)\tLamp\tReference wavelength (nm)\tMeasured (nm)\tStandard uncertainty (nm)", "\t"],
    ["Check date;Temp.;Source;Line / nm;Found / nm;u / nm", ";"],
    ["Date,Température ambiante,Lampe,Raie (nm),Mesuré (nm),Incertitude-type (nm)", ","],
    ["Fecha;Temperatura;Lámpara;Línea (nm);Medido (nm);Incertidumbre típica", ";"],
    ["Data;Temperatura ambiente;Lampada;Riga (nm);Misurato (nm);Incertezza tipo", ";"],
    ["Datum;Kamertemperatuur;Lamp;Golflengte;Gemeten;Onzekerheid", ";"],
    ["Datum;Rumstemperatur;Lampa;Våglängd;Uppmätt;Osäkerhet", ";"],
    ["Data;Temperatura;Lampa;Długość fali;Wartość zmierzona;Niepewność", ";"],
  ])("recognises %s", (headings, delimiter) => {
    expectTen(encode(table(headings.split(delimiter), iso, point, delimiter)));
  });

  it("reads decimal commas, dotted dates, a title, comments, and a byte-order mark", () => {
    const body = table(german, dotted, comma, ";");
    expectTen(encode(`\ufeffPrüfungen des Spektrometers\r\n# ein Kommentar\r\n\r\n${body}`));
  });

  it("reads Latin-1 and UTF-16", () => {
    const body = table(german, dotted, comma, ";");
    expectTen(Uint8Array.from(body, (letter) => letter.charCodeAt(0)));
    const wide = new Uint8Array(2 + 2 * body.length);
    wide.set([0xff, 0xfe]);
    for (let i = 0; i < body.length; i++) {
      wide[2 + 2 * i] = body.charCodeAt(i) & 0xff;
      wide[3 + 2 * i] = body.charCodeAt(i) >> 8;
    }
    expectTen(wide);
  });

  it("reads decimal commas in quotes beside a comma as delimiter", () => {
    const quoted = (value: number): string => `"${comma(value)}"`;
    expectTen(encode(table("date,temperature,lamp,line,measured,u".split(","), iso, quoted, ",")));
  });

  it("takes headings that it does not know by name", () => {
    const body = table(["A", "B", "C", "D", "E", "F"], iso, point, ";");
    expect(readResults(encode(body), options())).toMatchObject({
      outcome: "refused",
      reason: expect.stringContaining("No heading says where to find date, lineNm, measuredNm"),
    });
    expectTen(encode(body), "--columns", "date=A,temperatureC=B,source=C,lineNm=D,measuredNm=E,uncNm=F");
  });

  it("converts units in headings, and halves an expanded uncertainty", () => {
    const headings = ["Date", "Temp (°F)", "Lamp", "Line (Å)", "Measured (Å)", "U (k=2) (pm)"];
    const rows = [headings.join(";"), "2025-01-14;70.7;Hg;5460.74;5460.84;24"];
    const read = readResults(encode(rows.join("\n")), options());
    if (read.outcome === "refused") throw new Error(read.reason);
    const [check] = read.checks;
    expect(check!.temperatureC).toBeCloseTo(21.5, 9);
    expect(check!.lines[0]!.wavelengthNm).toBeCloseTo(546.074, 9);
    expect(check!.lines[0]!.errorNm).toBeCloseTo(0.01, 9);
    expect(check!.lines[0]!.ownUncNm).toBeCloseTo(0.012, 9);
  });

  const dates = (...days: string[]): Uint8Array =>
    encode(`date,line,measured,u\n${days.map((day) => `${day},546.074,546.08,0.01`).join("\n")}\n`);

  it("asks when a date can be read in two ways, and takes the answer", () => {
    const both = dates("03/04/2025", "05/06/2025");
    expect(readResults(both, options())).toMatchObject({
      outcome: "refused",
      reason: expect.stringContaining("--dates dmy"),
    });
    const told = (order: string): string[] => {
      const read = readResults(both, options("--dates", order));
      return read.outcome === "refused" ? [] : read.checks.map((check) => isoDateOfDay(check.day));
    };
    expect(told("dmy")).toEqual(["2025-04-03", "2025-06-05"]);
    expect(told("mdy")).toEqual(["2025-03-04", "2025-05-06"]);
  });

  it("lets any row tell the order for all", () => {
    const days = (bytes: Uint8Array): string[] => {
      const read = readResults(bytes, options());
      return read.outcome === "refused" ? [] : read.checks.map((check) => isoDateOfDay(check.day));
    };
    expect(days(dates("03/04/2025", "25/04/2025"))).toEqual(["2025-04-03", "2025-04-25"]);
    expect(days(dates("03/04/2025", "04/25/2025"))).toEqual(["2025-03-04", "2025-04-25"]);
    expect(days(dates("3 Mar 2025", "14. März 2025", '"April 2, 2025"', "20250521", "2025-06-30T08:15:00Z"))).toEqual([
      "2025-03-03",
      "2025-03-14",
      "2025-04-02",
      "2025-05-21",
      "2025-06-30",
    ]);
    expect(readResults(dates("25/04/2025", "04/25/2025"), options())).toMatchObject({ outcome: "refused" });
  });

  it("names wrong rows with their line, and goes on", () => {
    const rows = [
      "date,line,measured,u",
      "2025-01-14,546.074,546.08,0.01",
      "2025-02-30,546.074,546.08,0.01",
      "2025-02-14,green,546.08,0.01",
      "2025-03-14,546.074,,0.01",
      "2025-04-14,546.074,546.08,0",
      "2025-05-14,546.074,546.08,0.01",
      "2025-06-14,546.074,546.08,0.01",
      "2025-07-14,546.074,546.08,0.01",
    ];
    const read = readResults(encode(rows.join("\n")), options());
    expect(read.outcome).toBe("read");
    expect(read.wrongRows).toEqual([
      { line: 3, reason: '"2025-02-30" is no date.' },
      { line: 4, reason: 'lineNm "green" is no wavelength in nm.' },
      { line: 5, reason: 'measuredNm "" is no result for 546.074 nm.' },
      { line: 6, reason: 'uncNm "0" is no uncertainty above 0.' },
    ]);
  });

  it("keeps repeats of one day apart, and sources that are always measured together in one check", () => {
    const rows = ["date,source,line,measured,u"];
    for (let i = 1; i <= 6; i++) {
      rows.push(`2025-0${i}-14,Hg,546.074,546.08,0.01`, `2025-0${i}-14,Ne,640.225,640.23,0.01`);
    }
    const together = readResults(encode(rows.join("\n")), options());
    expect(together.outcome === "read" && together.checks.map((check) => check.source)).toEqual(
      Array(6).fill("Hg + Ne"),
    );
    const repeats = readResults(dates("2025-01-14", "2025-01-14", "2025-02-14"), options());
    expect(repeats.outcome === "read" && repeats.checks).toHaveLength(3);
  });

  it("asks which instrument when a table holds several", () => {
    const rows = ["instrument,date,line,measured", "A,2025-01-14,546.074,546.08", "B,2025-01-14,546.074,546.09"];
    expect(readResults(encode(rows.join("\n")), options())).toMatchObject({
      outcome: "refused",
      reason: "The table holds 2 instruments (A, B); say which one: --instrument NAME.",
    });
    const one = readResults(encode(rows.join("\n")), options("--instrument", "b"));
    expect(one.outcome === "read" && one.checks[0]!.lines[0]!.errorNm).toBeCloseTo(0.016, 9);
  });

  it("refuses what is no table, with a sentence", () => {
    expect(readResults(encode(""), options())).toMatchObject({ outcome: "refused", reason: "The file is empty." });
    expect(readResults(Uint8Array.from([1, 0, 2, 0]), options())).toMatchObject({ outcome: "refused" });
    expect(readResults(encode("hello\nworld\n"), options())).toMatchObject({ outcome: "refused" });
  });
});
