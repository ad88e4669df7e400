import { routes } from "../contract/routes.ts";
import { mount, type Api } from "../http/mount.ts";
import { readDrift } from "./service.ts";

export function mountDrift(api: Api): void {
  mount(api, routes.readDrift, ({ ctx, params }) => readDrift(api.db, ctx, params.configurationId));
}
