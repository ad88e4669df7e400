/** Light and grating, for any sensible instrument: what is solved for returns what was given. */
import fc from "fast-check";
import { expect, test } from "vitest";
import { airToVacuumNm, vacuumToAirNm, type AirConditions } from "../light/air.ts";
import { ramanShift, scatteredWavelengthNm } from "../light/quantities.ts";
import * as grating from "./index.ts";

const runs = { numRuns: 300, seed: 20260302 };
const real = (min: number, max: number): fc.Arbitrary<number> => fc.double({ min, max, noNaN: true });
const room: fc.Arbitrary<AirConditions> = fc.record({
  temperatureC: real(-20, 50),
  pressurePa: real(60000, 110000),
  relativeHumidity: real(0, 1),
  co2Ppm: real(300, 2000),
});
const value = (answer: grating.GratingAnswer): number => {
  if (answer.outcome === "refused") throw new Error(answer.detail);
  return answer.value;
};

test("vacuum to air and back, in every air", () => {
  fc.assert(
    fc.property(real(200, 3000), room, (nm, air) => {
      for (const kind of ["peck-reeder-1972", "edlen-1966", air] as const)
        expect(Math.abs(airToVacuumNm(vacuumToAirNm(nm, kind), kind) - nm)).toBeLessThan(1e-9);
    }),
    runs,
  );
});
test("a Raman shift returns the wavelength it was taken from", () => {
  fc.assert(
    fc.property(real(250, 1100), real(-300, 4000), (laser, shift) => {
      const seen = scatteredWavelengthNm(laser, shift);
      expect(Math.abs(ramanShift({ wavelengthVacuumNm: laser, uncNm: 0 }, seen, 0).shiftPerCm - shift)).toBeLessThan(
        1e-7,
      );
    }),
    runs,
  );
});
test("the grating equation solved for each of its quantities returns the state", () => {
  fc.assert(
    fc.property(
      real(100, 3600),
      real(-70, 70),
      real(-70, 70),
      fc.constantFrom(-2, -1, 1, 2, 3),
      (density, alpha, beta, order) => {
        const angles = { incidenceDeg: alpha, diffractionDeg: beta, grooveDensityPerMm: density };
        const nm = value(grating.gratingWavelengthNm({ ...angles, order }));
        fc.pre(nm > 50);
        const state = { ...angles, order, wavelengthNm: nm };
        expect(value(grating.diffractionAngleDeg(state))).toBeCloseTo(beta, 9);
        expect(value(grating.incidenceAngleDeg(state))).toBeCloseTo(alpha, 9);
        expect(value(grating.gratingOrder(state))).toBeCloseTo(order, 9);
        expect(value(grating.grooveDensityPerMm(state)) / density).toBeCloseTo(1, 11);
      },
    ),
    runs,
  );
});
test("an array spectrometer: each pixel's wavelength finds its pixel; a fit from lines of a near geometry returns the axis", () => {
  const geometry: fc.Arbitrary<grating.ArrayGeometry> = fc.record({
    order: fc.constant(1),
    grooveDensityPerMm: real(150, 1800),
    incidenceDeg: real(18, 32),
    includedAngleDeg: real(5, 40),
    focalLengthMm: real(40, 500),
    detectorTiltDeg: real(-8, 8),
    pixelPitchUm: real(7, 26),
    axisPx: real(400, 600),
    direction: fc.constantFrom<1 | -1>(1, -1),
  });
  fc.assert(
    fc.property(geometry, real(-0.4, 0.4), real(0.97, 1.03), (g, turn, stretch) => {
      const model = new grating.ArrayModel(g);
      const lines = [0, 130, 300, 480, 640, 820, 1023].map((px) => ({
        px,
        wavelengthNm: model.wavelengthAtPx(px),
        uncNm: 0.01,
      }));
      fc.pre(lines.every(({ wavelengthNm }) => wavelengthNm > 150));
      for (const { px, wavelengthNm } of lines) expect(model.pxOfWavelength(wavelengthNm)).toBeCloseTo(px, 5);
      const start = { ...g, incidenceDeg: g.incidenceDeg + turn, focalLengthMm: g.focalLengthMm * stretch };
      const fit = grating.fitArraySpectrometer(lines, start, { free: ["incidenceDeg", "focalLengthMm"] });
      if (fit.outcome === "refused") throw new Error(fit.detail);
      const fitted = new grating.ArrayModel(fit.geometry);
      for (const { px, wavelengthNm } of lines) expect(fitted.wavelengthAtPx(px)).toBeCloseTo(wavelengthNm, 6);
    }),
    runs,
  );
});
test("a sine drive: each reading's wavelength finds its reading", () => {
  fc.assert(
    fc.property(
      real(300, 2400),
      real(0, 40),
      real(-500, 500),
      real(-1, 1),
      real(-0.1, 0.8),
      (density, included, offset, zero, sine) => {
        const drive = {
          order: 1,
          grooveDensityPerMm: density,
          includedAngleDeg: included,
          stepsPerSine: 1e5,
          offsetSteps: offset,
          backlashSteps: 7,
          zeroAngleDeg: zero,
        };
        for (const approach of ["from-below", "from-above"] as const) {
          const reading = offset + 1e5 * sine;
          const nm = grating.sineDriveWavelengthNm(drive, reading, approach)!;
          expect(grating.sineDriveReading(drive, nm, approach)).toBeCloseTo(reading, 5);
        }
      },
    ),
    runs,
  );
});
test("fringes computed from a wavelength return it", () => {
  fc.assert(
    fc.property(
      real(300, 1100),
      real(20, 500),
      real(300, 5000),
      fc.integer({ min: 1, max: 8 }),
      (nm, slit, screen, order) => {
        const sine = (order * nm * 1e-3) / slit;
        fc.pre(sine < 0.7);
        const half = (screen * sine) / Math.sqrt(1 - sine * sine);
        const setup = {
          kind: "single-slit" as const,
          slitUm: { value: slit, unc: 0 },
          screenMm: { value: screen, unc: 0 },
          acrossMm: { value: 2 * half, unc: 0 },
          order,
        };
        expect(grating.fringeWavelength(setup).wavelengthNm / nm).toBeCloseTo(1, 11);
      },
    ),
    runs,
  );
});
