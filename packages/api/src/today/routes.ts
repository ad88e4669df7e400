import { routes } from "../contract/routes.ts";
import { mount, type Api } from "../http/mount.ts";
import { readToday } from "./service.ts";

export function mountToday(api: Api): void {
  mount(api, routes.today, ({ ctx }) => readToday(api.db, ctx));
}
