/** Stored instruments and configurations to the contract's shapes. */
import type { Standing } from "../contract/common.ts";
import type { Configuration } from "../contract/instruments.ts";
import type { AxisRow, ConfigurationWithMore, CurrentStanding, ToleranceRow } from "./queries.ts";

const byWavekeep = (labId: string) => ({ id: labId, name: "Wavekeep" });

export interface ConfigurationFacts extends ConfigurationWithMore {
  tolerance: ToleranceRow & { setByName: string | null };
  standing: CurrentStanding;
  axis: (AxisRow & { fromCheckNumber: string | null }) | null;
}

export function presentConfiguration({
  configuration,
  procedureTitle,
  assignedName,
  tolerance,
  standing,
  axis,
}: ConfigurationFacts): Configuration {
  return {
    id: configuration.id,
    name: configuration.name,
    fromOn: configuration.fromOn,
    toOn: configuration.toOn,
    endedReason: configuration.endedReason,
    replacesId: configuration.replacesId,
    axisKind: configuration.axisKind as Configuration["axisKind"],
    axisMeaning: configuration.axisMeaning as Configuration["axisMeaning"],
    rangeFirstNm: configuration.rangeFirstNm,
    rangeLastNm: configuration.rangeLastNm,
    nominalFwhmNm: configuration.nominalFwhmNm,
    optics: configuration.optics,
    intervalDays: configuration.intervalDays,
    graceDays: configuration.graceDays,
    dueOn: configuration.dueOn,
    assignedTo:
      configuration.assignedToId === null ? null : { id: configuration.assignedToId, name: assignedName ?? "" },
    setupReproducibilityNm: configuration.setupReproducibilityNm,
    decisionRule: configuration.decisionRule,
    warningShare: configuration.warningShare,
    tolerance: {
      version: tolerance.version,
      segments: tolerance.segments,
      inForceFrom: tolerance.inForceFrom.toISOString(),
      reason: tolerance.reason,
      by:
        tolerance.setBy === null
          ? byWavekeep(tolerance.labId)
          : { id: tolerance.setBy, name: tolerance.setByName ?? "" },
    },
    standing: {
      standing: standing.standing as Standing,
      restriction: standing.restriction,
      since: standing.since.toISOString(),
      reason: standing.reason,
      by: standing.setBy === null ? null : { id: standing.setBy, name: standing.setByName ?? "" },
      checkId: standing.checkId,
      checkNumber: standing.checkNumber,
    },
    axis:
      axis === null
        ? null
        : {
            number: axis.number,
            degree: axis.coefficients.length - 1,
            coefficients: axis.coefficients,
            meaning: axis.meaning as Configuration["axisMeaning"],
            inForceFrom: axis.inForceFrom.toISOString(),
            fromCheckNumber: axis.fromCheckNumber,
          },
    procedureId: configuration.procedureId,
    procedureTitle,
    version: configuration.version,
  };
}
