import path from "node:path";
import { ESLint } from "eslint";
import { expect, test } from "vitest";
import { importProblem } from "./import-direction.mjs";
import { projectDir } from "../processes.mjs";

const packages = path.join(projectDir, "packages");
const problem = (file: string, source: string) => importProblem(path.join(packages, file), source);

test.each([
  ["core/src/drift/a.ts", "@wavekeep/api/contract"],
  ["core/src/drift/a.ts", "node:fs"],
  ["core/src/drift/a.ts", "../testing/simulate.ts"],
  ["core/src/drift/a.ts", "../../../api/src/config.ts"],
  ["api/src/alerts/routes.ts", "./queries.ts"],
  ["api/src/alerts/routes.ts", "../db/schema/index.ts"],
  ["api/src/alerts/service.ts", "express"],
  ["api/src/alerts/queries.ts", "./service.ts"],
  ["api/src/contract/alerts.ts", "../config.ts"],
  ["api/src/alerts/service.ts", "@wavekeep/web"],
  ["web/src/alerts/page.tsx", "@wavekeep/api/config"],
  ["web/src/alerts/page.tsx", "../checks/check-row.tsx"],
  ["web/src/alerts/page.tsx", "../app/router.tsx"],
  ["web/src/ui/button.tsx", "../alerts/queries.ts"],
])("%s may not import %s", (file, source) => {
  expect(problem(file, source)).toMatch(/\.$/);
});

test.each([
  ["core/src/drift/a.ts", "../numeric/elementary.ts"],
  ["core/src/drift/a.test.ts", "node:fs"],
  ["api/src/alerts/routes.ts", "./service.ts"],
  ["api/src/alerts/service.ts", "@wavekeep/core"],
  ["web/src/alerts/page.tsx", "@wavekeep/api/contract"],
  ["web/src/alerts/page.tsx", "../ui/button.tsx"],
  ["web/src/app/router.tsx", "../alerts/page.tsx"],
])("%s may import %s", (file, source) => {
  expect(problem(file, source)).toBeNull();
});

test("the measuring core refuses what differs between engines, and what knows the time or the place", async () => {
  const eslint = new ESLint({ cwd: projectDir });
  const rulesOf = async (code: string) => {
    const [result] = await eslint.lintText(code, { filePath: path.join(packages, "core/src/drift/snippet.ts") });
    return result!.messages.map((message) => message.ruleId);
  };
  for (const code of [
    "export const a = Math.exp(1);",
    "export const a = Math.pow(2, 3);",
    "export const a = Math.random();",
    "export const a = Math['sin'](1);",
    "export const { exp } = Math;",
    "export const a = 2 ** 3;",
    "export let a = 2; a **= 3;",
    "export const a = (1.5).toLocaleString();",
  ]) {
    expect(await rulesOf(code), code).toEqual(["no-restricted-syntax"]);
  }
  expect(await rulesOf("export const a = new Date();")).toEqual(["no-restricted-globals"]);
  expect(await rulesOf("export const a = Intl;")).toEqual(["no-restricted-globals"]);
  expect(await rulesOf("export const a = Math.sqrt(Math.abs(-2)) + Math.imul(3, 4);")).toEqual([]);
});
