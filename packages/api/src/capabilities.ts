/** Every capability of the server: its routes, its relations, what it does at a tick. */
import { openDueAlerts } from "./alerts/overdue-tick.ts";
import { mountAlerts } from "./alerts/routes.ts";
import { mountAuth } from "./auth/routes.ts";
import { mountAxes } from "./axes/routes.ts";
import { mountCaptures } from "./captures/routes.ts";
import { setAsideLeftDrafts } from "./checks/aside-tick.ts";
import { mountChecks } from "./checks/routes.ts";
import { mountDrift } from "./drift/routes.ts";
import { mountEvents } from "./events/routes.ts";
import { assertEverythingMounted, registerRelation, type Api } from "./http/mount.ts";
import { mountImpact } from "./impact/routes.ts";
import type { Ticks } from "./jobs/workers.ts";
import { registerWorkRelations } from "./instruments/relations.ts";
import { mountInstruments } from "./instruments/routes.ts";
import { mountLabs } from "./labs/routes.ts";
import { mountLineLists } from "./linelists/routes.ts";
import { mountPeople } from "./people/routes.ts";
import { mountProcedures } from "./procedures/routes.ts";
import { mountRecords } from "./records/routes.ts";
import { mountSearch } from "./search/routes.ts";
import type { Services } from "./services.ts";
import { mountSources } from "./sources/routes.ts";
import { mountToday } from "./today/routes.ts";

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
  registerWorkRelations(api);
  mountAxes(api);
  mountEvents(api);
  mountDrift(api);
  mountChecks(api, services);
  mountAlerts(api);
  mountImpact(api);
  mountToday(api);
  mountSearch(api);
  assertEverythingMounted(api);
}

/** What falls due without anybody asking, lab by lab. */
export const ticks: Ticks = {
  dueAndOverdue: async (services, lab) => void (await openDueAlerts(services, lab)),
  asideDrafts: async (services, lab) => void (await setAsideLeftDrafts(services, lab)),
};
