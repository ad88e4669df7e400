import { routes } from "../contract/routes.ts";
import { mount, type Api } from "../http/mount.ts";
import { adoptAxis } from "./adopt.ts";
import { listAxes } from "./read-axes.ts";

export function mountAxes(api: Api): void {
  mount(api, routes.listAxes, ({ ctx, params }) => listAxes(api.db, ctx, params.configurationId));
  mount(api, routes.adoptAxis, ({ ctx, params, body }) => adoptAxis(api.db, ctx, params.configurationId, body));
}
