/** The lines of a check, and the axis below them, where one was fitted. */
import type { Check } from "@wavekeep/api/contract";
import type { Analysis, LineResult } from "@wavekeep/core";
import { cleanup, render, screen } from "@testing-library/react";
import { afterEach, expect, test } from "vitest";
import { DispersionSection } from "./dispersion-section.tsx";
import { LinesTable } from "./lines-table.tsx";

afterEach(cleanup);

const noAxis = "There is no earlier axis that says what the instrument indicated.";
const line = (over: Partial<LineResult>): LineResult =>
  ({
    position: 812.4,
    wavelengthNm: 588.1895,
    species: "Ne I",
    order: 1,
    blendOfNm: [],
    flags: [],
    status: "not-judged",
    reason: noAxis,
    verdict: null,
    fwhm: 3.1,
    indicatedNm: null,
    errorNm: null,
    errorExpandedUncNm: null,
    toleranceNm: null,
    guardBandNm: null,
    toleranceUsed: null,
    leftOut: null,
    ...over,
  }) as LineResult;
const analysis = (over: Partial<Analysis>): Analysis =>
  ({
    outcome: "identified",
    axisKind: "pixel",
    axisUnit: "px",
    dispersion: null,
    verdict: null,
    lines: [],
    ...over,
  }) as Analysis;

test("a first check does not say under each line that no axis could err; what was refused keeps its reason", () => {
  const lines = [
    line({}),
    line({ wavelengthNm: 594.4834, position: 826.1 }),
    line({ wavelengthNm: 640.2248, position: 931.7, status: "refused", reason: "Saturated: its top is cut off." }),
  ];
  render(<LinesTable analysis={analysis({ lines })} chosen={null} onChoose={() => undefined} />);
  expect(screen.queryByText(noAxis)).toBeNull();
  expect(screen.getAllByText("Saturated: its top is cut off.")).toHaveLength(2);
  expect(screen.getByRole("row", { name: /^588\.1895 Ne/ })).toBeTruthy();
});

test("where others were judged, a line that was not says why", () => {
  const lines = [
    line({ reason: "No tolerance is set at this wavelength." }),
    line({ wavelengthNm: 594.4834, status: "judged", reason: null, errorNm: 0.012, errorExpandedUncNm: 0.004 }),
  ];
  render(<LinesTable analysis={analysis({ lines })} chosen={null} onChoose={() => undefined} />);
  expect(screen.getAllByText("No tolerance is set at this wavelength.")).toHaveLength(2);
});

const dispersion = {
  degree: 1,
  degreeChosenBy: "given",
  coefficients: [380, 0.25],
  samples: [{ px: 0, nm: 380, uncNm: 0.01 }],
  rejected: [
    { line: 0, reason: "Its place is known to 3 px only: it could add nothing to the axis and was left out of it." },
  ],
  rmsPx: 0.1,
  rmsNm: 0.02,
  leaveOneOutRmsNm: 0.03,
} as unknown as Analysis["dispersion"];

test("the dispersion stands below where the axis was fitted, not where the capture brings wavelengths", () => {
  const check = { fittedAxis: null } as Check;
  const { rerender } = render(
    <DispersionSection check={check} analysis={analysis({ dispersion, lines: [line({})] })} />,
  );
  expect(screen.getByRole("heading", { name: "Dispersion" })).toBeTruthy();
  expect(screen.getByText(/could add nothing to the axis/)).toBeTruthy();
  rerender(
    <DispersionSection
      check={check}
      analysis={analysis({ dispersion, lines: [line({})], axisKind: "wavelength", axisUnit: "nm" })}
    />,
  );
  expect(screen.queryByRole("heading", { name: "Dispersion" })).toBeNull();
  expect(screen.queryByText(/could add nothing/)).toBeNull();
});
