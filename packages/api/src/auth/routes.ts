/** Doors of sign-in. Cookies and the session are touched here and nowhere deeper. */
import type { Request, Response } from "express";
import passport from "passport";
import { Strategy as LocalStrategy } from "passport-local";
import { routes } from "../contract/routes.ts";
import { mount, type Api } from "../http/mount.ts";
import { problem } from "../http/problem.ts";
import type { Services } from "../services.ts";
import { readMe } from "./me.ts";
import * as service from "./service.ts";
import {
  beginSession,
  contextOf,
  cookieNames,
  csrfToken,
  endSession,
  forgetContext,
  idleSeconds,
  personOf,
  readCookie,
} from "./session.ts";

export const hostOf = (req: Request): string => req.ip ?? "unknown";

/** The session's reply, for the state after a change of it. */
export async function meOf(services: Services, { req, res }: { req: Request; res: Response }) {
  return readMe(services, {
    personId: personOf(req),
    ctx: await contextOf(services.db, req),
    benchName: req.session?.benchName ?? null,
    idleSeconds: idleSeconds(req),
    csrfToken: csrfToken(services.config, req, res),
  });
}

/** Sign a person in after they proved who they are; on an enrolled PC of that lab the session is the bench's. */
export async function signInPerson(
  services: Services,
  http: { req: Request; res: Response },
  personId: string,
  wantedLabId: string | null,
) {
  const device = await service.findBench(services, readCookie(http.req, cookieNames(services.config).bench));
  const labId = await service.enterLab(services, personId, wantedLabId ?? device?.labId ?? null, null);
  const bench = device !== null && device.labId === labId ? { id: device.id, name: device.name } : null;
  await beginSession(http.req, {
    personId,
    labId: labId ?? (await service.enterLab(services, personId, null, null)),
    bench,
  });
  return meOf(services, http);
}

/** Ask passport's local strategy; its failures are the service's own problems. */
function authenticate(
  authenticator: passport.PassportStatic,
  { req, res }: { req: Request; res: Response },
): Promise<{ personId: string }> {
  return new Promise((resolve, reject) => {
    const done = (error: unknown, user: { personId: string } | false | null) => {
      if (error) reject(error as Error);
      else if (!user) reject(problem("invalid-input", "Write your e-mail address and your password."));
      else resolve(user);
    };
    (
      authenticator.authenticate("local", { session: false }, done) as (
        req: Request,
        res: Response,
        next: (error: unknown) => void,
      ) => void
    )(req, res, reject);
  });
}

export function mountAuth(api: Api, services: Services): void {
  const authenticator = new passport.Passport();
  authenticator.use(
    new LocalStrategy(
      { usernameField: "email", passwordField: "password", passReqToCallback: true, session: false },
      (req, email, password, done) => {
        service.checkSignIn(services, { email, password, host: hostOf(req as Request) }).then(
          (found) => done(null, found as unknown as Express.User),
          (error: unknown) => done(error),
        );
      },
    ),
  );

  mount(api, routes.readSession, ({ http }) => meOf(services, http));
  mount(api, routes.signIn, async ({ http }) => {
    const { personId } = await authenticate(authenticator as unknown as passport.PassportStatic, http);
    return signInPerson(services, http, personId, null);
  });
  mount(api, routes.signOut, async ({ http }) => endSession(http.req));
  mount(api, routes.signOutEverywhere, async ({ ctx, personId, http }) => {
    await service.signOutEverywhere(services, ctx, personId!);
    await endSession(http.req);
  });
  mount(api, routes.switchLab, async ({ personId, body, http }) => {
    const labId = await service.enterLab(services, personId!, body.labId, http.req.session.benchName ?? null);
    if (labId === null) throw problem("not-found", "You are not a member of that lab.");
    http.req.session.labId = labId;
    forgetContext(http.req);
    return meOf(services, http);
  });
  mount(api, routes.forgetPassword, ({ body, http }) =>
    service.forgetPassword(services, { ...body, host: hostOf(http.req) }),
  );
  mount(api, routes.resetPassword, ({ body, http }) =>
    service.resetPassword(services, { ...body, host: hostOf(http.req) }),
  );
  mount(api, routes.changeMe, ({ ctx, personId, body }) => service.changeName(services, ctx, personId!, body.name));
  mount(api, routes.changePassword, ({ ctx, personId, body, http }) =>
    service.changePassword(services, ctx, personId!, http.req.sessionID, body),
  );
  mount(api, routes.changePin, ({ ctx, personId, body }) => service.changePin(services, ctx, personId!, body));

  mount(api, routes.readBench, async ({ http }) => {
    const device = await service.findBench(services, readCookie(http.req, cookieNames(services.config).bench));
    return device === null
      ? { device: null, people: [] }
      : { device: { name: device.name, labName: device.labName }, people: device.people };
  });
  mount(api, routes.benchSignIn, async ({ body, http }) => {
    const { device } = await service.checkBenchSignIn(
      services,
      readCookie(http.req, cookieNames(services.config).bench),
      body,
    );
    const labId = await service.enterLab(services, body.personId, device.labId, device.name);
    await beginSession(http.req, { personId: body.personId, labId, bench: { id: device.id, name: device.name } });
    return meOf(services, http);
  });
  mount(api, routes.benchLock, async ({ http }) => endSession(http.req));
}
