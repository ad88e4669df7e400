/** One impact review: the window in which results may be wrong, by how much, and what the owner decided. */
import { decideImpactInput, type ImpactReview } from "@wavekeep/api/contract";
import { FormProvider, useForm, useWatch } from "react-hook-form";
import { useParams } from "react-router";
import type { z } from "zod";
import { Asked } from "../shared/asked.tsx";
import { FormArea, FormSelect, Refused, rulesOf, showAtFields, useKeepFromLeaving } from "../shared/form.tsx";
import { calledWords, configurationPath } from "../shared/words.ts";
import {
  Button,
  Fact,
  Facts,
  formatQuantity,
  NARROW_SPACE,
  formatNumber,
  Page,
  Section,
  TextLink,
  When,
} from "../ui/index.ts";
import { useDecideImpact, useImpactReview } from "./queries.ts";

const affectedWords: Record<z.infer<typeof decideImpactInput>["affected"], string> = {
  none: "No result is affected",
  some: "Some results are affected",
  unknown: "It cannot be said yet",
};

export function ImpactReviewPage() {
  const { impactReviewId = "" } = useParams();
  const review = useImpactReview(impactReviewId);
  if (review.data !== undefined) return <LoadedReview review={review.data} />;
  return (
    <Page title={<span className="text-quiet">Impact review</span>} name="Impact review">
      <Section title="Window">
        <Asked query={review} rows={4}>
          {() => null}
        </Asked>
      </Section>
    </Page>
  );
}

function titleOf(review: ImpactReview): string {
  if (review.decision !== null) return `${affectedWords[review.decision.affected]}: ${calledWords(review)} is decided.`;
  return `Which results of ${calledWords(review)} fall in its window?`;
}

function LoadedReview({ review }: { review: ImpactReview }) {
  return (
    <Page
      name={`${review.number}, ${calledWords(review)}`}
      title={titleOf(review)}
      aside={
        <div className="flex flex-wrap gap-x-2 book:block">
          <p className="strong text-ink">{review.number}</p>
          <p>
            <TextLink to={configurationPath(review)}>{calledWords(review)}</TextLink>
          </p>
          <p>
            Opened <When at={review.openedAt} as="day" />
          </p>
        </div>
      }
      lead={
        review.decision === null
          ? `What was measured between the last good check and the failed one may be wrong. ${review.owner.name}, its owner, says which work it concerns and what is done about it.`
          : undefined
      }
    >
      <Section title="Window" note="From the last good check to the one that failed.">
        <div className="-mt-6">
          <Facts>
            <Fact label="From">
              {review.windowFrom === null ? (
                "no good check on record: everything before counts"
              ) : (
                <>
                  <When at={review.windowFrom} />
                  {review.windowFromCheck !== null && (
                    <>
                      , <TextLink to={`/checks/${review.windowFromCheck.id}`}>{review.windowFromCheck.number}</TextLink>
                    </>
                  )}
                </>
              )}
            </Fact>
            <Fact label="To">
              <When at={review.windowTo} />,{" "}
              <TextLink to={`/checks/${review.check.id}`}>{review.check.number}</TextLink>
            </Fact>
            <Fact label="Largest error">
              {review.largestErrorNm === null
                ? "not known"
                : `${formatQuantity(review.largestErrorNm, undefined, "nm", { signed: true, decimals: 3 })}${review.largestAtNm === null ? "" : ` at ${formatNumber(review.largestAtNm, { decimals: 1 })}${NARROW_SPACE}nm`}`}
            </Fact>
            <Fact label="Owner">{review.owner.name}</Fact>
          </Facts>
        </div>
      </Section>
      {review.decision !== null ? (
        <Section title="Decision">
          <p className="type-lead">{affectedWords[review.decision.affected]}.</p>
          {review.decision.affectedWork !== "" && (
            <p className="mt-3 max-w-[720px] whitespace-pre-line">
              <span className="type-label block">Work it concerns</span>
              {review.decision.affectedWork}
            </p>
          )}
          <p className="mt-3 max-w-[720px] whitespace-pre-line">
            <span className="type-label block">What is done</span>
            {review.decision.decision}
          </p>
          <p className="type-note mt-3">
            {review.decision.by.name}
            {review.decision.forOwner && ` for ${review.owner.name}`}, <When at={review.decision.at} />
          </p>
        </Section>
      ) : review.mayDecide ? (
        <DecisionForm review={review} />
      ) : (
        <Section title="Decision">
          <p className="text-quiet">It waits for {review.owner.name}, or a lab manager in their place.</p>
        </Section>
      )}
    </Page>
  );
}

function DecisionForm({ review }: { review: ImpactReview }) {
  const decide = useDecideImpact(review.id);
  const form = useForm<z.input<typeof decideImpactInput>, unknown, z.output<typeof decideImpactInput>>({
    resolver: rulesOf(decideImpactInput),
    defaultValues: { affected: "some", affectedWork: "", decision: "" },
  });
  const affected = useWatch({ control: form.control, name: "affected" });
  useKeepFromLeaving(form.formState.isDirty && !decide.isSuccess);
  const submit = form.handleSubmit((values) =>
    decide.mutate(values, { onError: (error) => showAtFields(error, form.setError) }),
  );
  return (
    <Section title="Decision" note="It stands in the trail and in the check’s record; it cannot be changed afterwards.">
      <FormProvider {...form}>
        <form noValidate onSubmit={(event) => void submit(event)} className="grid max-w-[720px] gap-4">
          <FormSelect
            name="affected"
            label="Results"
            choices={(["none", "some", "unknown"] as const).map((value) => ({ value, label: affectedWords[value] }))}
          />
          {affected !== "none" && (
            <FormArea
              name="affectedWork"
              label="Work it concerns"
              note="One a line: sample, report or customer number"
            />
          )}
          <FormArea
            name="decision"
            label="What is done, and why"
            note="Recalled, measured again, corrected, or why nothing needs to be done"
          />
          <Refused error={decide.error} />
          <div>
            <Button filled type="submit" busy={decide.isPending}>
              Record the decision
            </Button>
          </div>
        </form>
      </FormProvider>
    </Section>
  );
}
