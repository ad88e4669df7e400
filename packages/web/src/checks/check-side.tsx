/** Beside the lines: the chosen line's budget, the signatures, what waits for a signature, what it was made from. */
import type { Check } from "@wavekeep/api/contract";
import type { Analysis } from "@wavekeep/core";
import { useState, type ReactNode } from "react";
import { useForm } from "react-hook-form";
import type { z } from "zod";
import { acknowledgeCheckInput } from "@wavekeep/api/contract";
import { DialogForm } from "../shared/dialog-form.tsx";
import { FormArea, rulesOf } from "../shared/form.tsx";
import { calledWords, counted } from "../shared/words.ts";
import {
  Button,
  FileLink,
  formatHash,
  formatInstant,
  formatNumber,
  NARROW_SPACE,
  routeUrl,
  TextButton,
  TextLink,
  useMay,
  When,
} from "../ui/index.ts";
import { BudgetTable } from "./budget-table.tsx";
import { useAcknowledgeCheck } from "./queries.ts";
import { ReviewPanel } from "./review-panel.tsx";

function Block({ title, children, id }: { title: string; children: ReactNode; id?: string }) {
  return (
    <section className="unbroken" id={id} aria-label={title}>
      <h3 className="strong">{title}</h3>
      <div className="border-graph mt-2 border-t pt-3">{children}</div>
    </section>
  );
}

export function CheckSide({
  check,
  analysis,
  chosen,
}: {
  check: Check;
  analysis: Analysis | null;
  chosen: number | null;
}) {
  const line = analysis === null || chosen === null ? undefined : analysis.lines[chosen];
  return (
    <div className="grid min-w-0 content-start gap-8">
      {line !== undefined && analysis !== null && (
        <section aria-live="polite" aria-label="Uncertainty budget of the chosen line">
          <BudgetTable line={line} axisUnit={analysis.axisUnit} />
        </section>
      )}
      <Block title="Signatures" id="signatures">
        {check.signatures.length === 0 && <p className="text-quiet">Not signed yet.</p>}
        {check.signatures.map((signature) => (
          <div key={signature.id} className="border-hairline mb-4 border-b pb-4 last:border-b-0">
            <p className="type-lead">{signature.printedName}</p>
            <p className="type-note">
              {signature.role} ·{" "}
              <time dateTime={signature.signedAt}>{formatInstant(signature.signedAt, signature.zone)}</time>
            </p>
            <p className="type-note">
              Meaning: {signature.meaning}.{" "}
              <span title={signature.contentSha256}>Content {formatHash(signature.contentSha256)}</span>
            </p>
          </div>
        ))}
        {check.state === "submitted" && <ReviewPanel check={check} />}
        <Acknowledge check={check} />
      </Block>
      {analysis !== null && (
        <Block title="Made from">
          <MadeFrom check={check} analysis={analysis} />
        </Block>
      )}
    </div>
  );
}

function MadeFrom({ check, analysis }: { check: Check; analysis: Analysis }) {
  const may = useMay();
  const version = check.analysisVersion;
  const attempt = check.attempts.find((item) => item.number === (version?.attempt ?? check.currentAttempt));
  const captures = (attempt?.captures ?? []).filter((capture) => capture.refusal === null);
  const first = captures[0];
  const rows = first?.reading?.rows;
  const received = captures.at(-1);
  return (
    <div className="type-note text-ink grid gap-1">
      {first !== undefined && (
        <p className="break-words">
          <b>
            {first.fileName}
            {captures.length > 1 && ` … ${captures.at(-1)?.fileName}`}
          </b>
          {rows !== undefined &&
            `, ${formatNumber(rows, { grouped: true })}${NARROW_SPACE}${analysis.axisUnit === "px" ? "px" : "rows"}`}
        </p>
      )}
      {first !== undefined && (
        <p>
          SHA-256 <span title={first.sha256}>{formatHash(first.sha256)}</span>
          {captures.length > 1 && ` and ${captures.length - 1} more`}
        </p>
      )}
      {received !== undefined && (
        <p>
          Received <When at={received.receivedAt} seconds />
        </p>
      )}
      {check.sources.some((source) => source.pastReview) && (
        <p>
          A source was past its review:{" "}
          {check.sources
            .filter((source) => source.pastReview)
            .map((source) => source.label)
            .join(", ")}
          .
        </p>
      )}
      {version !== null && (
        <p>
          Core {version.coreVersion}, version {version.version} of {check.analyses.length}:{" "}
          <a href="#settings" className="text-link">
            what changed
          </a>
        </p>
      )}
      {check.contributors.length > 0 && (
        <p>Contributed: {check.contributors.map((person) => person.name).join(", ")}.</p>
      )}
      {check.report !== null && may("report.read") && (
        <p>
          <FileLink href={routeUrl("readReport", { checkId: check.summary.id })} download>
            Report {check.report.number}, PDF
          </FileLink>
          , made <When at={check.report.madeAt} as="day" />,{" "}
          <span title={check.report.sha256}>{formatHash(check.report.sha256)}</span>
        </p>
      )}
      <p className="no-print mt-1 flex flex-wrap gap-x-4 gap-y-1">
        <TextButton onClick={() => window.print()}>Print</TextButton>
        {may("records.read", { instrumentId: check.summary.instrumentId }) && (
          <TextLink to={`/records?check=${check.summary.id}`}>In Records</TextLink>
        )}
      </p>
    </div>
  );
}

/** The owner takes note of the result, with a few words. */
function Acknowledge({ check }: { check: Check }) {
  const [isOpen, setOpen] = useState(false);
  const acknowledged = check.events.filter((event) => event.kind === "acknowledged");
  const last = acknowledged.at(-1);
  return (
    <>
      {acknowledged.length > 0 && (
        <p className="type-note mt-2">
          Acknowledged {counted(acknowledged.length, "time")}, last by {last?.by.name}
          {last !== undefined && last.comment !== null && `: ${last.comment}`}
        </p>
      )}
      {check.may.acknowledge && (
        <p className="no-print mt-3">
          <Button onClick={() => setOpen(true)}>Acknowledge</Button>
        </p>
      )}
      {isOpen && <AcknowledgeDialog check={check} onClose={() => setOpen(false)} />}
    </>
  );
}

function AcknowledgeDialog({ check, onClose }: { check: Check; onClose: () => void }) {
  const acknowledge = useAcknowledgeCheck(check.summary.id, onClose);
  const form = useForm<z.input<typeof acknowledgeCheckInput>, unknown, z.output<typeof acknowledgeCheckInput>>({
    resolver: rulesOf(acknowledgeCheckInput),
    defaultValues: { note: "" },
  });
  return (
    <DialogForm
      title={`Acknowledge ${check.summary.number}`}
      lead={`You have seen how ${calledWords(check.summary)} stands. Your note is kept with the check and in the trail.`}
      confirmLabel="Acknowledge"
      form={form}
      onClose={onClose}
      busy={acknowledge.isPending}
      error={acknowledge.error}
      onSubmit={(values) => acknowledge.mutate(values)}
    >
      <FormArea name="note" label="Note" note="What follows from it: an adjustment planned, results looked at." />
    </DialogForm>
  );
}
