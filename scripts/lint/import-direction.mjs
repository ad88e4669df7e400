/**
 * ESLint rule: imports point one way.
 *
 *   core <- api, core <- web, api/contract <- web
 *   in api:  routes -> service -> queries; contract stands alone; a route never touches the database
 *   in web:  shared rooms <- capability <- app; capabilities do not import each other
 */
import path from "node:path";
import { projectDir } from "../processes.mjs";

/** Folders of web/src that any capability may import. */
const webShared = new Set(["ui", "drawings", "shared"]);

/**
 * @param {string} file absolute
 * @returns {{ package: string, room: string, name: string, test: boolean } | null} null outside packages/{core,api,web}/src
 */
function place(file) {
  const parts = path.relative(projectDir, file).split(path.sep);
  if (parts[0] !== "packages" || parts[2] !== "src") return null;
  const inside = parts.slice(3);
  const name = inside.at(-1) ?? "";
  return {
    package: parts[1] ?? "",
    room: inside.length > 1 ? (inside[0] ?? "") : "",
    name,
    test: /\.test\.tsx?$/.test(name) || inside.includes("testing") || inside.includes("test"),
  };
}

/**
 * The sentence against an import, or null when it is fine.
 *
 * @param {string} fromFile absolute path of the importing file
 * @param {string} source what stands after `from`
 */
export function importProblem(fromFile, source) {
  const from = place(fromFile);
  if (from === null) return null;
  const relative = source.startsWith(".");
  const target = relative ? place(path.resolve(path.dirname(fromFile), source)) : null;

  if (relative && target?.package !== from.package) return "Import another package by its name, not by a path.";
  if (from.package === "core") return coreProblem(from, target, source);
  if (from.package === "api") return apiProblem(from, target, source);
  if (from.package === "web") return webProblem(from, target, source);
  return null;
}

/** @typedef {NonNullable<ReturnType<typeof place>>} Place */

/** @param {Place} from @param {Place | null} target @param {string} source */
function coreProblem(from, target, source) {
  if (from.test) return null;
  if (target?.test) return "The measuring core must not depend on its own test helpers.";
  if (target === null && !/^(csv-parse|jcampconverter|ml-regression)(\/|$)/.test(source))
    return "The measuring core imports itself, csv-parse, jcampconverter and ml-regression: no I/O, no other packages.";
  return null;
}

/** @param {Place} from @param {Place | null} target @param {string} source */
function apiProblem(from, target, source) {
  if (/^@wavekeep\/web/.test(source)) return "The server must not import the client.";
  if (from.room === "contract" && target !== null && target.room !== "contract") {
    return "The contract is read by the client too: it imports only contract files, zod and the core.";
  }
  if (from.test) return null;
  if (from.name === "routes.ts" && target !== null) {
    if (target.name === "queries.ts" || target.room === "db") return "A route never sees SQL: call the service.";
  }
  if (from.name === "routes.ts" && /^(drizzle-orm|pg)(\/|$)/.test(source))
    return "A route never sees SQL: call the service.";
  if (from.name === "service.ts" && (/^express(\/|$)/.test(source) || target?.name === "routes.ts")) {
    return "A service never sees a request: it takes a context and parsed input.";
  }
  if (from.name === "queries.ts" && target !== null && (target.name === "service.ts" || target.name === "routes.ts")) {
    return "Queries hold SQL only: they do not call services or routes.";
  }
  return null;
}

/** @param {Place} from @param {Place | null} target @param {string} source */
function webProblem(from, target, source) {
  if (/^@wavekeep\/api(\/|$)/.test(source) && !/^@wavekeep\/api\/contract(\/|$)/.test(source))
    return "The client may import the contract of the api and nothing else of it.";
  if (/^node:/.test(source) && !from.test) return "The client runs in a browser: no Node modules.";
  if (target === null || from.test) return null;
  const outer = from.room === "" || from.room === "app";
  if (outer) return null;
  if (target.room === "app" || target.room === "") return "Only app/ and main.tsx may import from app/.";
  if (webShared.has(from.room) && !webShared.has(target.room)) return "ui, drawings and shared know no capability.";
  if (!webShared.has(target.room) && target.room !== from.room)
    return "Capabilities do not import each other: they meet in app/, or share through ui, drawings or shared.";
  return null;
}

/** @type {import("eslint").Rule.RuleModule} */
export const importDirection = {
  meta: { type: "problem", schema: [] },
  create(context) {
    /** @param {any} node */
    const check = (node) => {
      if (typeof node.source?.value !== "string") return;
      const message = importProblem(context.filename, node.source.value);
      if (message !== null) context.report({ node: node.source, message });
    };
    return {
      ImportDeclaration: check,
      ExportNamedDeclaration: check,
      ExportAllDeclaration: check,
      ImportExpression: check,
    };
  },
};
