/** The drift series of a configuration, and what its history says about set-up reproducibility. */
import type { DriftReply } from "../contract/instruments.ts";
import type { Database } from "../db/connection.ts";
import type { StoredSegment } from "../db/schema/instruments.ts";
import { inLab, type Context, type Tx } from "../db/tenancy.ts";
import { presentEvent } from "../events/present.ts";
import { listEventRows } from "../events/queries.ts";
import { findConfiguration, findLatestTolerance } from "../instruments/queries.ts";
import { listSeries, type SeriesRow } from "./queries.ts";
import { reproducibilityOfRuns } from "./reproducibility.ts";
import { runsOf } from "./runs.ts";

/** Coverage factor of the points' whiskers: about 95.45 % with the many degrees of freedom of a fitted line. */
const coverageFactor = 2;

export function readDrift(db: Database, ctx: Context, configurationId: string): Promise<DriftReply> {
  return inLab(db, ctx, async (tx) => {
    const configuration = await findConfiguration(tx, configurationId);
    const { segments } = await findLatestTolerance(tx, configurationId);
    const series = await listSeries(tx, configurationId);
    const last = series.at(-1);
    const toleranceNm = toleranceAround(segments, last?.largestAtNm ?? null);
    return {
      configurationId,
      toleranceNm,
      guardBandNm: last?.guardShare === undefined || last.guardShare === null ? null : last.guardShare * toleranceNm,
      midNm: last?.midNm ?? null,
      fromNm: last === undefined ? null : last.midNm - last.rangeNm / 2,
      toNm: last === undefined ? null : last.midNm + last.rangeNm / 2,
      dueOn: configuration.dueOn,
      points: series.map(presentPoint),
      events: (await listEventRows(tx, configurationId)).map((row) => presentEvent(row, series, ctx.zone)),
    };
  });
}

function presentPoint(row: SeriesRow): DriftReply["points"][number] {
  return {
    checkId: row.checkId,
    checkNumber: row.checkNumber,
    at: row.measuredAt.toISOString(),
    condition: row.condition,
    state: row.state,
    verdict: row.verdict,
    largestErrorNm: row.largestErrorNm,
    largestExpandedUncNm: coverageFactor * row.largestErrorUncNm,
    largestAtNm: row.largestAtNm,
    midErrorNm: row.midErrorNm,
    midExpandedUncNm: coverageFactor * row.midErrorUncNm,
    scaleErrorNm: row.scaleErrorNm,
    scaleExpandedUncNm: coverageFactor * row.scaleErrorUncNm,
    temperatureC: row.temperatureC,
    sourceLabels: row.sourceLabels,
  };
}

/** Tolerance of the segment that holds a wavelength; without one, the tightest. */
function toleranceAround(segments: readonly StoredSegment[], wavelengthNm: number | null): number {
  const holding =
    wavelengthNm === null
      ? undefined
      : segments.find((segment) => wavelengthNm >= segment.fromNm && wavelengthNm <= segment.toNm);
  return holding?.toleranceNm ?? Math.min(...segments.map((segment) => segment.toleranceNm));
}

/** Scatter between this configuration's checks, where there are enough of them. */
export async function findReproducibility(
  tx: Tx,
  ctx: Context,
  configurationId: string,
  exceptCheckId: string,
): Promise<{ reproducibilityNm: number; degreesOfFreedom: number } | null> {
  const series = (await listSeries(tx, configurationId)).filter(
    (point) => point.checkId !== exceptCheckId && point.state !== "returned",
  );
  const events = await listEventRows(tx, configurationId);
  const breaks = events.filter(({ event }) => event.breaksDrift).map(({ event }) => event.happenedOn);
  return reproducibilityOfRuns(runsOf(series, breaks, ctx.zone));
}
