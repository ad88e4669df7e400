/** A drift series cut into runs: a new one begins after an event that breaks it, and at an as-left check. */
import { dateIn } from "../instruments/dates.ts";

export interface RunPoint {
  measuredAt: Date;
  condition: string;
  midErrorNm: number;
}

/**
 * @param breaks  dates in the lab's zone on which the series was broken; a check of the same day counts as after the event
 * @returns error at mid-range, nm, run by run
 */
export function runsOf(points: readonly RunPoint[], breaks: readonly string[], zone: string): number[][] {
  const runs: number[][] = [];
  let lastOn: string | null = null;
  for (const point of points) {
    const on = dateIn(zone, point.measuredAt);
    const broken =
      point.condition === "as-left" || (lastOn !== null && breaks.some((date) => date > lastOn! && date <= on));
    if (runs.length === 0 || broken) runs.push([]);
    runs.at(-1)!.push(point.midErrorNm);
    lastOn = on;
  }
  return runs;
}
