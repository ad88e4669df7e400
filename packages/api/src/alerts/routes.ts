import { routes } from "../contract/routes.ts";
import { mount, type Api } from "../http/mount.ts";
import { acknowledgeAlert, listAlerts } from "./service.ts";

export function mountAlerts(api: Api): void {
  mount(api, routes.listAlerts, ({ ctx, query }) => listAlerts(api.db, ctx, query));
  mount(api, routes.acknowledgeAlert, ({ ctx, params, body }) => acknowledgeAlert(api.db, ctx, params.alertId, body));
}
