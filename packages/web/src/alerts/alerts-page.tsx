/** Alerts: what is open, acknowledged or closed; they open and close by themselves, people take note of them. */
import type { Alert } from "@wavekeep/api/contract";
import { acknowledgeAlertInput } from "@wavekeep/api/contract";
import { useState } from "react";
import { useForm } from "react-hook-form";
import type { z } from "zod";
import { Asked, Older } from "../shared/asked.tsx";
import { DialogForm } from "../shared/dialog-form.tsx";
import { FormArea, rulesOf } from "../shared/form.tsx";
import { useUrlFilter } from "../shared/use-url-filter.ts";
import { calledWords, configurationPath, counted, countWord, sentenceCase } from "../shared/words.ts";
import {
  Button,
  Empty,
  Page,
  Section,
  StatusShape,
  statusWord,
  Switches,
  TextButton,
  TextLink,
  When,
} from "../ui/index.ts";
import { useAcknowledgeAlert, useAlerts, useImpactReviews, type AlertsShown } from "./queries.ts";

const filters = ["state", "instrument"] as const;

function alertsSentence(open: readonly Alert[] | undefined, hasMore: boolean): string {
  if (open === undefined) return "Alerts";
  if (open.length === 0) return "No alert is open.";
  const unseen = open.filter((alert) => alert.acknowledged === null).length;
  const head = hasMore
    ? `More than ${open.length} alerts are open`
    : `${sentenceCase(countWord(open.length))} ${open.length === 1 ? "alert is" : "alerts are"} open`;
  if (unseen === 0) return `${head}, ${open.length === 1 ? "and acknowledged" : "all acknowledged"}.`;
  return unseen === open.length
    ? `${head}.`
    : `${head}; ${countWord(unseen)} ${unseen === 1 ? "waits" : "wait"} to be acknowledged.`;
}

export function AlertsPage() {
  const [filter, setFilter, clear] = useUrlFilter(filters);
  const state: AlertsShown = filter.state === "closed" || filter.state === "all" ? filter.state : "open";
  const alerts = useAlerts(state, filter.instrument);
  const open = useAlerts("open", undefined);
  const reviews = useImpactReviews();
  const [acknowledging, setAcknowledging] = useState<Alert | null>(null);
  const rows = alerts.data?.pages.flatMap((page) => page.items) ?? [];
  const openRows = open.data?.pages.flatMap((page) => page.items);
  const openReviews = (reviews.data?.items ?? []).filter((review) => review.state === "open" || state !== "open");
  const firstMine = rows.find((alert) => alert.closedAt === null && alert.mayAcknowledge);
  return (
    <Page name="Alerts" title={alertsSentence(openRows, open.hasNextPage)} aside="Alerts">
      <Section
        title={state === "open" ? "Open" : state === "closed" ? "Closed" : "All alerts"}
        note="An alert closes by itself when the next good check, or the review that was due, proves it."
        switches={
          <Switches
            label="Which alerts"
            value={state}
            onChange={(next) => setFilter("state", next === "open" ? null : next)}
            choices={[
              { value: "open", label: "open" },
              { value: "closed", label: "closed" },
              { value: "all", label: "all" },
            ]}
          />
        }
        links={filter.instrument !== undefined && <TextButton onClick={clear}>Of every instrument</TextButton>}
      >
        <Asked query={alerts} rows={4}>
          {() =>
            rows.length === 0 ? (
              <Empty
                text={
                  state === "open"
                    ? "Nothing is wrong that Wavekeep knows of: no instrument is out of tolerance, near its limit or overdue."
                    : "No alert was closed yet."
                }
              />
            ) : (
              <>
                <ul>
                  {rows.map((alert) => (
                    <AlertRow
                      key={alert.id}
                      alert={alert}
                      filled={alert === firstMine}
                      onAcknowledge={() => setAcknowledging(alert)}
                    />
                  ))}
                </ul>
                <Older query={alerts} />
              </>
            )
          }
        </Asked>
      </Section>
      {openReviews.length > 0 && (
        <Section
          title="Impact reviews"
          note="Which past results fall between the last good check and the failed one, and what was decided."
        >
          <ul>
            {openReviews.map((review) => (
              <li
                key={review.id}
                className="border-hairline flex flex-wrap items-baseline justify-between gap-x-8 gap-y-1 border-b py-3"
              >
                <span>
                  <TextLink to={`/impact/${review.id}`}>{review.number}</TextLink> <b>{calledWords(review)}</b>
                  <span className="text-quiet">
                    ,{" "}
                    {review.windowFrom === null ? (
                      "no good check on record"
                    ) : (
                      <>
                        from <When at={review.windowFrom} as="day" />
                      </>
                    )}{" "}
                    to <When at={review.windowTo} as="day" />
                  </span>
                </span>
                <span className="text-quiet">
                  {review.state === "open" ? `waits for ${review.owner.name}` : "decided"}
                </span>
              </li>
            ))}
          </ul>
        </Section>
      )}
      {acknowledging !== null && <AcknowledgeDialog alert={acknowledging} onClose={() => setAcknowledging(null)} />}
    </Page>
  );
}

function AlertRow({ alert, filled, onAcknowledge }: { alert: Alert; filled: boolean; onAcknowledge: () => void }) {
  const to =
    alert.instrumentId !== null && alert.configurationId !== null
      ? configurationPath({ ...alert, instrumentId: alert.instrumentId, configurationId: alert.configurationId })
      : alert.sourceId !== null
        ? `/sources/${alert.sourceId}`
        : null;
  return (
    <li className="border-hairline flex flex-wrap items-start justify-between gap-x-8 gap-y-3 border-b py-[14px] first:pt-0 book:flex-nowrap">
      <div className="relative min-w-0 pl-7 book:pl-6">
        {alert.state !== null && (
          <StatusShape
            state={alert.closedAt === null ? alert.state : "not-judged"}
            label={statusWord(alert.state)}
            className="absolute top-1 left-0"
          />
        )}
        <h3 className="strong">{alert.title}</h3>
        <p className="text-quiet max-w-[720px]">{alert.detail}</p>
        <p className="type-note mt-1">
          Opened <When at={alert.openedAt} />
          {alert.reopenedCount > 0 && `, again ${counted(alert.reopenedCount, "time")}`}
          {alert.owner !== null && `; owner ${alert.owner.name}`}
          {alert.closedAt !== null && (
            <>
              . Closed <When at={alert.closedAt} />
              {alert.closedBecause !== null && `: ${alert.closedBecause}`}
            </>
          )}
        </p>
        {alert.acknowledged !== null && (
          <p className="type-note">
            Acknowledged by {alert.acknowledged.by.name}
            {alert.acknowledged.forOwner && " for the owner"}, <When at={alert.acknowledged.at} />:{" "}
            {alert.acknowledged.note}
          </p>
        )}
      </div>
      <div className="flex flex-none flex-wrap items-center gap-4 pl-7 book:pl-0">
        {alert.checkId !== null && <TextLink to={`/checks/${alert.checkId}`}>{alert.checkNumber}</TextLink>}
        {to !== null && (
          <TextLink to={to}>
            {alert.instrumentName === null
              ? alert.sourceLabel
              : calledWords({ ...alert, instrumentName: alert.instrumentName })}
          </TextLink>
        )}
        {alert.closedAt === null && alert.mayAcknowledge && (
          <Button filled={filled} onClick={onAcknowledge}>
            Acknowledge
          </Button>
        )}
      </div>
    </li>
  );
}

function AcknowledgeDialog({ alert, onClose }: { alert: Alert; onClose: () => void }) {
  const acknowledge = useAcknowledgeAlert(alert.id, onClose);
  const shape = acknowledgeAlertInput.omit({ version: true });
  const form = useForm<z.input<typeof shape>, unknown, z.output<typeof shape>>({
    resolver: rulesOf(shape),
    defaultValues: { note: "" },
  });
  return (
    <DialogForm
      title="Acknowledge the alert"
      lead={`${alert.title} It stays open until a good check proves otherwise; your note says what follows from it.`}
      confirmLabel="Acknowledge"
      form={form}
      onClose={onClose}
      busy={acknowledge.isPending}
      error={acknowledge.error}
      onTakeTheirs={onClose}
      onSubmit={(values) => acknowledge.mutate({ ...values, version: alert.version })}
    >
      <FormArea name="note" label="Note" />
    </DialogForm>
  );
}
