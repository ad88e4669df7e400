/** The axes a configuration has had, and what became of the axis that a check fitted. */
import type { Check } from "../contract/checks.ts";
import type { AxisEntry } from "../contract/instruments.ts";
import type { Database } from "../db/connection.ts";
import { hasRole, inLab, recordNow, type Context, type Tx } from "../db/tenancy.ts";
import { findAxisAt, findConfiguration, type ConfigurationRow } from "../instruments/queries.ts";
import { findOptionalSubmission, type AnalysisRow, type CheckRecord } from "../checks/queries.ts";
import { findLastAxisNumber, findMeasuredSince, listAxisRows, type AxisListRow } from "./queries.ts";

/** Newest first. */
export function listAxes(db: Database, ctx: Context, configurationId: string): Promise<{ items: AxisEntry[] }> {
  return inLab(db, ctx, async (tx) => {
    await findConfiguration(tx, configurationId);
    const rows = await listAxisRows(tx, { configurationId });
    return { items: rows.map((row, index) => present(row, rows[index + 1])).reverse() };
  });
}

function present(row: AxisListRow, next: AxisListRow | undefined): AxisEntry {
  const { axis } = row;
  return {
    id: axis.id,
    number: axis.number,
    degree: axis.coefficients.length - 1,
    coefficients: axis.coefficients,
    meaning: axis.meaning as AxisEntry["meaning"],
    firstPx: axis.firstPx,
    lastPx: axis.lastPx,
    inForceFrom: axis.inForceFrom.toISOString(),
    inForceTo: next?.axis.inForceFrom.toISOString() ?? null,
    reason: axis.reason,
    by: setBy(row),
    fromCheck: axis.fromCheckId === null ? null : { id: axis.fromCheckId, number: row.fromCheckNumber ?? "" },
  };
}

const setBy = ({ axis, setByName }: AxisListRow): AxisEntry["by"] =>
  axis.setBy === null ? { id: axis.labId, name: "Wavekeep" } : { id: axis.setBy, name: setByName ?? "" };

/** The axis of a submitted or approved check: under which number it was put in force, or can be by this person now. */
export async function readFittedAxis(
  tx: Tx,
  ctx: Context,
  {
    check,
    configuration,
    state,
    analysis,
  }: {
    check: CheckRecord;
    configuration: ConfigurationRow;
    state: Check["state"];
    analysis: AnalysisRow | null;
  },
): Promise<Check["fittedAxis"]> {
  const isSigned = state === "submitted" || state === "approved";
  const isFitted = analysis !== null && analysis.analysis.dispersion !== null;
  if (!isSigned || !isFitted || configuration.axisKind === "wavelength") return null;
  const adopted = (await listAxisRows(tx, { fromCheckId: check.id })).at(-1);
  const inForce = await findAxisAt(tx, configuration.id, await recordNow(tx));
  const isNewer =
    inForce === null ||
    (inForce.fromCheckId !== check.id &&
      (await findOptionalSubmission(tx, check.id))!.measuredAt >= (await findMeasuredSince(tx, inForce)));
  const isOffered = state === "approved" && hasRole(ctx, "manager") && configuration.toOn === null && isNewer;
  return {
    adopted:
      adopted === undefined
        ? null
        : {
            number: adopted.axis.number,
            inForceFrom: adopted.axis.inForceFrom.toISOString(),
            by: setBy(adopted),
          },
    next: isOffered
      ? {
          number: (await findLastAxisNumber(tx, configuration.id)) + 1,
          replaces: inForce?.number ?? null,
          configurationVersion: configuration.version,
        }
      : null,
  };
}
