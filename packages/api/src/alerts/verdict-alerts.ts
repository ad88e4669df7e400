/** Alerts that a check's verdict opens when it is submitted, and closes when it is approved. */
import type { StoredResult } from "../db/schema/analyses.ts";
import type { Context, Tx } from "../db/tenancy.ts";
import { findInstrument, findStanding } from "../instruments/queries.ts";
import { isInUse } from "../instruments/states.ts";
import type { Standing } from "../contract/common.ts";
import type { CheckRecord } from "../checks/queries.ts";
import { percentText, worstText } from "../checks/words.ts";
import type { TrailInput } from "../records/trail.ts";
import { closeAlerts, openAlert, type AlertKind } from "./open-and-close.ts";

/** A pass near the limit, or an inconclusive check; a failing one is told by its hold. */
export async function openVerdictAlerts(
  tx: Tx,
  ctx: Context,
  check: CheckRecord,
  result: StoredResult,
  reasons: readonly string[],
): Promise<TrailInput[]> {
  const { instrument } = await findInstrument(tx, check.instrumentId);
  const about = { instrumentId: instrument.id, configurationId: check.configurationId };
  if (result.verdict === "pass" && result.nearLimit) {
    const used = result.toleranceUsed === null ? "" : `, ${percentText(result.toleranceUsed)} of it used`;
    return openAlert(tx, ctx, {
      kind: "near-limit",
      about,
      checkId: check.id,
      title: `${instrument.name} is near its limit`,
      detail: `${worstText(result) ?? "A line is above the warning limit"}${used} (${check.number}).`,
    });
  }
  if (result.verdict === "inconclusive") {
    return openAlert(tx, ctx, {
      kind: "inconclusive",
      about,
      checkId: check.id,
      title: `The last check of ${instrument.name} is inconclusive`,
      detail: `${reasons[0] ?? `${worstText(result) ?? "A line"}, inside the guard band.`} (${check.number})`,
    });
  }
  return [];
}

/** What an approved check proves: called after a hold has been ended, so that the standing is the new one. */
export async function closeProvenAlerts(
  tx: Tx,
  check: CheckRecord,
  result: { verdict: string | null; nearLimit: boolean },
  options: { dueMoved: boolean },
): Promise<TrailInput[]> {
  if (result.verdict !== "pass") return [];
  const kinds: AlertKind[] = ["inconclusive"];
  if (!result.nearLimit) kinds.push("near-limit");
  if (options.dueMoved) kinds.push("overdue");
  // A passing as-found check does not put a held configuration back in service, so it does not close what held it.
  const standing = await findStanding(tx, check.configurationId);
  if (isInUse(standing.standing as Standing)) kinds.push("out-of-tolerance");
  return closeAlerts(tx, { configurationId: check.configurationId }, kinds, `${check.number} passed and is approved.`);
}
