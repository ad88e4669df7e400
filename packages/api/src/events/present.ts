/** Stored event to the contract's shape, with the step it made in the drift series. */
import type { z } from "zod";
import type { instrumentEvent } from "../contract/instruments.ts";
import type { SeriesRow } from "../drift/queries.ts";
import { dateIn } from "../instruments/dates.ts";
import type { InstrumentEventRow } from "./queries.ts";

export type InstrumentEvent = z.input<typeof instrumentEvent>;

/** @param zone IANA zone of the lab, in which the event's date and the checks' days are cut */
export function presentEvent(
  { event, recorderName }: { event: InstrumentEventRow; recorderName: string | null },
  series: readonly SeriesRow[],
  zone: string,
): InstrumentEvent {
  return {
    id: event.id,
    configurationId: event.configurationId,
    kind: event.kind as InstrumentEvent["kind"],
    title: event.title,
    happenedOn: event.happenedOn,
    note: event.note,
    breaksDrift: event.breaksDrift,
    recordedAt: event.recordedAt.toISOString(),
    recordedBy: { id: event.recordedBy ?? event.labId, name: recorderName ?? "Wavekeep" },
    stepNm: stepAcross(event.happenedOn, series, zone),
  };
}

/** First error at mid-range from the event's day on, minus the last before it; null where either is missing. */
function stepAcross(happenedOn: string, series: readonly SeriesRow[], zone: string): number | null {
  const days = series.map((point) => ({ on: dateIn(zone, point.measuredAt), point }));
  const before = days
    .filter(({ on, point }) => on < happenedOn || (on === happenedOn && point.condition === "as-found"))
    .at(-1);
  const after = days.find(({ on, point }) => on > happenedOn || (on === happenedOn && point.condition === "as-left"));
  return before === undefined || after === undefined ? null : after.point.midErrorNm - before.point.midErrorNm;
}
