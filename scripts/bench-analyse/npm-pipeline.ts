/**
 * Detect, fit, name and calibrate with general-purpose packages, as a capable person would put them together in a day: csv-parse reads,
 * ml-gsd finds the peaks, ml-levenberg-marquardt fits a Gaussian on a straight baseline to each, candidate axes on a grid are scored
 * against the published lines, ml-regression-polynomial fits a cubic with outliers dropped. It stands here to be compared with.
 *
 * `weights` of ml-levenberg-marquardt 5.1.0 does not weight by 1/sigma squared: the fits are weighted by dividing data and model by sigma.
 */
import { parse } from "csv-parse/sync";
import { gsd } from "ml-gsd";
import { levenbergMarquardt } from "ml-levenberg-marquardt";
import { PolynomialRegression } from "ml-regression-polynomial";

export interface PipelineLine {
  position: number;
  height: number;
  fwhm: number;
  wavelengthNm: number | null;
  isUsed: boolean;
}
export interface PipelineResult {
  lines: PipelineLine[];
  /** nm in ascending powers of the position; null: no axis found. */
  coefficients: number[] | null;
}
export type PipelineHint =
  { kind: "range"; firstNm: number; lastNm: number } | { kind: "earlier-axis"; coefficients: readonly number[] };

export function readTable(text: string): { x: Float64Array; y: Float64Array } {
  const rows: string[] = text.split(/\r?\n/);
  // The first line of two numbers decides where the data begin and what parts them.
  const first = rows.findIndex((row) => /^\s*[-+\d.,eE]+([\t; ,]+[-+\d.,eE]+)?\s*$/.test(row) && /\d/.test(row));
  const sample = rows[first] ?? "";
  const delimiter = sample.includes("\t") ? "\t" : sample.includes(";") ? ";" : sample.includes(" ") ? " " : ",";
  const hasDecimalComma = delimiter !== "," && /\d,\d/.test(sample);
  const cells: string[][] = parse(rows.slice(first).join("\n"), {
    delimiter,
    relax_column_count: true,
    skip_empty_lines: true,
  });
  const value = (cell: string): number => Number(hasDecimalComma ? cell.replace(",", ".") : cell);
  const hasAxis = cells[0]!.length > 1;
  return {
    x: Float64Array.from(cells, (row, i) => (hasAxis ? value(row[0]!) : i)),
    y: Float64Array.from(cells, (row) => value(row[hasAxis ? 1 : 0]!)),
  };
}

const medianOf = (values: ArrayLike<number>): number =>
  Float64Array.from(values).sort()[values.length >> 1] ?? Number.NaN;

function fitLines(x: Float64Array, y: Float64Array, ceiling: number): PipelineLine[] {
  const steps = Float64Array.from({ length: y.length - 1 }, (_, i) => Math.abs(y[i + 1]! - y[i]!));
  const noise = Math.max((1.4826 * medianOf(steps)) / Math.SQRT2, 1e-9);
  const base = medianOf(y);
  const net = y.map((value) => value - base);
  const spacing = (x[x.length - 1]! - x[0]!) / (x.length - 1);
  const peaks = gsd(
    { x, y: net },
    {
      noiseLevel: 6 * noise,
      minMaxRatio: 0,
      realTopDetection: true,
      smoothY: false,
      sgOptions: { windowSize: 7, polynomial: 3 },
    },
  );
  const lines: PipelineLine[] = [];
  for (const peak of peaks) {
    const width = Math.min(Math.max(peak.width * 1.18, 2 * spacing), 40 * spacing);
    const middle = Math.round((peak.x - x[0]!) / spacing);
    const half = Math.ceil((1.6 * width) / spacing) + 1;
    const from = Math.max(0, middle - half);
    const to = Math.min(x.length - 1, middle + half);
    if (to - from < 6) continue;
    const u: number[] = [];
    const scaled: number[] = [];
    const sigma: number[] = [];
    let isSaturated = false;
    let low = Number.POSITIVE_INFINITY;
    for (let i = from; i <= to; i += 1) {
      isSaturated ||= y[i]! >= ceiling;
      low = Math.min(low, y[i]!);
      const s = Math.sqrt(noise * noise + Math.max(0, net[i]!) * 0.02 * noise);
      u.push(i - from);
      sigma.push(s);
      scaled.push(y[i]! / s);
    }
    if (isSaturated) continue;
    const w = width / spacing;
    const fit = levenbergMarquardt(
      { x: u, y: scaled },
      ([centre, fwhm, height, offset, slope]) =>
        (i) =>
          (height! * Math.exp(-4 * Math.LN2 * ((i - centre!) / fwhm!) ** 2) + offset! + slope! * i) / sigma[i]!,
      {
        initialValues: [(peak.x - x[from]!) / spacing, w, y[Math.min(middle, y.length - 1)]! - low, low, 0],
        damping: 0.01,
        maxIterations: 25,
        gradientDifference: 1e-4,
        errorTolerance: 1e-8,
        jacobianFunction:
          ([centre, fwhm, height]) =>
          (i) => {
            const t = (i - centre!) / fwhm!;
            const e = Math.exp(-4 * Math.LN2 * t * t) / sigma[i]!;
            const d = 8 * Math.LN2 * t * e * height!;
            return [d / fwhm!, (d * t) / fwhm!, e, 1 / sigma[i]!, i / sigma[i]!];
          },
      },
    );
    const [centre, fwhm, height] = fit.parameterValues as [number, number, number];
    if (!(height > 5 * noise) || centre < 0 || centre > to - from || Math.abs(fwhm) > 3 * w || Math.abs(fwhm) < 0.8)
      continue;
    lines.push({
      position: x[from]! + centre * spacing,
      height,
      fwhm: Math.abs(fwhm) * spacing,
      wavelengthNm: null,
      isUsed: false,
    });
  }
  // Much narrower or wider than the others: a spike, or two in one.
  const usual = medianOf(lines.map((line) => line.fwhm));
  return lines.filter((line) => line.fwhm > 0.5 * usual && line.fwhm < 1.7 * usual);
}

function nearestOf(sorted: Float64Array, value: number): number {
  let low = 0;
  let high = sorted.length - 1;
  while (high - low > 1) {
    const middle = (low + high) >> 1;
    if (sorted[middle]! < value) low = middle;
    else high = middle;
  }
  return Math.abs(sorted[low]! - value) < Math.abs(sorted[high]! - value) ? low : high;
}

/** @param published wavelengths in nm, ascending, with strength on the scale of their own spectrum */
export function runPipeline(
  text: string,
  ceiling: number,
  published: { nm: number; strength: number }[],
  hint: PipelineHint,
): PipelineResult {
  const { x, y } = readTable(text);
  const lines = fitLines(x, y, ceiling);
  if (lines.length < 4) return { lines, coefficients: null };
  const centre = (x[0]! + x[x.length - 1]!) / 2;
  const half = (x[x.length - 1]! - x[0]!) / 2;
  const t = (position: number): number => (position - centre) / half;
  const evaluate = (powers: readonly number[], position: number): number =>
    powers.reduceRight((sum, c) => sum * position + c, 0);
  const bright = [...lines].sort((a, b) => b.height - a.height).slice(0, 25);
  const usable = published.filter((one) => one.strength > 0.003);
  const wavelengths = Float64Array.from(usable, (one) => one.nm);
  if (wavelengths.length < 4) return { lines, coefficients: null };

  let best = { score: -1, axis: (_position: number): number => 0 };
  const spanNm =
    hint.kind === "range"
      ? hint.lastNm - hint.firstNm
      : evaluate(hint.coefficients, x[x.length - 1]!) - evaluate(hint.coefficients, x[0]!);
  const nmPerUnit = Math.abs(spanNm) / (2 * half);
  const tolerance = (hint.kind === "range" ? 1.2 : 0.8) * medianOf(lines.map((line) => line.fwhm)) * nmPerUnit;
  const consider = (axis: (position: number) => number): void => {
    let score = 0;
    for (const line of bright) {
      const nm = axis(line.position);
      const k = nearestOf(wavelengths, nm);
      const off = Math.abs(wavelengths[k]! - nm) / tolerance;
      if (off < 1) score += (1 - off * off) * (0.4 + usable[k]!.strength);
    }
    if (score > best.score) best = { score, axis };
  };
  if (hint.kind === "range") {
    const middle = (hint.firstNm + hint.lastNm) / 2;
    const offsets = 40;
    for (let a = -offsets; a <= offsets; a += 1)
      for (let b = -20; b <= 20; b += 1)
        for (let c = -6; c <= 6; c += 1) {
          const offset = middle + (a / offsets) * 0.05 * spanNm;
          const slope = (spanNm / 2) * (1 + (b / 20) * 0.1);
          const bow = (c / 6) * 0.04 * spanNm;
          consider((position) => offset + slope * t(position) + bow * (t(position) ** 2 - 0.5));
        }
  } else {
    const reach = 3.2 * medianOf(lines.map((line) => line.fwhm));
    for (let a = -24; a <= 24; a += 1)
      for (let b = -10; b <= 10; b += 1) {
        const shift = (a / 24) * reach;
        const scale = 1 + (b / 10) * 0.0102;
        consider((position) => evaluate(hint.coefficients, centre + (position - centre) * scale + shift));
      }
  }

  // Names by the best candidate, a cubic through them, outliers dropped, and again with less tolerance.
  let axis = best.axis;
  let powers: number[] | null = null;
  const all = Float64Array.from(published, (one) => one.nm);
  for (let round = 0; round < 6; round += 1) {
    const reach = tolerance * [1.5, 1, 0.7, 0.5, 0.4, 0.4][round]!;
    const list = round < 3 ? wavelengths : all;
    for (const line of lines) {
      const nm = axis(line.position);
      const near = list[nearestOf(list, nm)]!;
      line.wavelengthNm = Math.abs(near - nm) < reach ? near : null;
      line.isUsed = line.wavelengthNm !== null;
    }
    for (let drop = 0; drop < 5; drop += 1) {
      const used = lines.filter((line) => line.isUsed);
      if (used.length < 4) return { lines, coefficients: null };
      const fit = new PolynomialRegression(
        used.map((line) => t(line.position)),
        used.map((line) => line.wavelengthNm!),
        Math.min(3, used.length - 2),
      );
      powers = fit.coefficients;
      const off = used.map((line) => Math.abs(fit.predict(t(line.position)) - line.wavelengthNm!));
      const limit = Math.max(3 * 1.4826 * medianOf(off), 0.02 * tolerance);
      let dropped = 0;
      used.forEach((line, i) => {
        if (off[i]! > limit) {
          line.isUsed = false;
          dropped += 1;
        }
      });
      axis = (position) => fit.predict(t(position));
      if (dropped === 0) break;
    }
  }
  for (const line of lines) if (!line.isUsed) line.wavelengthNm = null;
  return { lines, coefficients: powers === null ? null : inPositions(powers, centre, half) };
}

/** Powers of (position - centre) / half as powers of the position. */
function inPositions(powers: readonly number[], centre: number, half: number): number[] {
  let out = [powers[powers.length - 1]!];
  for (let i = powers.length - 2; i >= 0; i -= 1) {
    const next = new Array<number>(out.length + 1).fill(0);
    out.forEach((c, k) => {
      next[k] = next[k]! - (c * centre) / half;
      next[k + 1] = next[k + 1]! + c / half;
    });
    next[0] = next[0]! + powers[i]!;
    out = next;
  }
  return out;
}
