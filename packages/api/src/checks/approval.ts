/** Who may approve a check. */
import { hasRole, type Context, type Tx } from "../db/tenancy.ts";
import { findLab } from "../labs/queries.ts";
import { isContributor } from "./queries.ts";

/** Why this person may not approve, as a sentence; null when they may. Says nothing about the check's state. */
export async function approveRefusal(tx: Tx, ctx: Context, checkId: string): Promise<string | null> {
  if (ctx.personId === null || !(hasRole(ctx, "manager") || ctx.isApprover))
    return "A lab manager or a named approver approves checks.";
  if (!(await isContributor(tx, checkId, ctx.personId))) return null;
  const lab = await findLab(tx, ctx.labId);
  return lab.selfApproval ? null : "You contributed to this check, so somebody else reviews it.";
}

/** For the permissions table: contributed, and the lab has not switched self-approval on. */
export async function isBarredContributor(tx: Tx, ctx: Context, checkId: string): Promise<boolean> {
  if (ctx.personId === null || !(await isContributor(tx, checkId, ctx.personId))) return false;
  return !(await findLab(tx, ctx.labId)).selfApproval;
}
