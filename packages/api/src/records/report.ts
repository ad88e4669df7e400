/** The report of a check as PDF: every line with its U, the rule, the verdict, the signatures and what it was made from. */
import { roundResult, type LineResult } from "@wavekeep/core";
import {
  elementOf,
  kindWords,
  listText,
  narrowSpace,
  percentText,
  toleranceText,
  verdictText,
  withSign,
  worstText,
} from "../checks/words.ts";
import { resultOf } from "../checks/summarise.ts";
import { dayText, dateIn, momentText } from "../instruments/dates.ts";
import { PdfSheet, type TableRow } from "./pdf-sheet.ts";
import type { ReportFacts } from "./report-facts.ts";

/** @param keyFingerprint SHA-256 of the public key that signs heads of the trail */
export async function renderReport(facts: ReportFacts, keyFingerprint: string): Promise<Buffer> {
  const title = `${facts.number ?? "Draft"}: ${facts.instrument.name}, check ${facts.check.number}`;
  const sheet = new PdfSheet({ title, author: facts.lab.name, createdAt: facts.madeAt });
  head(sheet, facts);
  circumstances(sheet, facts);
  lines(sheet, facts);
  conduct(sheet, facts);
  capturesTable(sheet, facts);
  signaturesTable(sheet, facts, keyFingerprint);
  return sheet.finish({
    left: `${facts.lab.name} · ${facts.check.number}, revision ${facts.revision} · ${facts.contentSha256 === null ? "not signed" : `record ${facts.contentSha256.slice(0, 16)}`}`,
    marks: marksOf(facts),
  });
}

/** What must stand on every page. */
function marksOf(facts: ReportFacts): string[] {
  const marks: string[] = [];
  if (facts.number === null) marks.push("DRAFT: not approved");
  if (facts.lab.isDemo) marks.push("DEMO: invented data of a demo lab");
  if (facts.signatures.some((signature) => signature.selfApproval))
    marks.push("SELF-APPROVED: the approver contributed to this check");
  return [marks.join("  ·  ")].filter((mark) => mark !== "");
}

function head(sheet: PdfSheet, facts: ReportFacts): void {
  const result = resultOf(facts.analysis);
  const { zone } = facts.lab;
  sheet.paragraph(`${facts.lab.name} · Wavelength check`, { grey: true }, { after: 2 });
  sheet.paragraph(
    `${facts.instrument.name}: ${verdictText(result.verdict, result.nearLimit)}`,
    { size: 17 },
    { after: 2 },
  );
  const worst = worstText(result);
  sheet.paragraph(
    worst === null
      ? (facts.analysis.reason ?? "No line was judged: the check fits an axis.")
      : `The worst of ${result.judgedCount} judged lines, ${worst}.`,
    { size: 10.5 },
    { after: 3 },
  );
  for (const reason of facts.analysis.verdict?.reasons ?? []) sheet.paragraph(reason, {}, { after: 2 });
  sheet.facts([
    ["Report", facts.number ?? "draft"],
    [
      "Check",
      `${facts.check.number}, revision ${facts.revision}, ${facts.check.condition === "as-left" ? "as left" : "as found"}`,
    ],
    ["Measured", facts.measuredAt === null ? "no capture" : momentText(zone, facts.measuredAt)],
    ["Printed", momentText(zone, facts.madeAt)],
    ["With every line", everyLineText(result.withEveryLine)],
    [
      "Left out",
      result.leftOutCount === 0 ? "nothing" : `${result.leftOutCount} of ${result.lineCount} lines, named below`,
    ],
  ]);
}

const everyLineText = (summary: ReturnType<typeof resultOf>["withEveryLine"]): string =>
  summary === null
    ? "not judged"
    : `${verdictText(summary.verdict, summary.nearLimit)}${summary.toleranceUsed === null ? "" : `, ${percentText(summary.toleranceUsed)} used`}`;

function circumstances(sheet: PdfSheet, facts: ReportFacts): void {
  const { instrument, configuration, inputs, analysis, lab } = facts;
  const { setup } = analysis;
  sheet.section("Instrument and conditions");
  sheet.facts([
    ["Instrument", `${instrument.name}, ${kindWords[instrument.kind as keyof typeof kindWords]}`],
    [
      "Maker",
      [instrument.maker, instrument.model, instrument.serial].filter((text) => text !== "").join(", ") || "not stated",
    ],
    ["Place", instrument.place || "not stated"],
    ["Owner", facts.ownerName],
    [
      "Range",
      `${configuration.rangeFirstNm} to ${configuration.rangeLastNm}${narrowSpace}nm${configuration.name === null ? "" : `, ${configuration.name}`}`,
    ],
    [
      "Axis in force",
      facts.axis === null
        ? setup.mode.kind === "earlier-axis"
          ? "the instrument's own"
          : setup.mode.kind === "range"
            ? "none: lines named by a range"
            : "none: lines named by the lamp's elements alone"
        : `no. ${facts.axis.number}, since ${dayText(dateIn(lab.zone, facts.axis.inForceFrom))}`,
    ],
    ["Room", roomText(facts)],
    [
      "Lamp on for",
      inputs.minutesSinceSwitchOn === null
        ? "not stated"
        : `${inputs.minutesSinceSwitchOn} min (procedure: ${facts.procedure.warmUpMinutes} min)`,
    ],
    ["Procedure", `${facts.procedure.code}, version ${facts.procedure.version}: ${facts.procedure.title}`],
    [
      "Decision rule",
      setup.decisionRule.kind === "simple"
        ? "simple acceptance, w = 0"
        : `guarded acceptance, w = ${setup.decisionRule.r === 1 ? "" : `${setup.decisionRule.r} `}U`,
    ],
    ["Warning limit", `${percentText(setup.warningShare)} of the tolerance`],
    ["Wavelengths", meaningText(setup.axisMeaning)],
    ["Line list", `${facts.lineListVersion}; measuring core ${analysis.coreVersion}`],
    ["Set-up", reproducibilityText(facts)],
  ]);
  sheet.paragraph(
    `Tolerance, version ${facts.tolerance.version}, in force since ${dayText(dateIn(lab.zone, facts.tolerance.inForceFrom))}: ${segmentsText(facts.tolerance.segments)}.`,
    {},
    { after: 2 },
  );
  for (const change of facts.toleranceChanges) {
    sheet.paragraph(
      `Tolerance changed on ${dayText(dateIn(lab.zone, change.inForceFrom))}, version ${change.version}: ${segmentsText(change.segments)}. Reason: ${change.reason}`,
      { size: 8 },
      { after: 2 },
    );
  }
  if (analysis.notIncluded.length > 0)
    sheet.paragraph(`U does not hold: ${analysis.notIncluded.join(", ")}.`, { size: 8 }, { after: 2 });
  sheet.table(
    [
      { title: "Source", share: 0.34 },
      { title: "Maker, serial", share: 0.24 },
      { title: "Review due", share: 0.16 },
      { title: "Certificate, SHA-256", share: 0.26 },
    ],
    facts.sources.map((source) => ({
      cells: [
        `${source.label}, ${source.name}`,
        [source.maker, source.serial].filter((text) => text !== "").join(", ") || "not stated",
        source.reviewDueOn === null ? "none" : `${dayText(source.reviewDueOn)}${source.pastReview ? ", past" : ""}`,
        source.certificateSha256 ?? "none stored",
      ],
    })),
  );
}

function roomText({ inputs, instrument, lab }: ReportFacts): string {
  const altitudeM = instrument.altitudeM ?? lab.altitudeM;
  return [
    inputs.temperatureC === null ? "temperature not stated" : `${inputs.temperatureC}${narrowSpace}°C`,
    inputs.pressureHpa !== null
      ? `${inputs.pressureHpa}${narrowSpace}hPa`
      : altitudeM === null
        ? "pressure not stated"
        : `pressure from ${altitudeM}${narrowSpace}m`,
    inputs.relativeHumidity === null ? null : `${percentText(inputs.relativeHumidity)} humidity`,
  ]
    .filter((part) => part !== null)
    .join(", ");
}

const meaningText = (meaning: string): string =>
  ({ vacuum: "vacuum", "standard-air": "standard air (15 °C, 101 325 Pa, dry)", "room-air": "air of the room" })[
    meaning
  ] ?? meaning;

function reproducibilityText({ analysis }: ReportFacts): string {
  const stated = analysis.setup.setupReproducibility;
  if (stated === null) return "not included";
  const basis = { history: "from its own checks", stated: "stated by the lab", assumed: "assumed, common practice" }[
    stated.basis
  ];
  return `${Number(stated.value.toPrecision(2))}${narrowSpace}${stated.unit}, ${basis}`;
}

const segmentsText = (segments: ReportFacts["tolerance"]["segments"]): string =>
  listText(
    segments.map(
      (segment) => `${toleranceText(segment.toleranceNm)} from ${segment.fromNm} to ${segment.toNm}${narrowSpace}nm`,
    ),
  );

function lines(sheet: PdfSheet, facts: ReportFacts): void {
  const { analysis } = facts;
  sheet.section("Lines");
  sheet.paragraph(
    `Error = indicated − reference, nm. U is expanded for 95.45${narrowSpace}% with the k beside it. Position and FWHM in ${analysis.axisUnit}. Named ${analysis.setup.mode.kind === "range" ? "from a range" : "from the earlier axis"}; chance of an accidental agreement ${analysis.confidence.chanceProbability.toExponential(0)}.`,
    { size: 8, grey: true },
  );
  const named = analysis.lines
    .filter((line) => line.wavelengthNm !== null)
    .sort((a, b) => a.wavelengthNm! - b.wavelengthNm!);
  sheet.table(
    [
      { title: "Reference, nm", share: 0.14, align: "right" },
      { title: "Species", share: 0.11 },
      { title: "Position", share: 0.1, align: "right" },
      { title: "Error", share: 0.1, align: "right" },
      { title: "U", share: 0.09, align: "right" },
      { title: "k", share: 0.06, align: "right" },
      { title: "FWHM", share: 0.08, align: "right" },
      { title: "Tolerance", share: 0.1, align: "right" },
      { title: "Used", share: 0.07, align: "right" },
      { title: "Verdict", share: 0.15 },
    ],
    named.map((line) => lineRow(line, analysis.verdict?.worstLine === analysis.lines.indexOf(line))),
  );
  if (analysis.missingLinesNm.length > 0) {
    sheet.paragraph(
      `Expected and not found: ${analysis.missingLinesNm.map((nm) => nm.toFixed(3)).join(", ")}${narrowSpace}nm.`,
      { size: 8 },
    );
  }
  for (const warning of analysis.warnings) sheet.paragraph(warning.text, { size: 8 }, { after: 2 });
  if (analysis.dispersion !== null) {
    const { degree, coefficients, rmsNm } = analysis.dispersion;
    sheet.paragraph(
      `Axis fitted by this check: degree ${degree}, RMS ${rmsNm.toPrecision(2)}${narrowSpace}nm; nm in ascending powers of the pixel: ${coefficients.map((c) => Number(c.toPrecision(12))).join(", ")}.`,
      { size: 8 },
    );
  }
}

const statusWords: Record<string, string> = {
  "left-out": "left out",
  refused: "refused",
  "not-judged": "not judged",
  unnamed: "not named",
};

function lineRow(line: LineResult, worst: boolean): TableRow {
  const rounded =
    line.errorNm === null || line.errorExpandedUncNm === null
      ? null
      : roundResult(line.errorNm, line.errorExpandedUncNm);
  const judged = line.status === "judged";
  const species = elementOf(line.species ?? line.element ?? "");
  const note =
    line.leftOut !== null
      ? `Left out, ${line.leftOut.reason.replaceAll("-", " ")}: ${line.leftOut.note}`
      : judged
        ? undefined
        : (line.reason ?? undefined);
  return {
    grey: !judged,
    note,
    cells: [
      line.wavelengthNm!.toFixed(4),
      `${species}${line.blendOfNm.length > 1 ? " blend" : ""}${line.required ? ", required" : ""}`,
      line.position.toFixed(2),
      rounded === null ? "" : withSign(rounded.value),
      rounded?.expandedUnc ?? "",
      line.coverageFactor === null ? "" : line.coverageFactor.toFixed(2),
      line.fwhm.toFixed(2),
      line.toleranceNm === null ? "" : toleranceText(line.toleranceNm).replace(/[^\d.].*$/, ""),
      line.toleranceUsed === null ? "" : percentText(line.toleranceUsed),
      {
        text: judged ? verdictText(line.verdict, line.nearLimit) : (statusWords[line.status] ?? line.status),
        strong: worst,
      },
    ],
  };
}

/** Attempts, changes of settings, comments: what the approver has seen. */
function conduct(sheet: PdfSheet, facts: ReportFacts): void {
  sheet.section("How it was made");
  for (const attempt of facts.attempts) {
    const count = facts.receipts.filter((receipt) => receipt.attempt === attempt.number).length;
    const why = facts.attempts.find((next) => next.number === attempt.number + 1)?.reason;
    sheet.paragraph(
      `Attempt ${attempt.number}: ${count} ${count === 1 ? "capture" : "captures"}${why === undefined ? "" : `; abandoned: ${why}`}`,
      {},
      { after: 1 },
    );
  }
  for (const change of facts.changes)
    sheet.paragraph(
      `Analysis ${change.version}, attempt ${change.attempt}: ${change.changed}`,
      { size: 8 },
      { after: 1 },
    );
  for (const comment of facts.comments) {
    sheet.paragraph(
      `${comment.kind.replaceAll("-", " ")}, ${comment.byName}, ${momentText(facts.lab.zone, comment.at)}: ${comment.comment}`,
      { size: 8 },
      { after: 1 },
    );
  }
  if (facts.inputs.note !== "") sheet.paragraph(`Note: ${facts.inputs.note}`, { size: 8 });
}

function capturesTable(sheet: PdfSheet, facts: ReportFacts): void {
  sheet.section("Captures, as received");
  sheet.table(
    [
      { title: "File", share: 0.28 },
      { title: "Attempt", share: 0.09 },
      { title: "Part", share: 0.08 },
      { title: "Received", share: 0.21 },
      { title: "SHA-256", share: 0.34 },
    ],
    facts.receipts.map((receipt) => ({
      cells: [
        receipt.fileName,
        String(receipt.attempt),
        receipt.part,
        momentText(facts.lab.zone, new Date(receipt.receivedAt)),
        receipt.sha256,
      ],
      note:
        [
          receipt.refusal,
          receipt.seenBefore === null
            ? null
            : `The same bytes came before, in ${receipt.seenBefore.checkNumber} as ${receipt.seenBefore.fileName}.`,
        ]
          .filter((text) => text !== null)
          .join(" ") || undefined,
    })),
  );
  sheet.paragraph(`SHA-256 of the analysis: ${facts.analysisSha256}`, { size: 8 });
}

function signaturesTable(sheet: PdfSheet, facts: ReportFacts, keyFingerprint: string): void {
  sheet.section("Signatures and record");
  sheet.table(
    [
      { title: "Name", share: 0.26 },
      { title: "Role", share: 0.16 },
      { title: "Meaning", share: 0.22 },
      { title: "Signed", share: 0.24 },
      { title: "Revision", share: 0.12 },
    ],
    facts.signatures.map((signature) => ({
      cells: [
        { text: signature.printedName, strong: true },
        signature.role,
        `${signature.meaning}${signature.selfApproval ? " (self-approval)" : ""}`,
        `${momentText(signature.zone, signature.signedAt)} (${signature.signedAt.toISOString()})`,
        String(signature.revision),
      ],
      note: `Over SHA-256 ${signature.contentSha256}; by ${signature.proof === "password" ? "password" : "the seeding of a demo lab"}`,
    })),
  );
  if (facts.head !== null) {
    sheet.paragraph(
      `Head of the trail when this report was made: entry ${facts.head.number}, ${facts.head.hash}`,
      { size: 8 },
      { after: 1 },
    );
    sheet.paragraph(`Heads are signed by the key ${keyFingerprint}`, { size: 8 });
  }
}
