import { routes } from "../contract/routes.ts";
import { mount, type Api } from "../http/mount.ts";
import {
  changeSource,
  createSource,
  listLabSources,
  readCertificate,
  readLabSource,
  retireSource,
  storeCertificate,
} from "./service.ts";

export function mountSources(api: Api): void {
  mount(api, routes.listSources, ({ ctx }) => listLabSources(api.db, ctx));
  mount(api, routes.createSource, ({ ctx, body }) => createSource(api.db, ctx, body));
  mount(api, routes.readSource, ({ ctx, params }) => readLabSource(api.db, ctx, params.sourceId));
  mount(api, routes.changeSource, ({ ctx, params, body }) => changeSource(api.db, ctx, params.sourceId, body));
  mount(api, routes.retireSource, ({ ctx, params, body }) => retireSource(api.db, ctx, params.sourceId, body));
  mount(api, routes.storeCertificate, ({ ctx, params, files }) =>
    storeCertificate(api.db, ctx, params.sourceId, files[0]!),
  );
  mount(api, routes.readCertificate, ({ ctx, params }) => readCertificate(api.db, ctx, params.sourceId));
}
