/**
 * The one door to every route: it exists in the contract, has a policy, and is parsed before a handler sees it.
 *
 * Order: signed in? member of the current lab? role or relation? request key seen before? files, query, body parsed, then
 * the handler. A handler gets a context and parsed input and returns the reply; it never sees the request.
 */
import type { Request, RequestHandler, Response, Router } from "express";
import type { z } from "zod";
import { permissions, type Action, type Permission, type Relation } from "../contract/permissions.ts";
import { routes, type RouteContract, type RouteName } from "../contract/routes.ts";
import type { Database } from "../db/connection.ts";
import type { Context, Tx } from "../db/tenancy.ts";
import { isFileReply, sendFile, type FileReply } from "./file-reply.ts";
import { runOnce } from "./idempotency.ts";
import { inputProblem } from "./input.ts";
import { problem } from "./problem.ts";
import { authorise } from "./policy.ts";
import { receiveFiles, type ReceivedFile } from "./uploads.ts";

/** What a relation is asked with: path and body as parsed, so that it can find the row the request speaks of. */
export interface RelationCall {
  action: Action;
  params: Record<string, string>;
  body: unknown;
}
/** True where the relation holds. Runs in the lab of the context; a row of another lab is not there. */
export type RelationResolver = (tx: Tx, ctx: Context, call: RelationCall) => Promise<boolean>;
export type RelationName = Relation | "contributed-to-check";

/** What the mounted routes share. */
export interface Api {
  router: Router;
  db: Database;
  /** Context of a signed-in request, null before sign-in or without a lab. Set by auth. */
  contextOf(req: Request): Promise<Context | null>;
  /** Person signed in, whatever the lab. */
  personOf(req: Request): string | null;
  relations: Map<RelationName, RelationResolver>;
  /** Names of the routes mounted so far. */
  mounted: Set<RouteName>;
  /** In tests and demos every reply is checked against the contract. */
  checkReplies: boolean;
  /** Keeps a refused action in the trail, in a transaction of its own. */
  onRefused(ctx: Context, action: Action, route: RouteName): Promise<void>;
}

/** Say how a relation of the permissions table is found out. Each once, by the capability that owns the rows. */
export function registerRelation(api: Api, relation: RelationName, resolver: RelationResolver): void {
  if (api.relations.has(relation)) throw new Error(`The relation ${relation} is registered twice.`);
  api.relations.set(relation, resolver);
}

type Params<P extends string> = P extends `${string}:${infer Name}/${infer Rest}`
  ? Record<Name, string> & Params<Rest>
  : P extends `${string}:${infer Name}`
    ? Record<Name, string>
    : unknown;
type Parsed<S> = S extends z.ZodType ? z.output<S> : undefined;
type Granted<R extends RouteContract> = (typeof permissions)[R["policy"]];
type HasLab<R extends RouteContract> = Granted<R> extends { public: true } | { signedIn: true } ? false : true;

/** What a handler gets. */
export interface Call<R extends RouteContract> {
  /** The lab's context; null on routes that need none. */
  ctx: HasLab<R> extends true ? Context : Context | null;
  /** Person signed in; null only on public routes. */
  personId: string | null;
  params: Params<R["path"]>;
  query: Parsed<R["query"]>;
  body: Parsed<R["body"]>;
  /** Text fields that came beside the files. */
  fields: Record<string, string>;
  files: ReceivedFile[];
  /** For auth and bench alone: cookies and the session live here. */
  http: { req: Request; res: Response };
}
export type Reply<R extends RouteContract> = R extends { replyType: string }
  ? FileReply
  : R["reply"] extends z.ZodType
    ? z.input<R["reply"]>
    : void | null | Record<string, unknown>;

/**
 * Mount a route of the contract.
 *
 * @example mount(api, routes.acknowledgeAlert, ({ ctx, params, body }) => acknowledgeAlert(api.db, ctx, params.alertId, body))
 */
export function mount<R extends RouteContract>(
  api: Api,
  route: R,
  handler: (call: Call<R>) => Promise<Reply<R>>,
): void {
  const name = nameOf(route);
  if (api.mounted.has(name)) throw new Error(`The route ${name} is mounted twice.`);
  api.mounted.add(name);
  const permission: Permission = permissions[route.policy];

  const handle: RequestHandler = async (req, res) => {
    const params = pathParams(req);
    const personId = api.personOf(req);
    const needsLab = permission.public !== true && permission.signedIn !== true;
    const ctx = personId === null ? null : await api.contextOf(req);
    if (permission.public !== true && personId === null) throw problem("not-signed-in", "Sign in, then try again.");
    if (needsLab && ctx === null)
      throw problem("not-allowed", "You are not a member of a lab here. Ask a lab manager for an invitation.");

    // Who may not do it at all is refused before anything of the request is received.
    if (needsLab) await authorise(api, name, route.policy, ctx!, { params, body: req.body as unknown });

    const received =
      route.upload === undefined ? { files: [], fields: {} } : await receiveFiles(req, res, route.upload);
    const query = route.query === undefined ? undefined : parse(route.query, req.query, "query");
    const body = route.body === undefined ? undefined : parse(route.body, req.body as unknown, "body");

    const call = { ctx, personId, params, query, body, ...received, http: { req, res } } as unknown as Call<R>;
    const outcome = await runOnce(
      api.db,
      { name, req, ctx, input: { params, query, body }, files: received.files },
      () => handler(call),
    );
    if (isFileReply(outcome)) return sendFile(req, res, outcome);
    if (res.headersSent) return;
    if (route.reply === undefined) {
      if (outcome === undefined || outcome === null) res.status(204).end();
      else res.json(outcome);
      return;
    }
    res.json(api.checkReplies ? checkedReply(name, route.reply, outcome) : outcome);
  };

  api.router[route.method](route.path, handle);
}

/** @throws {Error} when the contract holds a route that nobody mounted, or a relation that nobody can find out */
export function assertEverythingMounted(api: Api): void {
  const missing = (Object.keys(routes) as RouteName[]).filter((name) => !api.mounted.has(name));
  if (missing.length > 0) throw new Error(`Routes of the contract that are not mounted: ${missing.join(", ")}.`);
  for (const permission of Object.values(permissions) as Permission[]) {
    for (const relation of [permission.relation, permission.unless]) {
      if (relation !== undefined && !api.relations.has(relation))
        throw new Error(`Nobody can tell the relation ${relation}.`);
    }
  }
}

function nameOf(route: RouteContract): RouteName {
  const found = (Object.entries(routes) as [RouteName, RouteContract][]).find(([, candidate]) => candidate === route);
  if (found === undefined) throw new Error(`${route.method} ${route.path} is not in the contract.`);
  return found[0];
}

const uuidPattern = /^[0-9a-f]{8}-[0-9a-f]{4}-[0-9a-f]{4}-[0-9a-f]{4}-[0-9a-f]{12}$/i;

/** Path parameters; those that are ids must look like one, else the thing is simply not there. */
function pathParams(req: Request): Record<string, string> {
  const params: Record<string, string> = {};
  for (const [key, value] of Object.entries(req.params)) {
    const text = String(value);
    if ((key.endsWith("Id") && !uuidPattern.test(text)) || text.length > 300) {
      throw problem("not-found", "There is nothing at this address.");
    }
    params[key] = text;
  }
  return params;
}

function parse(shape: z.ZodType, value: unknown, part: "query" | "body"): unknown {
  const parsed = shape.safeParse(value ?? {});
  if (!parsed.success) throw inputProblem(parsed.error, part);
  return parsed.data;
}

function checkedReply(name: RouteName, shape: z.ZodType, outcome: unknown): unknown {
  const parsed = shape.safeParse(outcome);
  if (!parsed.success) throw new Error(`The reply of ${name} breaks the contract: ${parsed.error.message}`);
  return outcome;
}
