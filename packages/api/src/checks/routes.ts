import { confirmPassword } from "../auth/confirm-password.ts";
import { routes } from "../contract/routes.ts";
import { mount, type Api } from "../http/mount.ts";
import { readReport } from "../records/report-store.ts";
import { analyseCheck } from "./analyse-check.ts";
import { beginCheck } from "./begin-check.ts";
import { newAttempt, saveDraft, setAside } from "./draft.ts";
import { acknowledgeCheck, approveCheck, returnCheck } from "./review-check.ts";
import { listChecks, readDrawing, readLabCheck } from "./service.ts";
import { submitCheck } from "./submit-check.ts";
import type { CheckWork } from "./work.ts";

export function mountChecks(api: Api, work: CheckWork): void {
  const { db } = work;
  mount(api, routes.listChecks, ({ ctx, query }) => listChecks(db, ctx, query));
  mount(api, routes.beginCheck, ({ ctx, body }) => beginCheck(db, ctx, body));
  mount(api, routes.readCheck, ({ ctx, params }) => readLabCheck(db, ctx, params.checkId));
  mount(api, routes.saveDraft, ({ ctx, params, body }) => saveDraft(db, ctx, params.checkId, body));
  mount(api, routes.newAttempt, ({ ctx, params, body }) => newAttempt(db, ctx, params.checkId, body));
  mount(api, routes.analyse, ({ ctx, params, body }) => analyseCheck(work, ctx, params.checkId, body));
  mount(api, routes.readDrawing, ({ ctx, params }) => readDrawing(db, ctx, params.checkId, params.analysisVersion));
  mount(api, routes.setAside, ({ ctx, params, body }) => setAside(work, ctx, params.checkId, body));
  mount(api, routes.submitCheck, async ({ ctx, params, body }) => {
    const proof = await confirmPassword(db, ctx.personId!, body.password);
    return submitCheck(work, ctx, params.checkId, body, proof);
  });
  mount(api, routes.returnCheck, ({ ctx, params, body }) => returnCheck(work, ctx, params.checkId, body));
  mount(api, routes.approveCheck, async ({ ctx, params, body }) => {
    const proof = await confirmPassword(db, ctx.personId!, body.password);
    return approveCheck(work, ctx, params.checkId, body, proof);
  });
  mount(api, routes.acknowledgeCheck, ({ ctx, params, body }) => acknowledgeCheck(work, ctx, params.checkId, body));
  mount(api, routes.readReport, ({ ctx, params }) => readReport(work, ctx, params.checkId));
}
