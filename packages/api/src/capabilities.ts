/** Every capability of the server: its routes, its relations, what it does at a tick. */
import { mountAuth } from "./auth/routes.ts";
import { mountCaptures } from "./captures/routes.ts";
import { registerRelation, type Api } from "./http/mount.ts";
import type { Ticks } from "./jobs/workers.ts";
import { mountInstruments } from "./instruments/routes.ts";
import { mountLabs } from "./labs/routes.ts";
import { mountLineLists } from "./linelists/routes.ts";
import { mountPeople } from "./people/routes.ts";
import { mountProcedures } from "./procedures/routes.ts";
import { mountRecords } from "./records/routes.ts";
import type { Services } from "./services.ts";
import { mountSources } from "./sources/routes.ts";

export function mountCapabilities(api: Api, services: Services): void {
  registerRelation(api, "named-approver", async (_tx, ctx) => ctx.isApprover);
  mountAuth(api, services);
  mountPeople(api, services);
  mountLabs(api, services);
  mountRecords(api, services);
  mountInstruments(api);
  mountSources(api);
  mountLineLists(api);
  mountProcedures(api);
  mountCaptures(api, services);
}

/** What falls due without anybody asking, lab by lab. */
export const ticks: Ticks = {
  dueAndOverdue: async () => {},
  asideDrafts: async () => {},
};
