import { useQuery } from "@tanstack/react-query";
import type { decideImpactInput } from "@wavekeep/api/contract";
import type { z } from "zod";
import { api } from "../shared/api.ts";
import { useChange } from "../shared/use-change.ts";

export const useImpactReview = (impactReviewId: string) =>
  useQuery({
    queryKey: ["impact-reviews", impactReviewId],
    queryFn: ({ signal }) => api.get("readImpactReview", { impactReviewId }, undefined, { signal }),
  });

export const useDecideImpact = (impactReviewId: string) =>
  useChange((body: z.input<typeof decideImpactInput>) => api.post("decideImpact", { impactReviewId }, body));
