import { hostOf, signInPerson } from "../auth/routes.ts";
import { cookieNames, moveToBench } from "../auth/session.ts";
import { routes } from "../contract/routes.ts";
import { mount, type Api } from "../http/mount.ts";
import type { Services } from "../services.ts";
import { acceptInvitation, readInvitation } from "./invitations.ts";
import * as service from "./service.ts";

const BENCH_COOKIE_DAYS = 400;

export function mountPeople(api: Api, services: Services): void {
  mount(api, routes.readInvitation, ({ params, http }) => readInvitation(services, params.token, hostOf(http.req)));
  mount(api, routes.acceptInvitation, async ({ params, body, http }) => {
    const { personId, labId } = await acceptInvitation(services, params.token, { ...body, host: hostOf(http.req) });
    return signInPerson(services, http, personId, labId);
  });

  mount(api, routes.listPeople, ({ ctx }) => service.listPeople(services, ctx));
  mount(api, routes.invite, ({ ctx, body }) => service.invite(services, ctx, body));
  mount(api, routes.withdrawInvitation, ({ ctx, params }) =>
    service.withdrawInvitation(services, ctx, params.invitationId),
  );
  mount(api, routes.changeRoles, ({ ctx, params, body }) => service.changeRoles(services, ctx, params.personId, body));
  mount(api, routes.endMembership, ({ ctx, params, body }) =>
    service.endMembership(services, ctx, params.personId, body),
  );
  mount(api, routes.appointDeputy, ({ ctx, body }) => service.appointDeputy(services, ctx, body));

  mount(api, routes.enrolBench, async ({ ctx, body, http }) => {
    const device = await service.enrolBench(services, ctx, body.name);
    moveToBench(http.req, { id: device.id, name: body.name });
    http.res.cookie(cookieNames(services.config).bench, device.token, {
      httpOnly: true,
      sameSite: "lax",
      secure: services.config.secureCookies,
      maxAge: BENCH_COOKIE_DAYS * 86_400_000,
      path: "/",
    });
  });
  mount(api, routes.removeBench, ({ ctx, params }) => service.removeBench(services, ctx, params.deviceId));
}
