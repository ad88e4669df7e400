import { routes } from "../contract/routes.ts";
import { mount, type Api } from "../http/mount.ts";
import { changeConfiguration, changeStanding, changeTolerance, moveDueDate } from "./configurations.ts";
import { endConfiguration, nextConfiguration } from "./configuration-life.ts";
import { changeInstrument, createInstrument, listInstruments, readLabInstrument, retireInstrument } from "./service.ts";

export function mountInstruments(api: Api): void {
  mount(api, routes.listInstruments, ({ ctx }) => listInstruments(api.db, ctx));
  mount(api, routes.createInstrument, ({ ctx, body }) => createInstrument(api.db, ctx, body));
  mount(api, routes.readInstrument, ({ ctx, params, query }) =>
    readLabInstrument(api.db, ctx, params.instrumentId, query.configurationId),
  );
  mount(api, routes.changeInstrument, ({ ctx, params, body }) =>
    changeInstrument(api.db, ctx, params.instrumentId, body),
  );
  mount(api, routes.retireInstrument, ({ ctx, params, body }) =>
    retireInstrument(api.db, ctx, params.instrumentId, body),
  );
  mount(api, routes.nextConfiguration, ({ ctx, params, body }) =>
    nextConfiguration(api.db, ctx, params.instrumentId, body),
  );
  mount(api, routes.endConfiguration, ({ ctx, params, body }) =>
    endConfiguration(api.db, ctx, params.configurationId, body),
  );
  mount(api, routes.changeConfiguration, ({ ctx, params, body }) =>
    changeConfiguration(api.db, ctx, params.configurationId, body),
  );
  mount(api, routes.changeTolerance, ({ ctx, params, body }) =>
    changeTolerance(api.db, ctx, params.configurationId, body),
  );
  mount(api, routes.changeStanding, ({ ctx, params, body }) =>
    changeStanding(api.db, ctx, params.configurationId, body),
  );
  mount(api, routes.moveDueDate, ({ ctx, params, body }) => moveDueDate(api.db, ctx, params.configurationId, body));
}
