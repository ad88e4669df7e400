import { routes } from "../contract/routes.ts";
import { mount, type Api } from "../http/mount.ts";
import type { Services } from "../services.ts";
import { changeLab, readLab } from "./service.ts";

export function mountLabs(api: Api, services: Services): void {
  mount(api, routes.readLab, ({ ctx }) => readLab(services, ctx));
  mount(api, routes.changeLab, ({ ctx, body }) => changeLab(services, ctx, body));
}
