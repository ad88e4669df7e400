import { routes } from "../contract/routes.ts";
import { mount, type Api } from "../http/mount.ts";
import { search } from "./service.ts";

export function mountSearch(api: Api): void {
  mount(api, routes.search, ({ ctx, query }) => search(api.db, ctx, query));
}
