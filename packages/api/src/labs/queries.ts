import { eq, sql } from "drizzle-orm";
import { labs } from "../db/schema/index.ts";
import type { Tx } from "../db/tenancy.ts";

export type LabRow = typeof labs.$inferSelect;

export async function findLab(tx: Tx, labId: string): Promise<LabRow> {
  const [row] = await tx.select().from(labs).where(eq(labs.id, labId));
  if (row === undefined) throw new Error(`The lab ${labId} of this context is not there.`);
  return row;
}

export const findLabName = async (tx: Tx, labId: string): Promise<string> => (await findLab(tx, labId)).name;

/** The row locked until the transaction ends. */
export async function lockLab(tx: Tx, labId: string): Promise<LabRow> {
  await tx.select({ id: labs.id }).from(labs).where(eq(labs.id, labId)).for("update");
  return findLab(tx, labId);
}

export const saveLab = (tx: Tx, labId: string, change: Partial<Omit<LabRow, "id" | "version">>) =>
  tx
    .update(labs)
    .set({ ...change, version: sql`${labs.version} + 1` })
    .where(eq(labs.id, labId));

export interface VisitedLab {
  labId: string;
  zone: string;
  isDemo: boolean;
}

/** Every lab, for the ticks that ask what is due everywhere. */
export async function listLabsToVisit(tx: Tx): Promise<VisitedLab[]> {
  const { rows } = await tx.execute<{ lab_id: string; zone: string; is_demo: boolean }>(
    sql`select * from labs_to_visit()`,
  );
  return rows.map((row) => ({ labId: row.lab_id, zone: row.zone, isDemo: row.is_demo }));
}

/** Open a lab: for the owner of the installation, and for the seeding role a demo one. */
export const createLab = (
  tx: Tx,
  lab: { id: string; name: string; zone: string; altitudeM: number | null; isDemo: boolean },
) => tx.execute(sql`select create_lab(${lab.id}, ${lab.name}, ${lab.zone}, ${lab.altitudeM}, ${lab.isDemo})`);
