/** Enforcement of the permissions table. */
import { permissions, type Action, type Permission } from "../contract/permissions.ts";
import type { RouteName } from "../contract/routes.ts";
import { inLab, type Context } from "../db/tenancy.ts";
import type { Api, RelationName } from "./mount.ts";
import { problem } from "./problem.ts";

/**
 * Let a request through, or refuse it and keep the refusal in the trail.
 *
 * @throws problem "not-allowed"
 */
export async function authorise(
  api: Api,
  route: RouteName,
  action: Action,
  ctx: Context,
  request: { params: Record<string, string>; body: unknown },
): Promise<void> {
  const permission: Permission = permissions[action];
  const holds = (relation: RelationName) => {
    const resolver = api.relations.get(relation);
    if (resolver === undefined) throw new Error(`Nobody can tell the relation ${relation}.`);
    return inLab(api.db, ctx, (tx) => resolver(tx, ctx, { action, ...request }));
  };
  const byRole = permission.member === true || (permission.roles?.some((role) => ctx.roles.includes(role)) ?? false);
  const allowed = byRole || (permission.relation !== undefined && (await holds(permission.relation)));
  if (!allowed) {
    await api.onRefused(ctx, action, route);
    throw problem("not-allowed", refusal(permission));
  }
  if (permission.unless !== undefined && (await holds(permission.unless))) {
    await api.onRefused(ctx, action, route);
    throw problem(
      "not-allowed",
      "You contributed to this check, so somebody else must review it. Nothing was changed.",
    );
  }
}

const roleWords = { manager: "a lab manager", technician: "a technician", auditor: "an auditor" } as const;
const relationWords = {
  "owns-instrument": "the instrument's owner",
  "named-approver": "a named approver",
  "own-draft": "whoever made the draft",
} as const;

function refusal(permission: Permission): string {
  const who: string[] = (permission.roles ?? []).map((role) => roleWords[role]);
  if (permission.relation !== undefined) who.push(relationWords[permission.relation]);
  const last = who.pop() ?? "nobody";
  return `This is done by ${who.length === 0 ? last : `${who.join(", ")} or ${last}`}. Nothing was changed. Ask one of them, or have your roles changed in Settings.`;
}
