/** The reply that says who is signed in, where, and what they may do. */
import fs from "node:fs";
import { z } from "zod";
import type { Me } from "../contract/people.ts";
import type { Config } from "../config.ts";
import { inLab, inNoLab, type Context } from "../db/tenancy.ts";
import type { Services } from "../services.ts";
import { findMe, findLab, listMyLabs } from "./queries.ts";

export interface SessionFacts {
  personId: string | null;
  ctx: Context | null;
  benchName: string | null;
  idleSeconds: number;
  csrfToken: string;
}

export async function readMe({ db, config }: Services, facts: SessionFacts): Promise<Me> {
  const { personId, ctx } = facts;
  const [person, labs] =
    personId === null
      ? [null, []]
      : await inNoLab(db, personId, async (tx) => [await findMe(tx, personId), await listMyLabs(tx)] as const);
  const lab = ctx === null ? null : await inLab(db, ctx, (tx) => findLab(tx, ctx.labId));
  return {
    person,
    lab,
    roles: ctx?.roles ?? [],
    isApprover: ctx?.isApprover ?? false,
    ownedInstrumentIds: ctx?.ownedInstrumentIds ?? [],
    labs: labs.map(({ id, name, isDemo }) => ({ id, name, isDemo })),
    bench: facts.benchName === null ? null : { deviceName: facts.benchName, lockAfterSeconds: facts.idleSeconds },
    idleSeconds: facts.idleSeconds,
    csrfToken: facts.csrfToken,
    isDemoServer: config.demo,
    demoPeople: config.demo ? demoPeople(config) : [],
    version: config.version,
  };
}

const signIns = z.array(
  z.object({
    email: z.string(),
    password: z.string(),
    who: z.string().optional(),
    name: z.string().optional(),
    role: z.string().optional(),
  }),
);

/** The demo's sign-ins, from the file that the seeding start left in the data folder. */
function demoPeople(config: Config): Me["demoPeople"] {
  let text: string;
  try {
    text = fs.readFileSync(config.demoSignInsFile, "utf8");
  } catch {
    // No demo lab was seeded in this data folder.
    return [];
  }
  return signIns.parse(JSON.parse(text)).map(({ email, password, who, name, role }) => ({
    email,
    password,
    name: name ?? who ?? email,
    role: role ?? (name === undefined ? "" : (who ?? "")),
  }));
}
