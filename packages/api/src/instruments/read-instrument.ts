/** One instrument with its configurations, last check and prognosis. */
import type { Instrument } from "../contract/instruments.ts";
import type { InstrumentKind } from "../contract/common.ts";
import { listCheckRows } from "../checks/list-checks.ts";
import { lineText, percentText } from "../checks/words.ts";
import { recordNow, type Context, type Tx } from "../db/tenancy.ts";
import { dateIn, dayText, dueText } from "./dates.ts";
import { listFleet } from "./fleet.ts";
import { presentConfiguration, type ConfigurationFacts } from "./present.ts";
import {
  countChecks,
  countOpenAlerts,
  findAxisAt,
  findInstrument,
  findLatestTolerance,
  findStanding,
  listConfigurations,
} from "./queries.ts";

const recentCount = 8;

/** @throws problem "not-found" */
export async function readInstrument(tx: Tx, ctx: Context, instrumentId: string): Promise<Instrument> {
  const { instrument, ownerName } = await findInstrument(tx, instrumentId);
  const now = await recordNow(tx);
  const today = dateIn(ctx.zone, now);
  const facts: ConfigurationFacts[] = [];
  for (const row of await listConfigurations(tx, { instrumentId })) {
    const { id } = row.configuration;
    facts.push({
      ...row,
      tolerance: await findLatestTolerance(tx, id),
      standing: await findStanding(tx, id),
      axis: await findAxisAt(tx, id, now),
    });
  }
  const [fleetRow] = await listFleet(tx, today, { instrumentId, withRetired: true });
  const row = fleetRow!;
  const recent = await listCheckRows(tx, { instrumentId, limit: recentCount });
  const drafts = await listCheckRows(tx, {
    configurationId: row.configurationId,
    states: ["begun", "set-aside", "returned"],
    limit: 1,
  });
  const last = row.lastCheckId === null ? [] : await listCheckRows(tx, { checkId: row.lastCheckId, limit: 1 });
  const counted = await countChecks(tx, instrumentId);
  const draft = drafts[0]?.summary;
  return {
    id: instrument.id,
    name: instrument.name,
    kind: instrument.kind as InstrumentKind,
    maker: instrument.maker,
    model: instrument.model,
    serial: instrument.serial,
    owner: { id: instrument.ownerId, name: ownerName },
    place: instrument.place,
    altitudeM: instrument.altitudeM,
    purchasedOn: instrument.purchasedOn,
    retiredAt: instrument.retiredAt?.toISOString() ?? null,
    retiredReason: instrument.retiredReason,
    version: instrument.version,
    state: row.state,
    restriction: row.restriction,
    toleranceUsed: row.toleranceUsed,
    guardShare: row.guardShare,
    prognosis: prognosisOf(row, instrument.retiredReason),
    configurations: facts.map(presentConfiguration),
    currentConfigurationId: row.configurationId,
    lastCheck: last[0] === undefined ? null : { summary: last[0].summary, strip: row.strip },
    recentChecks: recent.map(({ summary }) => summary),
    checkCount: counted.count,
    firstCheckAt: counted.firstAt?.toISOString() ?? null,
    openDraft: draft === undefined ? null : { id: draft.id, number: draft.number },
    openAlertCount: await countOpenAlerts(tx, instrumentId),
  };
}

/** Where the instrument stands and what comes, in one or two sentences. */
function prognosisOf(row: Awaited<ReturnType<typeof listFleet>>[number], retiredReason: string | null): string {
  if (row.retiredAt !== null) return `Retired${retiredReason === null ? "" : `: ${retiredReason}`}`;
  const due =
    row.dueOn === null
      ? "No check is planned."
      : `Its next check is due ${dayText(row.dueOn)}${row.dueDays !== null && row.dueDays < 0 ? `, ${dueText(row.dueDays)}` : ""}.`;
  if (row.toleranceUsed === null || row.worst === null)
    return `Not judged yet. ${due.replace("Its next check", "Its check")}`;
  const used = `Uses ${percentText(row.toleranceUsed)} of its tolerance, at ${lineText(row.worst.species, row.worst.wavelengthNm)}`;
  switch (row.state) {
    case "on-hold":
      return `${used}, and is on hold: a manager confirms or lifts it.${row.asLeftAsked ? " An as-left check is asked for." : ""}`;
    case "restricted":
      return `${used}. Restricted: ${row.restriction ?? ""}`;
    case "out-of-service":
    case "quarantined":
      return `${used}, and is not in use.${row.asLeftAsked ? " An as-left check is asked for." : ""}`;
    default:
      return `${used}. ${due}`;
  }
}
