/** Lines named, and named wrongly, on the project's own simulator: from lists of found lines, and from whole captures. */
import {
  runIdentificationStudy,
  type IdentificationStudy,
  type StudyQuestion,
} from "../../tests/external/support/identification-study.ts";
import { share } from "../../tests/validation/study.ts";
import { leastIdentified, modes, words } from "./identification.ts";
import { table, type Study } from "./study.ts";

const sources = ["lines", "captures"] as const;
const described: Record<StudyQuestion["source"], string> = {
  lines: "found lines without a spectrum",
  captures: "whole captures",
};

/** Captures: searching with the elements alone takes many times as long, so there are fewer of those. */
function capturesOf(mode: StudyQuestion["mode"], isQuick: boolean): number {
  if (isQuick) return mode === "none" ? 10 : 40;
  return mode === "none" ? 400 : 3000;
}

const firstSeeds: Record<StudyQuestion["mode"], number> = {
  "earlier-axis": 2_100_000,
  range: 2_200_000,
  none: 2_300_000,
};

export const ownSimulator: Study<StudyQuestion, IdentificationStudy> = {
  name: "own-simulator",
  parts: ({ isQuick }) =>
    modes.flatMap((mode) =>
      sources.flatMap((source) => {
        const whole = capturesOf(mode, isQuick);
        const chunk = mode === "none" ? 100 : 500;
        return Array.from({ length: Math.ceil(whole / chunk) }, (_, k) => ({
          mode,
          source,
          captures: Math.min(chunk, whole - k * chunk),
          seed: firstSeeds[mode] + k * chunk,
        }));
      }),
    ),
  // Times change from run to run and are no part of this.
  run: (question) => ({ ...runIdentificationStudy(question), medianMs: 0 }),
  write: (results) => {
    const short: string[] = [];
    const lists: string[] = [];
    const rows = sources.flatMap((source) =>
      modes.flatMap((mode) => {
        const of = results.filter(({ part }) => part.mode === mode && part.source === source);
        const sum = (key: "captures" | "identified" | "ambiguous" | "withSixLines" | "identifiedOfThose" | "named") =>
          of.reduce((total, { result }) => total + result[key], 0);
        const wrong = of.flatMap(({ result }) => result.wrongLines);
        const label = `${described[source]}, ${words[mode]}`;
        const least = leastIdentified[mode];
        if (sum("identified") < (least / 100) * sum("captures"))
          short.push(
            `own simulator, ${label}: ${share(sum("identified"), sum("captures"))} identified, ${least} % asked for`,
          );
        if (sum("identifiedOfThose") < 0.97 * sum("withSixLines"))
          short.push(
            `own simulator, ${label}: ${share(sum("identifiedOfThose"), sum("withSixLines"))} of captures with six lines of one element identified, 97 % asked for`,
          );
        if (wrong.length > 0) {
          short.push(`own simulator, ${label}: ${wrong.length} wrong lines of ${sum("named")}, none asked for`);
          lists.push(`Wrong lines, ${label}:\n\n${wrong.map((one) => `- ${one}`).join("\n")}`);
        }
        return [
          [
            described[source],
            words[mode],
            String(sum("captures")),
            share(sum("identified"), sum("captures")),
            share(sum("identifiedOfThose"), sum("withSixLines")),
            String(sum("ambiguous")),
            `${wrong.length} of ${sum("named")}`,
          ],
        ];
      }),
    );
    return {
      markdown: `## Lines named, the project's own simulator

Lists of found lines (centres with noise, missing and stray lines, blends, intensities scattered; nothing but the naming is tried), and whole captures of the project's own simulator.
Asked for: 99 % (earlier axis), 97 % (range), 95 % (elements alone) identified, and 97 % of captures with six or more lines of one element; *ambiguous* counts as not identified; no
wrong line in 3,000 captures a mode (the search with the elements alone takes too long for so many here: the row says how many).

${table(["from", "mode", "captures", "identified", "of those with six lines of one element", "ambiguous", "wrong lines"], rows)}
${lists.length > 0 ? `\n${lists.join("\n\n")}\n` : ""}`,
      drawings: {},
      short,
    };
  },
};
