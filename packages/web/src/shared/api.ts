/**
 * The one door to the server: requests and replies typed by the contract.
 *
 * `api.get("readInstrument", { instrumentId })`, `api.post("beginCheck", {}, body)`. Every change carries the csrf token
 * of the session; refusals are thrown as `ApiProblem`; replies are parsed by the contract, so that what a page holds is
 * what its types say.
 */
import { problemDocument, routes, type Me, type RouteName } from "@wavekeep/api/contract";
import type { z } from "zod";
import { ApiProblem, unreachable } from "./problem.ts";

type Routes = typeof routes;
type Method = "get" | "post" | "put" | "delete";
type Named<M extends Method> = { [N in RouteName]: Routes[N]["method"] extends M ? N : never }[RouteName];
type PathNames<P extends string> = P extends `${string}:${infer N}/${infer Rest}`
  ? N | PathNames<`/${Rest}`>
  : P extends `${string}:${infer N}`
    ? N
    : never;

/** Path parameters of a route, e.g. `{ checkId: string }`; numbers are allowed for versions. */
export type RouteParams<N extends RouteName> = { [K in PathNames<Routes[N]["path"]>]: string | number };
export type RouteReply<N extends RouteName> = Routes[N] extends { reply: infer S extends z.ZodType }
  ? z.output<S>
  : void;
export type RouteBody<N extends RouteName> = Routes[N] extends { body: infer S extends z.ZodType }
  ? z.input<S>
  : undefined;
export type RouteQuery<N extends RouteName> = Routes[N] extends { query: infer S extends z.ZodType }
  ? Partial<z.input<S>>
  : undefined;

interface SendOptions {
  signal?: AbortSignal;
  /** Given where a repeated press must not act twice; the server answers the second with the first reply. */
  idempotencyKey?: string;
}

let csrfToken = "";
let personId: string | null = null;
/** `me` is the session as it stands now, where it is known. */
type OnSessionLost = (problem: ApiProblem, me: Me | null) => void;
let sessionLost: OnSessionLost = () => undefined;

/** Keeps the token that the session's reply brought, and whose it is. */
export function keepCsrfToken(me: Me): Me {
  csrfToken = me.csrfToken;
  personId = me.person?.id ?? null;
  return me;
}

/** Called whenever a request is refused because this person is not signed in (any more). */
export function onSessionLost(listener: OnSessionLost): void {
  sessionLost = listener;
}

/** Address of a route below `/api`, with its parameters and query filled in. */
export function routeUrl(
  name: RouteName,
  params: Record<string, string | number> = {},
  query: Record<string, unknown> = {},
): string {
  const path = routes[name].path.replace(/:(\w+)/g, (_, key: string) => {
    const value = params[key];
    if (value === undefined) throw new Error(`Route ${name} needs ${key}.`);
    return encodeURIComponent(String(value));
  });
  const search = new URLSearchParams();
  for (const [key, value] of Object.entries(query)) {
    if (value !== undefined && value !== null && value !== "") search.set(key, String(value));
  }
  const text = search.toString();
  return `/api${path}${text === "" ? "" : `?${text}`}`;
}

async function problemFrom(response: Response): Promise<ApiProblem> {
  const parsed = problemDocument.safeParse(await response.json().catch(() => null));
  if (parsed.success) return new ApiProblem(parsed.data);
  return new ApiProblem({
    type: "/problems/no-answer",
    title: "The server could not answer",
    status: response.status,
    detail: `The server answered ${response.status} without saying why. What you typed is still here; try again in a moment.`,
  });
}

function parseReply<N extends RouteName>(name: N, value: unknown): RouteReply<N> {
  const route = routes[name];
  if (!("reply" in route)) return undefined as RouteReply<N>;
  const parsed = route.reply.safeParse(value);
  if (!parsed.success) {
    const issue = parsed.error.issues[0];
    throw new ApiProblem({
      type: "/problems/unreadable-reply",
      title: "The server's answer was not understood",
      status: 0,
      detail: `The server's answer was not understood (${name}: ${issue?.path.join(".") ?? ""} ${issue?.message ?? ""}). Reload the page: the server may be newer than it.`,
    });
  }
  return parsed.data as RouteReply<N>;
}

const isSessionEnd = (problem: ApiProblem) => problem.kind === "not-signed-in" || problem.kind === "session-ended";

/** Doors refuse what was typed; everywhere else a refusal for want of a session means that it ended. */
const DOORS: ReadonlySet<RouteName> = new Set([
  "signIn",
  "benchSignIn",
  "acceptInvitation",
  "forgetPassword",
  "resetPassword",
]);

/**
 * After a token was refused: reads the session anew. True when the same person (or, at a door, nobody) holds it with
 * another token, so that the request, of which the server did nothing, may be sent once more.
 */
async function renewToken(name: RouteName, problem: ApiProblem): Promise<boolean> {
  const before = { token: csrfToken, personId };
  const me = keepCsrfToken(await api.get("readSession"));
  if (personId !== before.personId && !DOORS.has(name)) {
    sessionLost(problem, me);
    return false;
  }
  return me.csrfToken !== before.token;
}

async function send<N extends RouteName>(
  name: N,
  params: RouteParams<N>,
  query: unknown,
  body: unknown,
  options: SendOptions,
  isAgain = false,
): Promise<RouteReply<N>> {
  const { method } = routes[name];
  const headers: Record<string, string> = { accept: "application/json" };
  if (method !== "get") headers["x-csrf-token"] = csrfToken;
  if (body !== undefined) headers["content-type"] = "application/json";
  if (options.idempotencyKey !== undefined) headers["idempotency-key"] = options.idempotencyKey;
  const response = await fetch(routeUrl(name, params, (query ?? {}) as Record<string, unknown>), {
    method: method.toUpperCase(),
    headers,
    credentials: "same-origin",
    body: body === undefined ? undefined : JSON.stringify(body),
    signal: options.signal,
  }).catch((error: unknown) => {
    throw error instanceof DOMException && error.name === "AbortError" ? error : unreachable();
  });
  if (!response.ok) {
    const problem = await problemFrom(response);
    if (problem.kind === "csrf" && !isAgain && (await renewToken(name, problem)))
      return send(name, params, query, body, options, true);
    if (isSessionEnd(problem) && !DOORS.has(name)) sessionLost(problem, null);
    throw problem;
  }
  return parseReply(name, response.status === 204 ? undefined : await response.json().catch(() => undefined));
}

/** Share sent so far, 0 to 1. */
export type OnProgress = (share: number) => void;

/** Sends files as multipart/form-data, field as the contract names it. XMLHttpRequest, because fetch tells no upload progress. */
function upload<N extends Named<"post">>(
  name: N,
  params: RouteParams<N>,
  files: readonly File[],
  fields: Record<string, string> = {},
  onProgress: OnProgress = () => undefined,
): Promise<RouteReply<N>> {
  const route = routes[name];
  if (!("upload" in route)) throw new Error(`Route ${name} takes no files.`);
  const form = new FormData();
  for (const [key, value] of Object.entries(fields)) form.set(key, value);
  for (const file of files) form.append(route.upload.field, file, file.name);
  return new Promise((resolve, reject) => {
    const request = new XMLHttpRequest();
    request.open("POST", routeUrl(name, params));
    request.setRequestHeader("x-csrf-token", csrfToken);
    request.setRequestHeader("accept", "application/json");
    request.upload.onprogress = (event) => {
      if (event.lengthComputable) onProgress(event.loaded / event.total);
    };
    request.onerror = () => reject(unreachable());
    request.onload = async () => {
      const response = new Response(request.status === 204 ? null : request.responseText, {
        status: request.status === 0 ? 502 : request.status,
      });
      if (!response.ok) {
        const problem = await problemFrom(response);
        if (isSessionEnd(problem)) sessionLost(problem, null);
        reject(problem);
        return;
      }
      try {
        resolve(parseReply(name, await response.json()));
      } catch (error) {
        reject(error as Error);
      }
    };
    request.send(form);
  });
}

export const api = {
  get: <N extends Named<"get">>(
    name: N,
    params: RouteParams<N> = {} as RouteParams<N>,
    query?: RouteQuery<N>,
    options: SendOptions = {},
  ) => send(name, params, query, undefined, options),
  post: <N extends Named<"post">>(name: N, params: RouteParams<N>, body?: RouteBody<N>, options: SendOptions = {}) =>
    send(name, params, undefined, body, options),
  put: <N extends Named<"put">>(name: N, params: RouteParams<N>, body: RouteBody<N>, options: SendOptions = {}) =>
    send(name, params, undefined, body, options),
  delete: <N extends Named<"delete">>(
    name: N,
    params: RouteParams<N> = {} as RouteParams<N>,
    options: SendOptions = {},
  ) => send(name, params, undefined, undefined, options),
  upload,
};
