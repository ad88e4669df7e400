/** Alerts that a check's verdict opens when it is submitted, and closes when it is approved. */
import type { StoredResult } from "../db/schema/analyses.ts";
import { recordNow, type Context, type Tx } from "../db/tenancy.ts";
import { calledText } from "../instruments/called.ts";
import { findConfiguration, findInstrument, findStanding } from "../instruments/queries.ts";
import { isInUse } from "../instruments/states.ts";
import type { Standing } from "../contract/common.ts";
import type { CheckRecord } from "../checks/queries.ts";
import { percentText, worstText } from "../checks/words.ts";
import type { TrailInput } from "../records/trail.ts";
import { queueMail } from "../mail/outbox.ts";
import type { HoldWork } from "../checks/work.ts";
import { closeAlerts, openAlert, type AlertCause, type AlertKind } from "./open-and-close.ts";

/** A pass near the limit, or an inconclusive check: the owner is mailed when the alert opens. A failing one is told by its hold. */
export async function openVerdictAlerts(
  tx: Tx,
  ctx: Context,
  work: HoldWork,
  { check, result, reasons }: { check: CheckRecord; result: StoredResult; reasons: readonly string[] },
): Promise<TrailInput[]> {
  const { instrument } = await findInstrument(tx, check.instrumentId);
  const { name } = await findConfiguration(tx, check.configurationId);
  const said = whatToSay(calledText(instrument.name, name), check.number, result, reasons);
  if (said === null) return [];
  const about = { instrumentId: instrument.id, configurationId: check.configurationId };
  const entries = await openAlert(tx, ctx, { ...said, about, checkId: check.id });
  if (entries.length > 0) {
    await queueMail(tx, ctx, work.jobs, {
      to: { personId: instrument.ownerId },
      subject: `${said.title}, ${check.number}`,
      text: `${said.detail}\n\nThe alert closes by itself when the next good check proves it.\n\n${work.config.publicUrl}/checks/${check.id}\n`,
      causeKey: `${said.kind}:${check.id}:${check.number}:${(await recordNow(tx)).toISOString()}`,
    });
  }
  return entries;
}

function whatToSay(
  called: string,
  checkNumber: string,
  result: StoredResult,
  reasons: readonly string[],
): Pick<AlertCause, "kind" | "title" | "detail"> | null {
  if (result.verdict === "pass" && result.nearLimit) {
    const used = result.toleranceUsed === null ? "" : `, ${percentText(result.toleranceUsed)} of it used`;
    return {
      kind: "near-limit",
      title: `${called} is near its limit`,
      detail: `${worstText(result) ?? "A line is above the warning limit"}${used} (${checkNumber}).`,
    };
  }
  if (result.verdict === "inconclusive") {
    return {
      kind: "inconclusive",
      title: `The last check of ${called} is inconclusive`,
      detail: `${reasons[0] ?? `${worstText(result) ?? "A line"}, inside the guard band.`} (${checkNumber})`,
    };
  }
  return null;
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
