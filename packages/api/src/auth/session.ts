/**
 * Sessions: in PostgreSQL, with a cookie of this server alone, an idle limit, and a token that every change must carry.
 *
 * The cookie's name holds the port: several Wavekeeps side by side on one machine share the host, and so would share it.
 */
import connectPgSimple from "connect-pg-simple";
import { createHmac, randomBytes, timingSafeEqual } from "node:crypto";
import type { Request, RequestHandler, Response } from "express";
import session from "express-session";
import type { Config } from "../config.ts";
import type { Database } from "../db/connection.ts";
import type { Context } from "../db/tenancy.ts";
import { problem } from "../http/problem.ts";
import { loadContext } from "./context.ts";

declare module "express-session" {
  interface SessionData {
    personId: string;
    labId: string | null;
    /** Shared PC on which this session lives, with its name. */
    benchDeviceId: string | null;
    benchName: string | null;
    /** Last deed, ms since 1970 by the server's clock. */
    seenAt: number;
  }
}

export const IDLE_SECONDS = 20 * 60;
export const BENCH_IDLE_SECONDS = 2 * 60;
const SESSION_HOURS = 12;
/** The store is written at most this often for the idle limit's sake. */
const SEEN_STEP_MS = 10_000;
const ANONYMOUS_HOURS = 24;

export const cookieNames = (config: Config) => ({
  session: `wavekeep_${config.port}`,
  anonymous: `wavekeep_visit_${config.port}`,
  bench: `wavekeep_bench_${config.port}`,
});

/** The store's middleware. */
export function sessionMiddleware(config: Config, db: Database): RequestHandler {
  const Store = connectPgSimple(session);
  return session({
    name: cookieNames(config).session,
    secret: config.sessionKey,
    store: new Store({
      pool: db.pool,
      tableName: "sessions",
      createTableIfMissing: false,
      pruneSessionInterval: false,
      disableTouch: true,
    }),
    resave: false,
    saveUninitialized: false,
    cookie: {
      httpOnly: true,
      sameSite: "lax",
      secure: config.secureCookies,
      maxAge: SESSION_HOURS * 3600 * 1000,
      path: "/",
    },
  });
}

/**
 * Ends a session that was idle too long, and notes that this one is used. Reading who is signed in does not count as
 * use: a page may ask for it as often as it likes.
 */
export const idleMiddleware: RequestHandler = (req, _res, next) => {
  const { session: current } = req;
  if (current.personId === undefined) return next();
  const idleMs = Date.now() - (current.seenAt ?? 0);
  if (idleMs > idleSeconds(req) * 1000) {
    current.destroy((error: unknown) => (error ? next(error) : next()));
    return;
  }
  const onlyAsking = req.method === "GET" && req.path === "/session";
  if (!onlyAsking && idleMs > SEEN_STEP_MS) current.seenAt = Date.now();
  next();
};

export const idleSeconds = (req: Request): number =>
  typeof req.session?.benchDeviceId === "string" ? BENCH_IDLE_SECONDS : IDLE_SECONDS;

/** Person signed in; null otherwise. */
export const personOf = (req: Request): string | null => req.session?.personId ?? null;

const contexts = new WeakMap<Request, Promise<Context | null>>();

/** Context of the request, read once. */
export function contextOf(db: Database, req: Request): Promise<Context | null> {
  const personId = personOf(req);
  const labId = req.session?.labId;
  if (personId === null || typeof labId !== "string") return Promise.resolve(null);
  let known = contexts.get(req);
  if (known === undefined) {
    known = loadContext(db, personId, labId);
    contexts.set(req, known);
  }
  return known;
}

/** Who is signed in changed within this request. */
export const forgetContext = (req: Request): void => void contexts.delete(req);

/** Begin a session under a new id, so that a cookie from before the sign-in is worth nothing. */
export async function beginSession(
  req: Request,
  data: { personId: string; labId: string | null; bench: { id: string; name: string } | null },
): Promise<void> {
  await new Promise<void>((resolve, reject) =>
    req.session.regenerate((error: unknown) => (error ? reject(error as Error) : resolve())),
  );
  req.session.personId = data.personId;
  req.session.labId = data.labId;
  req.session.benchDeviceId = data.bench?.id ?? null;
  req.session.benchName = data.bench?.name ?? null;
  req.session.seenAt = Date.now();
  forgetContext(req);
  await new Promise<void>((resolve, reject) =>
    req.session.save((error: unknown) => (error ? reject(error as Error) : resolve())),
  );
}

/** The session goes on as one of this shared PC, with its short idle lock. */
export function moveToBench(req: Request, bench: { id: string; name: string }): void {
  req.session.benchDeviceId = bench.id;
  req.session.benchName = bench.name;
}

export async function endSession(req: Request): Promise<void> {
  forgetContext(req);
  await new Promise<void>((resolve, reject) =>
    req.session.destroy((error: unknown) => (error ? reject(error as Error) : resolve())),
  );
}

/** A cookie's value, or null. */
export function readCookie(req: Request, name: string): string | null {
  for (const pair of (req.headers.cookie ?? "").split(";")) {
    const [key, ...rest] = pair.trim().split("=");
    if (key === name) {
      try {
        return decodeURIComponent(rest.join("="));
      } catch {
        return null;
      }
    }
  }
  return null;
}

const token = (config: Config, what: string): string =>
  createHmac("sha256", config.sessionKey).update(`csrf:${what}`).digest("base64url");

/** Token for the header `x-csrf-token`: bound to the session, or to a visit's cookie before sign-in. */
export function csrfToken(config: Config, req: Request, res: Response): string {
  if (personOf(req) !== null) return token(config, `session:${req.sessionID}`);
  const { anonymous } = cookieNames(config);
  let visit = readCookie(req, anonymous);
  if (visit === null || visit.length < 20) {
    visit = randomBytes(18).toString("base64url");
    res.cookie(anonymous, visit, {
      httpOnly: true,
      sameSite: "strict",
      secure: config.secureCookies,
      maxAge: ANONYMOUS_HOURS * 3600 * 1000,
      path: "/",
    });
  }
  return token(config, `visit:${visit}`);
}

/**
 * Every change carries the token, and comes from a page of this server.
 *
 * @throws problem "csrf"
 */
export function csrfMiddleware(config: Config): RequestHandler {
  return (req, _res, next) => {
    if (req.method === "GET" || req.method === "HEAD" || req.method === "OPTIONS") return next();
    const visit = readCookie(req, cookieNames(config).anonymous);
    const expected =
      personOf(req) !== null
        ? token(config, `session:${req.sessionID}`)
        : visit === null
          ? null
          : token(config, `visit:${visit}`);
    const sent = req.get("x-csrf-token") ?? "";
    const site = req.get("sec-fetch-site");
    const foreign = site !== undefined && site !== "same-origin" && site !== "none";
    if (expected === null || foreign || !sameText(sent, expected)) {
      // Who was signed out meanwhile must hear that, and not about a token.
      if (personOf(req) === null && !foreign && readCookie(req, cookieNames(config).session) !== null) {
        throw problem(
          "session-ended",
          "You were signed out, on another device or after a while without use. Sign in again; what you typed is still in the form.",
        );
      }
      throw problem(
        "csrf",
        "This page was open before you signed in or out elsewhere. Reload it and try again; nothing was changed.",
      );
    }
    next();
  };
}

function sameText(a: string, b: string): boolean {
  const [left, right] = [Buffer.from(a), Buffer.from(b)];
  return left.length === right.length && timingSafeEqual(left, right);
}
