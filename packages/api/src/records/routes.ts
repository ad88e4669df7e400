import { routes } from "../contract/routes.ts";
import { mount, type Api } from "../http/mount.ts";
import type { Services } from "../services.ts";
import { listTrail, readChain, trailDays } from "./service.ts";

export function mountRecords(api: Api, services: Services): void {
  mount(api, routes.listTrail, ({ ctx, query }) => listTrail(services, ctx, query));
  mount(api, routes.trailDays, ({ ctx }) => trailDays(services, ctx));
  mount(api, routes.readChain, ({ ctx }) => readChain(services, ctx));
}
