/** Captures of the demo lab's instruments as they would write them today, made by the demo's own simulator. */
import { simulateRepeats } from "@wavekeep/api/demo/simulate";
import { sources } from "@wavekeep/api/demo/cast";
import { instruments } from "@wavekeep/api/demo/story";
import type { CaptureFile } from "./steps.ts";

/**
 * @param name        an instrument of the story
 * @param ordinal     another number, another set of captures
 * @param addedErrorNm  nm by which the whole axis reads long beyond the story
 */
export function demoCaptures(name: string, ordinal: number, addedErrorNm = 0): CaptureFile[] {
  const told = instruments.find((instrument) => instrument.name === name)!;
  const source = sources.find(({ label }) => label === told.sourceOn(0))!;
  const instrument = {
    ...told,
    errorNm: (nm: number, daysAgo: number, temperatureC: number) =>
      told.errorNm(nm, daysAgo, temperatureC) + addedErrorNm,
  };
  const day = { daysAgo: 0, on: "2027-03-09", temperatureC: 21.4, attempt: 1, isOverexposed: false };
  return simulateRepeats(instrument, source, { ...day, ordinal, condition: "as-found" });
}
