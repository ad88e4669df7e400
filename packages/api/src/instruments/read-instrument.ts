/** One instrument with its configurations, last check and prognosis. */
import type { Instrument } from "../contract/instruments.ts";
import type { InstrumentKind } from "../contract/common.ts";
import { listCheckRows } from "../checks/list-checks.ts";
import { lineText, percentText } from "../checks/words.ts";
import { recordNow, type Context, type Tx } from "../db/tenancy.ts";
import { notFound } from "../http/problem.ts";
import { dateIn, dayText, dueText } from "./dates.ts";
import { listFleetConfigurations, type FleetConfiguration } from "./fleet.ts";
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

/**
 * @param configurationId the one to speak of, present or ended; else the worst of the present ones
 * @throws problem "not-found"
 */
export async function readInstrument(
  tx: Tx,
  ctx: Context,
  instrumentId: string,
  configurationId?: string,
): Promise<Instrument> {
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
  const present = await listFleetConfigurations(tx, today, { instrumentId, withRetired: true });
  const row = await findShown(tx, today, instrumentId, present, configurationId);
  // Histories stand end to end while there is one at a time; of several, each has its own.
  const one = present.length === 1 && present[0]!.configurationId === row.configurationId;
  const scope = one ? { instrumentId } : { configurationId: row.configurationId };
  const recent = await listCheckRows(tx, { ...scope, limit: recentCount });
  const drafts = await listCheckRows(tx, {
    configurationId: row.configurationId,
    states: ["begun", "set-aside", "returned"],
    limit: 1,
  });
  const last = row.lastCheckId === null ? [] : await listCheckRows(tx, { checkId: row.lastCheckId, limit: 1 });
  const counted = await countChecks(tx, scope);
  const draft = drafts[0]?.summary;
  const shown = facts.find((fact) => fact.configuration.id === row.configurationId)!.configuration;
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
    configurations: facts.map(presentConfiguration),
    currentConfigurationId: present[0]!.configurationId,
    shownConfigurationId: row.configurationId,
    state: row.state,
    restriction: row.restriction,
    toleranceUsed: row.toleranceUsed,
    guardShare: row.guardShare,
    prognosis: prognosisOf(row, instrument.retiredReason, shown),
    lastCheck: last[0] === undefined ? null : { summary: last[0].summary, strip: row.strip },
    recentChecks: recent.map(({ summary }) => summary),
    checkCount: counted.count,
    firstCheckAt: counted.firstAt?.toISOString() ?? null,
    openDraft: draft === undefined ? null : { id: draft.id, number: draft.number },
    openAlertCount: await countOpenAlerts(tx, instrumentId),
  };
}

/** The configuration to speak of, as a row of the fleet. @throws problem "not-found" for one of another instrument */
async function findShown(
  tx: Tx,
  today: string,
  instrumentId: string,
  present: readonly FleetConfiguration[],
  configurationId: string | undefined,
): Promise<FleetConfiguration> {
  if (configurationId === undefined) return present[0]!;
  const [row] = await listFleetConfigurations(tx, today, { instrumentId, configurationId, withRetired: true });
  if (row === undefined) throw notFound("This configuration");
  return row;
}

/** Where the instrument stands and what comes, in one or two sentences. */
function prognosisOf(
  row: FleetConfiguration,
  retiredReason: string | null,
  shown: { toOn: string | null; endedReason: string | null },
): string {
  if (row.retiredAt !== null) return `Retired${retiredReason === null ? "" : `: ${retiredReason}`}`;
  if (shown.toOn !== null)
    return `Ended on ${dayText(shown.toOn)}${shown.endedReason === null ? "" : `: ${shown.endedReason}`}`;
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
