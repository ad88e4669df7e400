/** Stored source to the contract's shape. */
import type { Source } from "../contract/sources.ts";
import { daysBetween } from "../instruments/dates.ts";
import { cautionsFor } from "./cautions.ts";
import type { SourceWithMore } from "./queries.ts";

/** @param today date in the lab's zone */
export function presentSource(
  { source, builtIntoName, usedInChecks, certificate }: SourceWithMore,
  today: string,
): Source {
  const kind = source.kind as Source["kind"];
  return {
    id: source.id,
    label: source.label,
    name: source.name,
    kind,
    elements: source.elements,
    laserLineNm: source.laserLineNm,
    maker: source.maker,
    serial: source.serial,
    builtIntoInstrumentId: source.builtIntoInstrumentId,
    builtIntoInstrumentName: builtIntoName,
    warmUpMinutes: source.warmUpMinutes,
    reviewDueOn: source.reviewDueOn,
    reviewDueDays: source.reviewDueOn === null ? null : daysBetween(today, source.reviewDueOn),
    note: source.note,
    version: source.version,
    retiredAt: source.retiredAt?.toISOString() ?? null,
    certificate:
      certificate === null
        ? null
        : {
            fileName: certificate.fileName,
            sizeBytes: certificate.sizeBytes,
            sha256: certificate.sha256,
            storedAt: certificate.storedAt.toISOString(),
            storedBy: { id: certificate.storedById ?? source.id, name: certificate.storedByName ?? "Wavekeep" },
          },
    cautions: cautionsFor({ kind, elements: source.elements, name: source.name }),
    usedInChecks,
  };
}
