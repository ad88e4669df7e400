/** Events of instruments: SQL only. */
import { asc, eq } from "drizzle-orm";
import { instrumentEvents, people } from "../db/schema/index.ts";
import type { Tx } from "../db/tenancy.ts";

export type InstrumentEventRow = typeof instrumentEvents.$inferSelect;

/** Events of a configuration in the order they happened. */
export function listEventRows(
  tx: Tx,
  configurationId: string,
): Promise<{ event: InstrumentEventRow; recorderName: string | null }[]> {
  return tx
    .select({ event: instrumentEvents, recorderName: people.name })
    .from(instrumentEvents)
    .leftJoin(people, eq(people.id, instrumentEvents.recordedBy))
    .where(eq(instrumentEvents.configurationId, configurationId))
    .orderBy(asc(instrumentEvents.happenedOn), asc(instrumentEvents.recordedAt));
}
