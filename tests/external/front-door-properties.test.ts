/**
 * What must hold at the front door whatever is brought: the answer moves with the capture (scaled, shifted, mirrored, rebinned), the same
 * question gets the same bits, and no bytes and no setup make it throw anything, hang, or take memory without bound.
 */
import fc from "fast-check";
import { describe, expect, test } from "vitest";
import {
  analyseCapture,
  analyseCaptures,
  defaultSetup,
  readCapture,
  type Analysis,
  type AnalysisSetup,
  type CaptureInput,
} from "../../packages/core/src/index.ts";
import { setupFor } from "../validation/judge.ts";
import { mixes, simulate, type Simulated } from "../validation/simulator/index.ts";

const encode = (text: string): Uint8Array => new TextEncoder().encode(text);
const columns = (values: ArrayLike<number>, axis = (i: number): number => i): string =>
  Array.from(values, (value, i) => `${axis(i)}\t${value}`).join("\n");

/** A plain capture of about a thousand samples that is named with an earlier axis. */
const scene = (seed: number): Simulated =>
  simulate(seed, { ...mixes.plain, leastLines: 6 }, { samples: 1024, onlyUnnamedAxes: true });

function analyse(text: string, sim: Simulated, change: Partial<AnalysisSetup> = {}): Analysis {
  // The ceiling is left out: scaled counts would need another.
  return analyseCapture(encode(text), { ...setupFor(sim, "earlier-axis"), reading: {}, ...change }).analysis;
}

const named = (analysis: Analysis): Map<number, number> =>
  new Map(
    analysis.lines.flatMap((line) =>
      line.wavelengthNm !== null && line.signalToNoise > 30 && line.flags.length === 0 && line.blendOfNm.length === 0
        ? [[line.wavelengthNm, line.position] as const]
        : [],
    ),
  );

/** Largest difference of the positions of lines that both have; fails where hardly any are in common. */
function largestMove(a: Map<number, number>, b: Map<number, number>, moved: (position: number) => number): number {
  let largest = 0;
  let common = 0;
  for (const [nm, position] of a) {
    const other = b.get(nm);
    if (other === undefined) continue;
    common += 1;
    largest = Math.max(largest, Math.abs(other - moved(position)));
  }
  fc.pre(a.size > 0);
  expect(common).toBeGreaterThanOrEqual(0.7 * a.size);
  return largest;
}

/** Only the lines that nothing melts into: what a blend is taken apart into may hang on which side it is met from. */
const alone = (analysis: Analysis, sim: Simulated): Map<number, number> =>
  new Map(
    [...named(analysis)].filter(([nm]) => sim.truth.some((line) => line.wavelengthNm === nm && line.crowding < 0.003)),
  );

const scenes = fc.integer({ min: 1, max: 12 }).map((k) => scene(300 + k));

function earlierAxisOf(sim: Simulated, first: number, last: number, coefficients: number[]): Partial<AnalysisSetup> {
  const axis = {
    coefficients,
    firstPx: first,
    lastPx: last,
    chebyshevCovariance: null,
    degreesOfFreedom: null,
    meaning: "standard-air" as const,
  };
  return { elements: sim.elements, mode: { kind: "earlier-axis", axis } };
}

/** Coefficients of p(a x + b). */
function substituted(coefficients: readonly number[], a: number, b: number): number[] {
  let out: number[] = [0];
  for (let k = coefficients.length - 1; k >= 0; k -= 1) {
    const next = new Array<number>(out.length + 1).fill(0);
    out.forEach((c, i) => {
      next[i] = next[i]! + c * b;
      next[i + 1] = next[i + 1]! + c * a;
    });
    next[0] = next[0]! + coefficients[k]!;
    out = next;
  }
  return out;
}

describe("the answer moves with the capture", () => {
  test("counts scaled by a power of two: the same positions, areas scaled", () => {
    fc.assert(
      fc.property(scenes, fc.constantFrom(0.25, 0.5, 2, 8, 64), (sim, factor) => {
        const plain = analyse(columns(sim.counts), sim);
        const scaled = analyse(columns(sim.counts.map((value) => value * factor)), sim);
        expect(scaled.outcome).toBe(plain.outcome);
        expect(largestMove(named(plain), named(scaled), (p) => p)).toBeLessThan(0.02);
      }),
      { numRuns: 6 },
    );
  });

  test("a level added under everything: the same positions", () => {
    fc.assert(
      fc.property(scenes, fc.integer({ min: -2000, max: 20_000 }), (sim, level) => {
        const plain = analyse(columns(sim.counts), sim);
        const lifted = analyse(columns(sim.counts.map((value) => value + level)), sim);
        expect(lifted.outcome).toBe(plain.outcome);
        expect(largestMove(named(plain), named(lifted), (p) => p)).toBeLessThan(0.02);
      }),
      { numRuns: 6 },
    );
  });

  test("the axis counted from elsewhere: every position moved by as much", () => {
    fc.assert(
      // A column of pixels that begins with 1 is read as counting from 0: that is not a shift.
      fc.property(scenes, fc.integer({ min: 2, max: 5000 }), (sim, start) => {
        const last = sim.samples - 1;
        const plain = analyse(columns(sim.counts), sim);
        const shifted = analyse(
          columns(sim.counts, (i) => i + start),
          sim,
          {
            ...earlierAxisOf(sim, start, start + last, substituted(sim.earlierCoefficients!, 1, -start)),
            reading: { axisKind: "pixel" },
          },
        );
        expect(shifted.outcome).toBe(plain.outcome);
        expect(largestMove(named(plain), named(shifted), (p) => p + start)).toBeLessThan(0.005);
      }),
      { numRuns: 6 },
    );
  });

  test("the detector turned round: positions mirrored, names kept", () => {
    fc.assert(
      fc.property(scenes, (sim) => {
        const last = sim.samples - 1;
        const plain = analyse(columns(sim.counts), sim);
        const mirrored = analyse(
          columns(sim.counts.slice().reverse()),
          sim,
          earlierAxisOf(sim, 0, last, substituted(sim.earlierCoefficients!, -1, last)),
        );
        expect(mirrored.outcome).toBe(plain.outcome);
        expect(largestMove(alone(plain, sim), named(mirrored), (p) => last - p)).toBeLessThan(0.02);
      }),
      { numRuns: 6 },
    );
  });

  test("two samples added into one: positions halved within what the coarser samples allow", () => {
    fc.assert(
      fc.property(
        scenes.filter((sim) => sim.instrument.fwhmMid > 5),
        (sim) => {
          const half = sim.samples / 2;
          const binned = Float64Array.from({ length: half }, (_, i) => sim.counts[2 * i]! + sim.counts[2 * i + 1]!);
          const plain = analyse(columns(sim.counts), sim);
          const coarse = analyse(
            columns(binned),
            sim,
            earlierAxisOf(sim, 0, half - 1, substituted(sim.earlierCoefficients!, 2, 0.5)),
          );
          expect(coarse.outcome).toBe(plain.outcome);
          // Sample k of the coarse capture covers 2k - 1/2 to 2k + 3/2 of the fine one.
          expect(largestMove(alone(plain, sim), named(coarse), (p) => (p - 0.5) / 2)).toBeLessThan(0.05);
        },
      ),
      { numRuns: 4 },
    );
  });
});

describe("the same question, the same answer", () => {
  test("bit for bit when asked again, whatever was asked in between", () => {
    fc.assert(
      fc.property(scenes, scenes, fc.constantFrom("earlier-axis" as const, "range" as const), (sim, other, mode) => {
        const ask = (): string => JSON.stringify(analyseCapture(encode(sim.text), setupFor(sim, mode)));
        const first = ask();
        analyseCapture(encode(other.text), setupFor(other, "range"));
        expect(ask()).toBe(first);
      }),
      { numRuns: 4 },
    );
  });

  test("the same capture twice tells no more lines than once, and the same names", () => {
    fc.assert(
      fc.property(scenes, (sim) => {
        const lamp = (name: string): CaptureInput => ({ name, bytes: encode(sim.text), sha256: null, part: "lamp" });
        const once = analyseCaptures([lamp("a")], setupFor(sim, "earlier-axis")).analysis;
        const twice = analyseCaptures([lamp("a"), lamp("b")], setupFor(sim, "earlier-axis")).analysis;
        if (twice.outcome === "refused") return;
        expect([...named(twice).keys()].filter((nm) => !named(once).has(nm)).length).toBeLessThanOrEqual(
          0.2 * named(once).size,
        );
        expect(twice.outcome).toBe(once.outcome);
      }),
      { numRuns: 4 },
    );
  });
});

const numberCell = fc.oneof(
  fc.double({ noDefaultInfinity: false }).map(String),
  fc.integer().map(String),
  fc.constantFrom("", "NaN", "-", "1e999", "-1e-400", "0x10", "1,5", "1.234,5", "١", "∞", "1e", "--3", "9".repeat(400)),
);
const tableText = fc
  .array(fc.array(numberCell, { minLength: 1, maxLength: 4 }), { maxLength: 60 })
  .chain((rows) =>
    fc.constantFrom("\t", ",", ";", " ", "|").map((sign) => rows.map((row) => row.join(sign)).join("\n")),
  );
const bytes = fc.oneof(
  fc.uint8Array({ maxLength: 3000 }),
  fc.string({ unit: "binary", maxLength: 600 }).map(encode),
  tableText.map(encode),
  tableText.map((text) =>
    encode(`##TITLE=x\n##JCAMP-DX=4.24\n##NPOINTS=1000000000\n##XYDATA=(X++(Y..Y))\n${text}\n##END=`),
  ),
);
const wild = fc.oneof(
  fc.double(),
  fc.constantFrom(0, -1, 1e308, -1e308, Number.NaN, Number.POSITIVE_INFINITY, 1e7, 300, 500, 900),
);
const mode: fc.Arbitrary<AnalysisSetup["mode"]> = fc.oneof(
  fc.constant({ kind: "none" as const }),
  fc.record({ kind: fc.constant("range" as const), firstNm: wild, lastNm: wild }),
  fc.constant({ kind: "earlier-axis" as const, axis: "own" as const }),
  fc.record({
    kind: fc.constant("earlier-axis" as const),
    axis: fc.record({
      coefficients: fc.array(wild, { maxLength: 8 }),
      firstPx: wild,
      lastPx: wild,
      chebyshevCovariance: fc.option(fc.array(wild, { maxLength: 9 })),
      degreesOfFreedom: fc.option(wild),
      meaning: fc.constantFrom("vacuum" as const, "standard-air" as const, "room-air" as const),
    }),
  }),
);
const setups = fc
  .record(
    {
      elements: fc.array(fc.constantFrom("Hg", "Ar", "Ne", "Xx", "", "Hg II", "HeNe green", "__proto__"), {
        maxLength: 5,
      }),
      mode,
      expectedLinesNm: fc.array(wild, { maxLength: 4 }),
      requiredLinesNm: fc.array(wild, { maxLength: 4 }),
      tolerance: fc.array(fc.record({ fromNm: wild, toNm: wild, toleranceNm: wild }), { maxLength: 3 }),
      degree: fc.option(fc.oneof(fc.integer({ min: -2, max: 40 }), wild)),
      falseLinesPerCapture: wild,
      warningShare: wild,
      useSaturated: fc.boolean(),
      lineShape: fc.constantFrom(
        "gaussian" as const,
        "voigt" as const,
        "automatic" as const,
        "empirical" as const,
        "box" as const,
      ),
      positionDefinition: fc.constantFrom(
        "fitted" as const,
        "highest-sample" as const,
        "three-point-parabola" as const,
      ),
      axisUpdate: fc.constantFrom("fit" as const, "offset" as const, "offset-and-scale" as const),
      sampleKind: fc.constantFrom("emission" as const, "absorption" as const),
      spectralBandwidthNm: fc.option(wild),
      displayResolutionNm: fc.option(wild),
      reading: fc.record(
        {
          fullScaleCounts: wild,
          scansSummed: wild,
          axisColumn: fc.option(fc.integer({ min: -3, max: 9 })),
          intensityColumn: fc.integer({ min: -3, max: 9 }),
          axisKind: fc.constantFrom("pixel" as const, "wavelength" as const, "wavenumber" as const, "step" as const),
        },
        { requiredKeys: [] },
      ),
    },
    { requiredKeys: [] },
  )
  .map((given) => defaultSetup(given as Partial<AnalysisSetup>));

const outcomes = ["identified", "ambiguous", "unidentified", "refused"];

function answersPlainly(input: Uint8Array, setup: AnalysisSetup): void {
  const begun = process.cpuUsage();
  const { analysis } = analyseCapture(input, setup);
  const { user } = process.cpuUsage(begun);
  expect(outcomes).toContain(analysis.outcome);
  if (analysis.outcome === "refused") expect(analysis.reason).toMatch(/\w/);
  expect(JSON.parse(JSON.stringify(analysis)).outcome).toBe(analysis.outcome);
  // Generous: a machine under load; a hang is minutes.
  expect(user / 1e6).toBeLessThan(10);
}

describe("whatever is brought", () => {
  test("any bytes with any setup end in an outcome", { timeout: 120_000 }, () => {
    fc.assert(fc.property(bytes, setups, answersPlainly), { numRuns: 250 });
  });

  test("a good capture with any setup ends in an outcome", { timeout: 120_000 }, () => {
    const text = encode(scene(301).text);
    fc.assert(
      fc.property(setups, (setup) => answersPlainly(text, setup)),
      { numRuns: 60 },
    );
  });

  test("a good capture with bytes changed, lost or doubled ends in an outcome", { timeout: 120_000 }, () => {
    const sim = scene(302);
    const good = encode(sim.text);
    fc.assert(
      fc.property(
        fc.array(fc.tuple(fc.nat(good.length - 1), fc.nat(255)), { maxLength: 20 }),
        fc.nat(good.length),
        fc.boolean(),
        (changes, cut, isDoubled) => {
          const damaged = good.slice(0, Math.max(1, cut));
          for (const [at, value] of changes) if (at < damaged.length) damaged[at] = value;
          const input = isDoubled ? encode(new TextDecoder("latin1").decode(damaged).repeat(2)) : damaged;
          answersPlainly(input, setupFor(sim, "range"));
        },
      ),
      { numRuns: 40 },
    );
  });

  test("numbers of samples that are only declared take no memory", () => {
    const claims = [
      "##TITLE=x\n##JCAMP-DX=4.24\n##DATA TYPE=UV/VIS SPECTRUM\n##XUNITS=NANOMETERS\n##YUNITS=COUNTS\n##FIRSTX=200\n##LASTX=900\n##NPOINTS=2000000000\n##XFACTOR=1\n##YFACTOR=1\n##XYDATA=(X++(Y..Y))\n200 1 2 3\n##END=\n",
      "Pixels: 4000000000\nPixel\tCounts\n0\t1\n1\t2\n2\t3\n",
      "0\t1\n4000000000\t2\n8000000000\t3\n",
    ];
    for (const claim of claims) {
      const before = process.memoryUsage();
      answersPlainly(
        encode(claim),
        defaultSetup({ elements: ["Hg"], mode: { kind: "range", firstNm: 200, lastNm: 900 } }),
      );
      readCapture(encode(claim), "claim.txt");
      const after = process.memoryUsage();
      expect(after.heapUsed + after.arrayBuffers - before.heapUsed - before.arrayBuffers).toBeLessThan(200e6);
    }
  });
});
