/** Builds the app: the order of everything a request passes is on this screen. */
import express, { type Express } from "express";
import helmet from "helmet";
import { pinoHttp } from "pino-http";
import { sql } from "drizzle-orm";
import { contextOf, csrfMiddleware, idleMiddleware, personOf, sessionMiddleware } from "./auth/session.ts";
import { mountCapabilities } from "./capabilities.ts";
import { routes } from "./contract/routes.ts";
import type { Database } from "./db/connection.ts";
import { inLab } from "./db/tenancy.ts";
import { errorHandler, unknownRoute } from "./http/errors.ts";
import { mount, type Api } from "./http/mount.ts";
import { openApi, openApiPage } from "./http/openapi.ts";
import { problem } from "./http/problem.ts";
import { serveWeb } from "./http/static-web.ts";
import { mailPage, type MailCatcher } from "./mail/catcher.ts";
import { writeTrail } from "./records/trail.ts";
import type { Services } from "./services.ts";

export interface AppOptions {
  /** The local mail catcher of a demo: then its page exists. */
  catcher?: MailCatcher;
}

/** What the log keeps of a request: no cookies, no tokens, no query. */
const logged = {
  req: (req: { method: string; url: string }) => ({ method: req.method, url: req.url.split("?")[0] }),
  res: (res: { statusCode: number }) => ({ status: res.statusCode }),
};

/** JSON bodies are forms and settings; files come as multipart and have their own limits. */
const JSON_LIMIT = "1mb";

export function createApp(services: Services, options: AppOptions = {}): Express {
  const { config, db, logger } = services;
  const app = express();
  app.disable("x-powered-by");
  app.set("trust proxy", config.trustProxy);
  app.set("query parser", "simple");
  app.use(securityHeaders(config.secureCookies));
  app.use(pinoHttp({ logger, autoLogging: { ignore: (req) => req.method === "GET" }, serializers: logged }));

  app.get("/api/docs", (_req, res) => void res.type("html").send(openApiPage(config.version)));
  if (options.catcher !== undefined) app.get("/dev/mail", mailPage(options.catcher));

  const router = express.Router();
  const api: Api = {
    router,
    db,
    contextOf: (req) => contextOf(db, req),
    personOf,
    relations: new Map(),
    mounted: new Set(),
    checkReplies: config.test,
    onRefused: (ctx, action, route) =>
      inLab(db, ctx, async (tx) => {
        await writeTrail(tx, ctx, {
          action: "action.refused",
          about: { kind: "route", id: route, label: routes[route].summary },
          why: action,
        });
      }),
  };
  mount(api, routes.health, async () => {
    await assertReady(db);
    return { status: "ready", version: config.version };
  });
  mount(api, routes.openapi, async () => openApi(config.version));
  mountCapabilities(api, services);

  app.use(
    "/api",
    (_req, res, next) => {
      res.setHeader("Cache-Control", "no-store");
      next();
    },
    sessionMiddleware(config, db),
    idleMiddleware,
    csrfMiddleware(config),
    express.json({ limit: JSON_LIMIT }),
    router,
    unknownRoute,
  );
  if (config.webDir !== null) app.use(serveWeb(config.webDir));
  app.use(errorHandler(logger));
  return app;
}

/** `upgrade-insecure-requests` and HSTS only behind TLS: on plain http they leave the page empty. */
const securityHeaders = (behindTls: boolean) =>
  helmet({
    contentSecurityPolicy: {
      directives: {
        defaultSrc: ["'self'"],
        scriptSrc: ["'self'"],
        // Drawings place their marks with style attributes.
        styleSrc: ["'self'", "'unsafe-inline'"],
        imgSrc: ["'self'", "data:", "blob:"],
        fontSrc: ["'self'"],
        workerSrc: ["'self'", "blob:"],
        connectSrc: ["'self'"],
        objectSrc: ["'none'"],
        frameAncestors: ["'none'"],
        upgradeInsecureRequests: behindTls ? [] : null,
      },
    },
    strictTransportSecurity: behindTls,
    crossOriginOpenerPolicy: { policy: "same-origin" },
    referrerPolicy: { policy: "same-origin" },
  });

async function assertReady(db: Database): Promise<void> {
  try {
    await db.orm.execute(sql`select 1`);
  } catch {
    throw problem("not-ready", "The database does not answer. Nothing is lost; try again in a moment.");
  }
}
