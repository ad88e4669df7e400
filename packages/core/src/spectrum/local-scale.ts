/**
 * How much wavelength one sample spans along a capture, relative to the capture's median: 1 everywhere where the samples are even in wavelength.
 *
 * Use     lines of one instrument are equally wide in wavelength (gratings, prisms over short ranges) or in samples (axes that the instrument
 *         itself makes); on an axis that is even in energy or wavenumber the two differ several times over, and a true line may be narrower
 *         than the others in one measure, but not in both
 * Limits  wavenumbers that begin below 5000 cm-1 may be Raman shifts, of which the wavelength is not known here: taken as even
 */
import type { Spectrum } from "../analysis/types.ts";
import { median } from "./median.ts";

/** Steps that differ less than this from the median leave every width as it is. */
const evenWithin = 0.2;
const leastAbsoluteWavenumber = 5000;

/** One value a sample, > 0; null where the samples are even in wavelength within a fifth, or are no wavelengths. */
export function wavelengthScale({ positions, axisKind }: Spectrum): Float64Array | null {
  const n = positions.length;
  const isWavenumber = axisKind === "wavenumber" && positions[0]! >= leastAbsoluteWavenumber;
  if (n < 3 || (axisKind !== "wavelength" && !isWavenumber)) return null;
  const scale = new Float64Array(n);
  for (let i = 0; i < n; i += 1) {
    const before = Math.max(0, i - 1);
    const after = Math.min(n - 1, i + 1);
    const step = (positions[after]! - positions[before]!) / (after - before);
    scale[i] = isWavenumber ? step / (positions[i]! * positions[i]!) : step;
  }
  const middle = median(scale);
  if (!(middle > 0)) return null;
  let isEven = true;
  for (let i = 0; i < n; i += 1) {
    scale[i] = scale[i]! / middle;
    if (!(scale[i]! > 0)) return null;
    if (Math.abs(scale[i]! - 1) > evenWithin) isEven = false;
  }
  return isEven ? null : scale;
}
