/** Reference sources, the line library, procedures. */
import { z } from "zod";
import { date, id, instant, instrumentKind, name, note, personRef, reason, version } from "./common.ts";

export const sourceKind = z.enum([
  "low-pressure-lamp",
  "high-pressure-lamp",
  "laser",
  "absorption-standard",
  "built-in",
]);
export const sourceInput = z.object({
  /** Short label on the shelf: HA-2. */
  label: z.string().trim().min(1, "Write a label.").max(24),
  name,
  kind: sourceKind,
  /** Element symbols of its lines, e.g. ["Hg","Ar"]; lasers may name their line instead. */
  elements: z.array(z.string().max(2)),
  laserLineNm: z.number().positive().nullable(),
  maker: z.string().trim().max(120),
  serial: z.string().trim().max(120),
  builtIntoInstrumentId: id.nullable(),
  warmUpMinutes: z.number().int().min(0).max(600),
  reviewDueOn: date.nullable(),
  note,
});
export const changeSourceInput = sourceInput.extend({ version });
export const source = sourceInput.extend({
  id,
  version,
  retiredAt: instant.nullable(),
  certificate: z
    .object({
      fileName: z.string(),
      sizeBytes: z.number().int(),
      sha256: z.string(),
      storedAt: instant,
      storedBy: personRef,
    })
    .nullable(),
  /** Cautions to show wherever it is chosen: {strong, text}. */
  cautions: z.array(z.object({ title: z.string(), text: z.string() })),
  reviewDueDays: z.number().int().nullable(),
  usedInChecks: z.number().int(),
  builtIntoInstrumentName: z.string().nullable(),
});
export type Source = z.infer<typeof source>;
export const retireSourceInput = z.object({ reason, version });

export const lineListSummary = z.object({
  version: z.string(),
  title: z.string(),
  lineCount: z.number().int(),
  elements: z.array(z.object({ element: z.string(), count: z.number().int() })),
  sources: z.array(z.object({ key: z.string(), citation: z.string() })),
  addedAt: instant,
});
export const listedLine = z.object({
  element: z.string(),
  spectrum: z.string(),
  wavelengthAirNm: z.number().nullable(),
  wavelengthVacuumNm: z.number(),
  uncertaintyNm: z.number().nullable(),
  relativeIntensity: z.number().nullable(),
  source: z.string(),
  note: z.string(),
});
export const linesQuery = z.object({
  element: z.string().max(8).optional(),
  fromNm: z.coerce.number().optional(),
  toNm: z.coerce.number().optional(),
});
export const linesReply = z.object({ version: z.string(), lines: z.array(listedLine) });

export const procedure = z.object({
  id,
  code: z.string(),
  version: z.number().int(),
  title: z.string(),
  instrumentKind,
  approvedAt: instant,
  approvedBy: personRef.nullable(),
  warmUpMinutes: z.number().int(),
  repeats: z.number().int(),
  elements: z.array(z.string()),
  /** Lines required in each tolerance segment; empty: at least `leastLinesPerSegment` of any. */
  requiredLinesNm: z.array(z.number()),
  leastLinesPerSegment: z.number().int(),
  steps: z.array(z.string()),
  acceptance: z.string(),
});
export type Procedure = z.infer<typeof procedure>;
export const sourcesReply = z.object({ items: z.array(source) });
export const lineListsReply = z.object({ items: z.array(lineListSummary) });
export const proceduresReply = z.object({ items: z.array(procedure) });
