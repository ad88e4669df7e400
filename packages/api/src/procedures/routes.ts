import { routes } from "../contract/routes.ts";
import { mount, type Api } from "../http/mount.ts";
import { listProcedures } from "./service.ts";

export function mountProcedures(api: Api): void {
  mount(api, routes.listProcedures, ({ ctx }) => listProcedures(api.db, ctx));
}
