import { routes } from "../contract/routes.ts";
import { mount, type Api } from "../http/mount.ts";
import { logEvent } from "./service.ts";

export function mountEvents(api: Api): void {
  mount(api, routes.logEvent, ({ ctx, body }) => logEvent(api.db, ctx, body));
}
