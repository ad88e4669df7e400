import { routes } from "../contract/routes.ts";
import { mount, type Api } from "../http/mount.ts";
import { listLineLists, listLines } from "./service.ts";

export function mountLineLists(api: Api): void {
  mount(api, routes.listLineLists, async () => listLineLists());
  mount(api, routes.listLines, async ({ params, query }) => listLines(params.lineListVersion, query));
}
