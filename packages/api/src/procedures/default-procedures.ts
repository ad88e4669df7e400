/**
 * The procedures a new lab begins with: one for each kind of instrument, version 1.
 *
 * Warm-up, repeats and the least number of lines are common practice, no source; a lab writes its own where it knows better.
 */
import type { InstrumentKind } from "../contract/common.ts";

export interface DefaultProcedure {
  code: string;
  title: string;
  instrumentKind: InstrumentKind;
  warmUpMinutes: number;
  repeats: number;
  /** Elements a source must have to be used under it. */
  elements: string[];
  /** nm, standard air: judged in every check whose source has them. */
  requiredLinesNm: number[];
  /** Judged lines that each tolerance segment needs. */
  leastLinesPerSegment: number;
  steps: string[];
  acceptance: string;
}

const lampElements = ["Hg", "Ar", "Ne", "Kr", "Xe", "He", "Cd", "Zn", "H", "D"];
const acceptance =
  "Every judged line within its tolerance by the decision rule of the configuration; the check takes its worst line's verdict, and is inconclusive when a required line is missing or a segment holds too few lines.";
const commonSteps = [
  "Read the cautions of the source, then switch it on and note the time.",
  "Note the temperature of the room, and the pressure where a barometer is at hand.",
];

export const defaultProcedures: readonly DefaultProcedure[] = [
  {
    code: "A-1",
    title: "Wavelength of an array spectrometer by emission lines",
    instrumentKind: "array",
    warmUpMinutes: 15,
    repeats: 3,
    elements: lampElements,
    requiredLinesNm: [],
    leastLinesPerSegment: 2,
    steps: [
      ...commonSteps,
      "Change nothing on the instrument: the first captures show it as it was found.",
      "Choose an exposure at which the strongest lines that matter stay below the ceiling of the detector; take a second, longer one for weak lines.",
      "Record three captures, and one with the light blocked.",
    ],
    acceptance,
  },
  {
    code: "M-1",
    title: "Wavelength of a scanning monochromator by emission lines",
    instrumentKind: "scanning",
    warmUpMinutes: 15,
    repeats: 2,
    elements: lampElements,
    requiredLinesNm: [],
    leastLinesPerSegment: 2,
    steps: [
      ...commonSteps,
      "Approach every line from the same side, so that the play of the drive does not enter.",
      "Set the slits and the step of daily work; the step at most a third of the width of a line.",
      "Scan the range twice.",
    ],
    acceptance,
  },
  {
    code: "U-1",
    title: "Wavelength of a spectrophotometer by its deuterium lines or mercury",
    instrumentKind: "spectrophotometer",
    warmUpMinutes: 30,
    repeats: 3,
    elements: ["D", "Hg"],
    // Found by their wavelengths in the line library (deuterium 486.00 and 656.10 nm).
    requiredLinesNm: [486.0, 656.1],
    leastLinesPerSegment: 2,
    steps: [
      ...commonSteps,
      "Use the energy mode of the instrument with the cell compartment empty, or put a mercury lamp at its entrance.",
      "Scan across each line at the smallest bandwidth, in steps of at most a fifth of it.",
      "Repeat three times without touching the instrument.",
    ],
    acceptance,
  },
  {
    code: "R-1",
    title: "Wavelength axis of a Raman bench by neon or argon",
    instrumentKind: "raman",
    warmUpMinutes: 10,
    repeats: 3,
    elements: ["Ne", "Ar"],
    requiredLinesNm: [],
    leastLinesPerSegment: 2,
    steps: [
      ...commonSteps,
      "Close the shutter of the laser.",
      "Put the lamp where the sample stands, so that its light takes the path of the signal.",
      "Record three captures at an exposure that leaves the strongest lines below the ceiling of the detector.",
    ],
    acceptance,
  },
];
