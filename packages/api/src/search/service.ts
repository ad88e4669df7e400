/** Find instruments (and their configurations by name), check numbers and people of the lab. */
import { sql } from "drizzle-orm";
import type { z } from "zod";
import type { searchQuery, searchReply } from "../contract/work.ts";
import type { Database } from "../db/connection.ts";
import { inLab, type Context } from "../db/tenancy.ts";

type Hit = z.input<typeof searchReply>["hits"][number];

interface Row extends Record<string, unknown> {
  kind: Hit["kind"];
  id: string;
  label: string;
  note: string;
  rank: number;
  configuration_id: string | null;
}

export function search(
  db: Database,
  ctx: Context,
  { q }: z.output<typeof searchQuery>,
): Promise<z.input<typeof searchReply>> {
  return inLab(db, ctx, async (tx) => {
    const { rows } = await tx.execute<Row>(
      sql`select kind, id, label, note, rank, configuration_id from search_lab(${q})`,
    );
    // What begins with the words typed comes first; within that, instruments, checks, people as the function lists them.
    const ordered = rows
      .map((row, index) => ({ row, index }))
      .sort((a, b) => a.row.rank - b.row.rank || a.index - b.index);
    return { hits: ordered.map(({ row }) => ({ kind: row.kind, label: row.label, note: row.note, to: pathOf(row) })) };
  });
}

function pathOf({ kind, id, configuration_id: configurationId }: Row): string {
  if (kind === "instrument")
    return `/instruments/${id}${configurationId === null ? "" : `?configuration=${configurationId}`}`;
  if (kind === "check") return `/checks/${id}`;
  return `/records?person=${id}`;
}
