/**
 * What a file's words say: metadata lines, column headings, the axis' kind and unit, full scale and summed scans.
 *
 * The words are those in common use; where none is known the numbers decide (`choose-columns.ts`).
 */
import type { AxisKind, AxisUnit } from "../analysis/types.ts";
import type { Delimiter } from "./scan-row.ts";

const mostKeyLetters = 80;

/**
 * One `key: value`, `key = value` or two-cell line, comment marks and quotes taken off; null when the line is none.
 *
 * @param delimiter  sign that parts the file's columns: it parts key and value too
 */
export function readMetadataLine(text: string, delimiter: Delimiter = "\t"): { key: string; value: string } | null {
  const bare = text.trim().replace(/^[#%;/"'>*@$!\s]+/, "");
  if (!/\p{L}/u.test(bare)) return null;
  let at = -1;
  for (let i = 0; i < bare.length && i <= mostKeyLetters; i += 1) {
    const sign = bare[i]!;
    const parts =
      sign === "=" ||
      sign === "\t" ||
      sign === ";" ||
      sign === delimiter.replace(" ", "\t") ||
      // The colon of a time or a path parts nothing.
      (sign === ":" && !(isDigit(bare[i - 1]) && isDigit(bare[i + 1])) && bare[i + 1] !== "\\");
    if (parts) {
      at = i;
      break;
    }
  }
  if (at < 0) at = bare.slice(0, mostKeyLetters).indexOf("  ");
  if (at < 0) {
    // Words and one number with its unit: `Integration time 100 ms`.
    const match = /^(\p{L}[\p{L} _()/-]{0,60}) ([-+]?\d[\d.,]{0,20}(?: ?[^\d\s]{1,10})?)$/u.exec(bare.slice(0, 100));
    return match === null ? null : { key: match[1]!.trim(), value: match[2]! };
  }
  if (at === 0) return null;
  const key = stripQuotes(bare.slice(0, at));
  if (key === "" || !/\p{L}/u.test(key)) return null;
  const value = stripQuotes(bare.slice(at + 1).replace(/^[\s:=,;"']+/, ""));
  return { key, value };
}

function isDigit(sign: string | undefined): boolean {
  return sign !== undefined && sign >= "0" && sign <= "9";
}

/** Blanks, quotes and closing delimiters taken off both ends. */
function stripQuotes(text: string): string {
  let from = 0;
  let to = text.length;
  while (from < to && /[\s"']/.test(text[from]!)) from += 1;
  while (to > from && /[\s"';,]/.test(text[to - 1]!)) to -= 1;
  return text.slice(from, to);
}

/** What one heading says about its column. */
export interface HeadingMeaning {
  role: "axis" | "intensity" | "aside" | null;
  kind: AxisKind | null;
  unit: AxisUnit | null;
  /** Among intensities: how much it sounds like the signal itself. */
  rank: number;
}

const unitPatterns: { unit: AxisUnit; kind: AxisKind; pattern: RegExp }[] = [
  {
    unit: "cm-1",
    kind: "wavenumber",
    pattern:
      /cm\s*(?:\^|\*\*)?\s*[({]?\s*[-\u2212\u207b\u2013]\s*[1\u00b9]\s*[)}]?|(?:\b1\s*|[([]\s*|^\s*)\/\s*cm\b|\bper ?cm\b|wave ?numbers?\b|\braman ?shift|\bkaysers?\b/i,
  },
  { unit: "eV", kind: "wavelength", pattern: /(?:^|[^a-z])ev\b|\belectron ?volts?\b|\bphoton energy\b/i },
  { unit: "Å", kind: "wavelength", pattern: /[\u00c5\u212b]|[([]\s*A\s*[)\]]|[Ww]ave\w*[\s,_/]+A\b/ },
  { unit: "Å", kind: "wavelength", pattern: /\b[aå]ngstr[oö]e?ms?\b/i },
  { unit: "µm", kind: "wavelength", pattern: /[\u00b5\u03bc]m\b|\bum\b|\bmicrons?\b|\bmicromet(?:er|re)s?\b/i },
  { unit: "nm", kind: "wavelength", pattern: /(?:^|[^a-z])nm\b|\bnanomet(?:er|re)s?\b/i },
  {
    unit: "px",
    kind: "pixel",
    pattern:
      /\bpixels?\b|\bpix\b|\bpx\b|\bindex\b|\bsample (?:no|num|number)\b|^\s*channels?(?: (?:no|num|number))?\.?\s*$/i,
  },
  {
    unit: "step",
    kind: "step",
    pattern:
      /\bsteps?\b|\bdrive\b|^\s*counter\b|\bmotor\b|\bdial\b|\bencoder\b|\bdrum\b|\bstepper\b|\bgrating (?:position|pos)\b/i,
  },
];

const wavelengthWords =
  /\bwave(?:s|length|lengths)?\b|\bwellenl\u00e4nge\b|\blongueur d.onde\b|\bwl\b|\blambda\b|\u03bb/i;
const photometricWords = /absorb|\babs\b|transmi|%\s*t\b|reflect/i;
const signalWords =
  /\bsample\b|\bsignal\b|\blamp\b|\bsource\b|\bnet\b|correct|subtract|\bminus\b|\bless\b|irradiance|radiance|emission/i;
const intensityWords =
  /count|intens|flux|power|\badu\b|\by\b|light|spectr|\bvolts?\b|\bcurrent\b|\braw\b|\bscope\b|amplitude|channel|\bch ?\d|\bscan ?\d|repeat|\bread(?:ing)?s?\b/i;
const correctedWords = /correct|subtract|\bminus\b|\bless\b|\bnet\b/i;
const asideWords =
  /\bdark|\bref(?:erence)?\b|\berr(?:or)?s?\b|\bunc|\bsigma\b|\bstd|\btime\b|\bdate\b|\bflags?\b|\bbackgr|\bbkg\b|\bblank\b|\bbaseline\b|\btemp(?:erature)?\b|\bnoise\b|\bweights?\b|\bquality\b/i;

/** Unit named in a text ("Wavelength (nm)", "cm-1"), or null. */
export function unitIn(text: string): { unit: AxisUnit; kind: AxisKind } | null {
  for (const { unit, kind, pattern } of unitPatterns) if (pattern.test(text)) return { unit, kind };
  return null;
}

/** Role, kind and unit of a column from its heading. */
export function readHeading(text: string): HeadingMeaning {
  const heading = text.trim();
  // Intensities are often given per nm or per pixel: that names no axis.
  const isPerUnit =
    /counts?\s*\/|\/\s*(?:nm|px|pixel)|per (?:nm|pixel)/i.test(heading) && !wavelengthWords.test(heading);
  const named = isPerUnit ? null : unitIn(heading);
  if (named !== null) return { role: "axis", kind: named.kind, unit: named.unit, rank: 0 };
  if (wavelengthWords.test(heading)) return { role: "axis", kind: "wavelength", unit: null, rank: 0 };
  if (asideWords.test(heading) && !correctedWords.test(heading))
    return { role: "aside", kind: null, unit: null, rank: 0 };
  const rank = photometricWords.test(heading)
    ? 4
    : signalWords.test(heading)
      ? 3
      : intensityWords.test(heading)
        ? 2
        : 0;
  if (rank > 0) return { role: "intensity", kind: null, unit: null, rank };
  if (/^x$/i.test(heading)) return { role: "axis", kind: null, unit: null, rank: 0 };
  return { role: null, kind: null, unit: null, rank: 1 };
}

/** True where a heading says that the column is a share of light let through or taken away: such a signal may point down by nature. */
export function isPhotometric(heading: string): boolean {
  return photometricWords.test(heading);
}

const scanWords = /\bscans?\b|\bspectra\b|\bframes?\b|\bexposures?\b|\bsweeps?\b/i;
const summedWords = /\bsum(?:med)?\b|\badded\b|accumulat|co-?add|\bsummation\b/i;
const averagedWords = /averag|\bavg\b|\bmean\b/i;

/** Full scale of one scan and scans summed, where the metadata give them. Averaged scans are not summed ones. */
export function readDetector(metadata: Record<string, string>): {
  fullScaleCounts: number | null;
  scansSummed: number | null;
} {
  let fullScaleCounts: number | null = null;
  let bits: number | null = null;
  let scansSummed: number | null = null;
  let plainScans: number | null = null;
  let isSummed = false;
  for (const [key, value] of Object.entries(metadata)) {
    const number = numberIn(value);
    const scans = scanWords.test(key) || scanWords.test(value);
    // "Scan mode: sum" speaks of a plain number of scans beside it.
    if (scans && summedWords.test(`${key} ${value}`) && !averagedWords.test(`${key} ${value}`)) isSummed = true;
    if (!(number > 0)) continue;
    if (
      /full.?scale|saturation|detector.?(?:ceiling|max)|max(?:imum)?.?(?:counts|adc|level)|adc.?(?:max|range)/i.test(
        key,
      )
    ) {
      if (!/^\s*(?:no|yes|true|false)/i.test(value)) fullScaleCounts = number > 1 ? number : fullScaleCounts;
    } else if (/\bbit|\badc\b|a\/d|digiti[sz]/i.test(key) || /\d\s*-?\s*bits?\b/i.test(value)) {
      const said = /(\d+)\s*-?\s*bits?\b/i.exec(value);
      const width = said === null ? number : Number(said[1]);
      if (width >= 4 && width <= 32 && width === Math.floor(width)) bits = width;
    } else if (averagedWords.test(key) || averagedWords.test(value)) continue;
    else if (summedWords.test(key) || (scans && summedWords.test(value))) scansSummed = Math.max(1, Math.round(number));
    else if (scanWords.test(key) && !/mode|type|time|rate|speed|range|name|date|interval|id\b/i.test(key)) {
      plainScans = Math.max(1, Math.round(number));
    }
  }
  if (fullScaleCounts === null && bits !== null) {
    let levels = 1;
    for (let bit = 0; bit < bits; bit += 1) levels *= 2;
    fullScaleCounts = levels - 1;
  }
  return { fullScaleCounts, scansSummed: scansSummed ?? (isSummed ? plainScans : null) };
}

/** The first number in a value, thousands grouped or not; NaN when there is none. */
function numberIn(value: string): number {
  const match = /^[^\d]{0,40}(\d+(?:\.\d+)?)/.exec(value.slice(0, 200).replace(/(\d)[ ,'](?=\d{3}\b)/g, "$1"));
  return match === null ? NaN : Number(match[1]);
}
