/** What the command line asks for, as the core is told it: which mode of identification, which units, which tolerance. */
import { defaultSetup, type AnalysisSetup, type FileFacts, type Spectrum } from "@wavekeep/core";
import type { CommandOptions } from "./options.ts";

export function setupOf(
  spectrum: Spectrum,
  facts: FileFacts,
  options: CommandOptions,
): AnalysisSetup | { problem: string } {
  const { absorption } = options;
  if (absorption === null && options.elements.length === 0) {
    return {
      problem: "Say which lamp it is, for example --lamp Hg,Ar; or --read-only to see how the file is understood.",
    };
  }
  if (absorption !== null && absorption.certificate === null) {
    return { problem: "Absorption bands are judged against a certificate: give it with --bands CERTIFICATE.csv." };
  }
  const isOwnAxis = spectrum.axisKind === "wavelength" || spectrum.axisKind === "wavenumber";
  if (isOwnAxis && options.priorCoefficients !== null) {
    return {
      problem: `The file has a ${spectrum.axisKind} axis of its own; --prior speaks of pixels. Leave one of them out.`,
    };
  }
  const isWavenumber = spectrum.axisKind === "wavenumber";
  return defaultSetup({
    elements: options.elements,
    mode: modeOf(spectrum, isOwnAxis, options),
    reading: options.reading,
    axisMeaning: isVacuum(facts) ? "vacuum" : "standard-air",
    tolerance: options.tolerance === null ? [] : [{ fromNm: 0, toNm: 1e7, toleranceNm: options.tolerance }],
    ...(isWavenumber ? { toleranceUnit: "cm-1" as const } : {}),
    decisionRule: options.rule,
    ...(absorption === null
      ? {}
      : {
          sampleKind: "absorption" as const,
          bandCertificate: absorption.certificate,
          spectralBandwidthNm: absorption.bandwidthNm,
        }),
  });
}

function modeOf(spectrum: Spectrum, isOwnAxis: boolean, options: CommandOptions): AnalysisSetup["mode"] {
  if (options.priorCoefficients !== null) {
    const { positions } = spectrum;
    return {
      kind: "earlier-axis",
      axis: {
        coefficients: options.priorCoefficients,
        firstPx: positions[0]!,
        lastPx: positions[positions.length - 1]!,
        chebyshevCovariance: null,
        degreesOfFreedom: null,
        meaning: "standard-air",
      },
    };
  }
  if (options.range !== null) return { kind: "range", ...options.range };
  return isOwnAxis ? { kind: "earlier-axis", axis: "own" } : { kind: "none" };
}

/** Photon energies and wavenumbers are of vacuum; wavelengths where the heading says so. */
function isVacuum({ axisUnit, axisColumn, columns }: FileFacts): boolean {
  if (axisUnit === "eV" || axisUnit === "cm-1") return true;
  return axisColumn !== null && /\bvac(?:uum)?\b/i.test(columns[axisColumn] ?? "");
}
