import { routes } from "../contract/routes.ts";
import { mount, type Api } from "../http/mount.ts";
import { decideImpact, listImpactReviews, readImpactReview } from "./service.ts";

export function mountImpact(api: Api): void {
  mount(api, routes.listImpactReviews, ({ ctx }) => listImpactReviews(api.db, ctx));
  mount(api, routes.readImpactReview, ({ ctx, params }) => readImpactReview(api.db, ctx, params.impactReviewId));
  mount(api, routes.decideImpact, ({ ctx, params, body }) => decideImpact(api.db, ctx, params.impactReviewId, body));
}
