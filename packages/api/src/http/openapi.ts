/** OpenAPI 3.1 from the contract, and a plain page that shows it. */
import { z } from "zod";
import { problemDocument } from "../contract/common.ts";
import { permissions, type Permission } from "../contract/permissions.ts";
import { routes, type RouteContract } from "../contract/routes.ts";

type Json = Record<string, unknown>;

/** JSON Schema of a shape, as it is sent (input) or comes back (output). What has no schema of its own is any value. */
const schemaOf = (shape: z.ZodType, io: "input" | "output"): Json => {
  const { $schema: _, ...schema } = z.toJSONSchema(shape, {
    io,
    unrepresentable: "any",
    target: "draft-2020-12",
  }) as Json;
  return schema;
};

const problemReply = (description: string): Json => ({
  description,
  content: { "application/problem+json": { schema: { $ref: "#/components/schemas/Problem" } } },
});

/** Who may, in words. */
export function policyWords(permission: Permission): string {
  if (permission.public === true) return "Anybody.";
  if (permission.signedIn === true) return "Whoever is signed in.";
  if (permission.member === true) return "Any member of the lab.";
  const who = [...(permission.roles ?? []), ...(permission.relation === undefined ? [] : [permission.relation])].join(
    ", ",
  );
  return `${who}${permission.unless === undefined ? "" : `; not who ${permission.unless.replaceAll("-", " ")}`}.`;
}

function operation(name: string, route: RouteContract): Json {
  const permission: Permission = permissions[route.policy];
  const change = route.method !== "get";
  const params = [...route.path.matchAll(/:(\w+)/g)].map(([, key]) => ({
    name: key,
    in: "path",
    required: true,
    schema: { type: "string", ...(key!.endsWith("Id") ? { format: "uuid" } : {}) },
  }));
  const query =
    route.query === undefined
      ? []
      : Object.entries((schemaOf(route.query, "input")["properties"] ?? {}) as Json).map(([key, schema]) => ({
          name: key,
          in: "query",
          required: false,
          schema,
        }));
  const headers = change
    ? [
        {
          name: "x-csrf-token",
          in: "header",
          required: true,
          description: "csrfToken of GET /session.",
          schema: { type: "string" },
        },
        {
          name: "Idempotency-Key",
          in: "header",
          required: false,
          description: "A repetition with the same key gets the first reply, for 24 hours.",
          schema: { type: "string", minLength: 8, maxLength: 200 },
        },
      ]
    : [];
  return {
    operationId: name,
    summary: route.summary,
    description: `Policy ${route.policy}. ${policyWords(permission)}`,
    tags: [route.path.split("/")[1] ?? ""],
    ...(permission.public === true ? { security: [] } : {}),
    parameters: [...params, ...query, ...headers],
    ...requestBody(route),
    responses: {
      ...success(route),
      "400": problemReply("The request could not be read, or a field needs another look."),
      ...(permission.public === true
        ? {}
        : { "401": problemReply("Not signed in."), "403": problemReply("Not allowed.") }),
      "404": problemReply("Not here, or another lab's."),
      ...(change ? { "409": problemReply("Changed in the meantime, or not possible in this state.") } : {}),
    },
  };
}

function requestBody(route: RouteContract): Json {
  if (route.body !== undefined)
    return {
      requestBody: { required: true, content: { "application/json": { schema: schemaOf(route.body, "input") } } },
    };
  if (route.upload === undefined) return {};
  const { field, maxFiles, maxBytes } = route.upload;
  const files = {
    type: "array",
    maxItems: maxFiles,
    items: { type: "string", format: "binary" },
    description: `At most ${maxBytes} bytes each.`,
  };
  return {
    requestBody: {
      required: true,
      content: {
        "multipart/form-data": {
          schema: { type: "object", required: [field], properties: { [field]: files, part: { type: "string" } } },
        },
      },
    },
  };
}

function success(route: RouteContract): Json {
  if (route.replyType !== undefined)
    return {
      "200": {
        description: "The bytes.",
        content: { [route.replyType]: { schema: { type: "string", format: "binary" } } },
      },
    };
  if (route.reply === undefined) return { [route.method === "get" ? "200" : "204"]: { description: "Done." } };
  return {
    "200": { description: "Done.", content: { "application/json": { schema: schemaOf(route.reply, "output") } } },
  };
}

let described: Json | undefined;

/** The whole description; made once. */
export function openApi(version: string): Json {
  if (described !== undefined) return described;
  const paths: Record<string, Json> = {};
  for (const [name, route] of Object.entries(routes) as [string, RouteContract][]) {
    const path = route.path.replace(/:(\w+)/g, "{$1}");
    (paths[path] ??= {})[route.method] = operation(name, route);
  }
  described = {
    openapi: "3.1.0",
    info: {
      title: "Wavekeep",
      version,
      description:
        "Wavelength checks of a laboratory's spectrometers. Times are ISO 8601 in UTC; lists are paged by `after`; refusals are RFC 9457 problem documents with a stable `type`.",
    },
    servers: [{ url: "/api" }],
    security: [{ session: [] }],
    paths,
    components: {
      securitySchemes: {
        session: {
          type: "apiKey",
          in: "cookie",
          name: "wavekeep",
          description: "The session's cookie; its name ends in the server's port.",
        },
      },
      schemas: { Problem: schemaOf(problemDocument, "output") },
    },
  };
  return described;
}

const escapeHtml = (text: string): string => text.replace(/[&<>"']/g, (sign) => `&#${sign.charCodeAt(0)};`);

/** The description as a page: every route with who may and what is sent. No script. */
export function openApiPage(version: string): string {
  const rows = (Object.entries(routes) as [string, RouteContract][])
    .map(([name, route]) => {
      const shape = (title: string, of: z.ZodType | undefined, io: "input" | "output") =>
        of === undefined
          ? ""
          : `<details><summary>${title}</summary><pre>${escapeHtml(JSON.stringify(schemaOf(of, io), null, 2))}</pre></details>`;
      return `<section id="${name}"><h2><code>${route.method.toUpperCase()} /api${escapeHtml(route.path)}</code></h2><p>${escapeHtml(route.summary)}. <span class="note">${escapeHtml(policyWords(permissions[route.policy]))}</span></p>
${shape("Query", route.query, "input")}${shape("Sent", route.body, "input")}${shape("Reply", route.reply, "output")}</section>`;
    })
    .join("\n");
  return `<!doctype html>
<html lang="en"><head><meta charset="utf-8"><meta name="viewport" content="width=device-width, initial-scale=1"><title>Wavekeep: the API</title>
<style>body{font:14px/20px "Roboto Flex Variable",system-ui,sans-serif;max-width:60rem;margin:2rem auto;padding:0 1rem;background:#f6f5f1;color:#14181e}
h1{font-weight:360;font-size:30px;line-height:36px}h2{font-size:14px;margin:0}section{border-top:1px solid #999;padding:10px 0}.note{color:#555}p{margin:2px 0}
pre{overflow:auto;background:#fff;padding:8px;max-height:24rem}a{color:inherit}</style></head>
<body><main><h1>The API of Wavekeep ${escapeHtml(version)}</h1><p>As OpenAPI 3.1: <a href="/api/openapi.json">/api/openapi.json</a>. A change carries the header <code>x-csrf-token</code> from <code>GET /api/session</code>.</p>
${rows}</main></body></html>`;
}
