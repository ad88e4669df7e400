/**
 * What a file's words say: metadata lines, column headings, the axis' kind and unit, full scale and summed scans.
 */
import type { AxisKind, AxisUnit } from "../analysis/types.ts";

/** One `key: value`, `key = value` or two-cell line, comment marks taken off; null when the line is none. */
export function readMetadataLine(text: string): { key: string; value: string } | null {
  const bare = text.replace(/^[\s#%;/"'>*]+/, "").replace(/[\s"';,]+$/, "");
  const match = /^([^:=\t;]{1,80}?)\s*(?:[:=]|\t|;)\s*(.*)$/.exec(bare);
  if (match === null) return null;
  const key = match[1]!.trim();
  if (key === "" || !/\p{L}/u.test(key)) return null;
  return { key, value: match[2]!.trim().replace(/^["']|["']$/g, "") };
}

/** What one heading says about its column. */
export interface HeadingMeaning {
  role: "axis" | "intensity" | "aside" | null;
  kind: AxisKind | null;
  unit: AxisUnit | null;
}

const unitPatterns: { unit: AxisUnit; kind: AxisKind; pattern: RegExp }[] = [
  {
    unit: "cm-1",
    kind: "wavenumber",
    pattern: /cm\s*(?:\^\s*)?\(?[-\u2212\u207b]\s*[1\u00b9]\)?|1\s*\/\s*cm|wave ?number|raman|kayser/i,
  },
  { unit: "Å", kind: "wavelength", pattern: /[\u00c5\u212b]|\bangstr[oö]ms?\b|[([]\s*A\s*[)\]]/i },
  { unit: "µm", kind: "wavelength", pattern: /[\u00b5\u03bc]m\b|\bum\b|\bmicrons?\b|\bmicromet(?:er|re)s?\b/i },
  { unit: "nm", kind: "wavelength", pattern: /(?:^|[^a-z])nm\b|\bnanomet(?:er|re)s?\b/i },
  {
    unit: "px",
    kind: "pixel",
    pattern: /\bpixels?\b|\bpix\b|\bpx\b|\bchannel\b|\bindex\b|\bsample (?:no|num|number)\b/i,
  },
  { unit: "step", kind: "step", pattern: /\bsteps?\b|\bdrive\b|\bcounter\b|\bmotor\b/i },
];

const wavelengthWords = /\bwave(?:s|length|lengths)?\b|\bwl\b|\blambda\b|\u03bb/i;
const intensityWords = /count|intens|flux|signal|irradiance|radiance|emission|power|\badu\b|\by\b|lamp|light|spectrum/i;
const asideWords =
  /\bdark\b|\bref(?:erence)?\b|\berr(?:or)?s?\b|\bunc|\bsigma\b|\bstd\b|\btime\b|\bflag|\bbackground\b|\bblank\b/i;

/** Unit named in a text ("Wavelength (nm)", "cm-1"), or null. */
export function unitIn(text: string): { unit: AxisUnit; kind: AxisKind } | null {
  for (const { unit, kind, pattern } of unitPatterns) if (pattern.test(text)) return { unit, kind };
  return null;
}

export function readHeading(text: string): HeadingMeaning {
  const heading = text.trim();
  const named = unitIn(heading);
  if (named !== null) return { role: "axis", kind: named.kind, unit: named.unit };
  if (wavelengthWords.test(heading)) return { role: "axis", kind: "wavelength", unit: null };
  if (asideWords.test(heading)) return { role: "aside", kind: null, unit: null };
  if (intensityWords.test(heading)) return { role: "intensity", kind: null, unit: null };
  if (/^x$/i.test(heading)) return { role: "axis", kind: null, unit: null };
  return { role: null, kind: null, unit: null };
}

/** Full scale of one scan and scans summed, where the metadata give them. */
export function readDetector(metadata: Record<string, string>): {
  fullScaleCounts: number | null;
  scansSummed: number | null;
} {
  let fullScaleCounts: number | null = null;
  let scansSummed: number | null = null;
  for (const [key, value] of Object.entries(metadata)) {
    const match = /^[^\d]*(\d+(?:\.\d+)?)/.exec(value.replace(/(\d)[ ,](?=\d{3}\b)/g, "$1"));
    const number = match === null ? NaN : Number(match[1]);
    if (!(number > 0)) continue;
    if (/full.?scale|saturation.?level|detector.?ceiling|max(?:imum)?.?counts/i.test(key)) fullScaleCounts = number;
    else if (/\bbit.?depth|\badc.?bits|\bbits\b/i.test(key) && number <= 32 && fullScaleCounts === null) {
      let levels = 1;
      for (let bit = 0; bit < number; bit += 1) levels *= 2;
      fullScaleCounts = levels - 1;
    } else if (
      /(?:scans|spectra|frames|exposures).*(?:sum|added)|(?:sum|added).*(?:scans|spectra|frames)|accumulation|co-?add/i.test(
        key,
      )
    ) {
      scansSummed = Math.max(1, Math.round(number));
    }
  }
  return { fullScaleCounts, scansSummed };
}
