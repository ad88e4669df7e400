/**
 * Fringes on a screen: a rough check of a laser's wavelength with a double slit, a wire or a single slit, a ruler and a tape.
 *
 *   double slit   n fringes of spacing p: tan(theta) = n p / L, lambda = d sin(theta) / n, d the distance of the slits' middles
 *   single slit   minimum of order n at x from the middle: lambda = a sin(atan(x / L)) / n
 *   wire          as the slit of its diameter, outside the undiffracted spot (J. Babinet)
 *
 * Exact in the angle; the screen is flat, square to the beam, and far (L well above d² / lambda, else `isFar` is false).
 * Uncertainty  by the law of propagation (JCGM 100, 5.1.2) from distance, fringes and slit, independent of each other; the largest
 *              contribution is named
 * Units        slit or wire in µm, screen and pattern in mm, wavelength in nm of the air it is measured in (2.7e-4 below the vacuum
 *              wavelength, far below what a ruler tells)
 * Source       M. Born, E. Wolf, Principles of Optics, 7th ed., 8.5 (single slit, Babinet) and 7.3 (double slit)
 */

/** A measured length with its standard uncertainty. */
export interface Length {
  value: number;
  unc: number;
}

export interface FringeSetup {
  kind: "double-slit" | "single-slit" | "wire";
  /** Distance of the slits' middles, width of the slit, or diameter of the wire, µm. */
  slitUm: Length;
  /** From slit to screen, mm. */
  screenMm: Length;
  /**
   * Between two fringes or minima that lie symmetrically about the middle, mm: the whole distance between the outermost two, because
   * the middle itself is hard to see.
   */
  acrossMm: Length;
  /**
   * Order of each of the two. Double slit: half the number of fringe spacings between them (may be a half). Single slit and wire: the
   * order of the minimum, counted from the middle.
   */
  order: number;
}

export interface FringeWavelength {
  wavelengthNm: number;
  /** Standard uncertainty. */
  wavelengthUncNm: number;
  contributions: { of: "slit" | "screen distance" | "fringes"; uncNm: number }[];
  largest: "slit" | "screen distance" | "fringes";
  /** False where the screen is too near for the far-field formula: L below 10 d² / lambda. */
  isFar: boolean;
}

/**
 * Wavelength from a fringe pattern.
 *
 * @throws {RangeError} lengths not above 0, negative uncertainties, an order that is not a positive multiple of a half (double slit)
 *   or of one (single slit, wire)
 */
export function fringeWavelength(setup: FringeSetup): FringeWavelength {
  for (const [name, length] of [
    ["slit", setup.slitUm],
    ["screen distance", setup.screenMm],
    ["distance across", setup.acrossMm],
  ] as const) {
    if (!(length.value > 0 && length.value < Infinity) || !(length.unc >= 0 && length.unc < Infinity))
      throw new RangeError(`The ${name} must be above 0 and its uncertainty not negative`);
  }
  const multiple = setup.kind === "double-slit" ? 2 * setup.order : setup.order;
  if (!(setup.order > 0 && Number.isInteger(multiple))) throw new RangeError(`This order cannot be: ${setup.order}`);
  const half = setup.acrossMm.value / 2;
  const distance = setup.screenMm.value;
  const ray = Math.sqrt(half * half + distance * distance);
  const wavelengthNm = (1000 * setup.slitUm.value * half) / (ray * setup.order);
  // sin = half / r: relative slopes are (L / r)² of half, and its negative of L.
  const cosineSquare = (distance / ray) * (distance / ray);
  const contributions: FringeWavelength["contributions"] = [
    { of: "slit", uncNm: (wavelengthNm * setup.slitUm.unc) / setup.slitUm.value },
    { of: "screen distance", uncNm: (wavelengthNm * cosineSquare * setup.screenMm.unc) / distance },
    { of: "fringes", uncNm: (wavelengthNm * cosineSquare * setup.acrossMm.unc) / setup.acrossMm.value },
  ];
  let variance = 0;
  let largest = contributions[0]!;
  for (const contribution of contributions) {
    variance += contribution.uncNm * contribution.uncNm;
    if (contribution.uncNm > largest.uncNm) largest = contribution;
  }
  const slitMm = setup.slitUm.value / 1000;
  return {
    wavelengthNm,
    wavelengthUncNm: Math.sqrt(variance),
    contributions,
    largest: largest.of,
    isFar: distance >= (10 * slitMm * slitMm) / (wavelengthNm * 1e-6),
  };
}

export interface FringeCheck extends FringeWavelength {
  /** Measured minus stated wavelength, nm, over the standard uncertainty of both. */
  normalisedDifference: number;
  /** Within two standard uncertainties: the pattern is no reason to doubt the stated wavelength. */
  agrees: boolean;
  sentence: string;
}

/** Whether a fringe pattern bears out a laser's stated wavelength. @throws {RangeError} as above */
export function checkLaserByFringes(setup: FringeSetup, statedNm: Length): FringeCheck {
  const found = fringeWavelength(setup);
  if (!(statedNm.value > 0) || !(statedNm.unc >= 0))
    throw new RangeError("The stated wavelength must be above 0 and its uncertainty not negative");
  const unc = Math.sqrt(found.wavelengthUncNm * found.wavelengthUncNm + statedNm.unc * statedNm.unc);
  const difference = found.wavelengthNm - statedNm.value;
  const normalisedDifference =
    unc > 0 ? difference / unc : difference === 0 ? 0 : difference > 0 ? Infinity : -Infinity;
  const agrees = Math.abs(normalisedDifference) <= 2;
  const measured = `${found.wavelengthNm.toFixed(0)} nm ± ${Math.max(1, Math.round(2 * found.wavelengthUncNm))} nm (k = 2)`;
  return {
    ...found,
    normalisedDifference,
    agrees,
    sentence: !found.isFar
      ? `The screen is too near for this ${setup.kind.replace("-", " ")}: move it away before trusting ${measured}.`
      : agrees
        ? `The fringes give ${measured}: no reason to doubt ${statedNm.value} nm. The ${found.largest} limits the check.`
        : `The fringes give ${measured}, and ${statedNm.value} nm was stated: measure again, the ${found.largest} first.`,
  };
}
