/** The draft of a check: source and conditions, files with their receipts, the result so far, the signature. */
import type { Check } from "@wavekeep/api/contract";
import type { PixelAxis } from "@wavekeep/core";
import { useQueryClient } from "@tanstack/react-query";
import { useMemo, useState } from "react";
import { useNavigate } from "react-router";
import { useKeepFromLeaving } from "../shared/form.tsx";
import { calledWords, conditionWords, configurationPath } from "../shared/words.ts";
import { Button, formatInstant, formatTime, Page, PasswordDialog, TextButton, TextLink, useZone } from "../ui/index.ts";
import { ConditionsSection } from "./conditions-section.tsx";
import { NewAttemptDialog, SetAsideDialog } from "./draft-dialogs.tsx";
import { FilesSection } from "./files-section.tsx";
import { submitCheck, useInstrument } from "./queries.ts";
import { ResultSection } from "./result-section.tsx";
import { useDraft, type DraftKeeper } from "./use-draft.ts";
import { useLocalDrawing } from "./use-local-drawing.ts";
import { useUploads } from "./use-uploads.ts";

export function DraftPage({ check }: { check: Check }) {
  const { summary } = check;
  const keeper = useDraft(check);
  const instrument = useInstrument(summary.instrumentId);
  const configuration = instrument.data?.configurations.find((item) => item.id === summary.configurationId);
  const axis = useMemo<PixelAxis | null>(() => {
    const inForce = configuration?.axis;
    if (inForce === undefined || inForce === null) return null;
    return {
      coefficients: inForce.coefficients,
      firstPx: 0,
      lastPx: 0,
      chebyshevCovariance: null,
      degreesOfFreedom: null,
      meaning: inForce.meaning,
    };
  }, [configuration?.axis]);
  const local = useLocalDrawing(axis);
  const uploads = useUploads(check, keeper, local);
  const [doing, setDoing] = useState<"submit" | "aside" | "attempt" | null>(null);
  useKeepFromLeaving(keeper.isUnsaved || uploads.travelling.some((file) => file.problem === null));
  const close = () => setDoing(null);
  return (
    <Page
      name={`New check of ${calledWords(summary)}, ${summary.number}`}
      title={`New check of ${calledWords(summary)}`}
      aside={<DraftAside check={check} />}
      lead={<KeptNote keeper={keeper} check={check} />}
      actions={
        <>
          <Button onClick={() => setDoing("aside")}>Set aside</Button>
          <Button
            filled
            disabled={!check.may.submit || keeper.isAnalysing || uploads.isBusy}
            onClick={() => setDoing("submit")}
          >
            Sign and submit
          </Button>
        </>
      }
    >
      <ConditionsSection
        check={check}
        keeper={keeper}
        configuration={configuration}
        altitudeM={instrument.data?.altitudeM ?? null}
      />
      <FilesSection check={check} uploads={uploads} onNewAttempt={() => setDoing("attempt")} />
      <ResultSection check={check} keeper={keeper} local={local.drawn} isTravelling={uploads.isBusy} />
      <SubmitDialog check={check} keeper={keeper} open={doing === "submit"} onClose={close} />
      {doing === "aside" && <SetAsideDialog check={check} keeper={keeper} onClose={close} />}
      {doing === "attempt" && <NewAttemptDialog check={check} keeper={keeper} onClose={close} />}
    </Page>
  );
}

function DraftAside({ check }: { check: Check }) {
  const zone = useZone();
  const { summary } = check;
  return (
    <div className="flex flex-wrap gap-x-2 book:block">
      <p className="strong text-ink">{summary.number}</p>
      <p>Verification, {conditionWords[summary.condition]}</p>
      <p>
        <TextLink to={configurationPath(summary)}>{calledWords(summary)}</TextLink>
      </p>
      <p className="hidden book:block">{formatInstant(summary.begunAt, zone)}</p>
      <p>Attempt {check.currentAttempt}</p>
    </div>
  );
}

/** Where what is typed is kept, in words that are true at each moment. */
function KeptNote({ keeper, check }: { keeper: DraftKeeper; check: Check }) {
  const zone = useZone();
  const returned =
    check.state === "returned" ? [...check.events].reverse().find((event) => event.kind === "returned") : undefined;
  const text = keeper.isSaving
    ? "Draft, being kept on the server…"
    : keeper.isUnsaved
      ? "Draft, kept on this device; on the server when you pause."
      : keeper.keptAt !== null
        ? `Draft, kept as you type: on this device and on the server, ${formatTime(keeper.keptAt, zone, true)}.`
        : "Draft, kept as you type: on this device and on the server.";
  return (
    <>
      <p className="type-text text-quiet" role="status">
        {text}
      </p>
      {returned !== undefined && (
        <p className="mt-2">
          Sent back by {returned.by.name}: {returned.comment}
        </p>
      )}
    </>
  );
}

function SubmitDialog({
  check,
  keeper,
  open,
  onClose,
}: {
  check: Check;
  keeper: DraftKeeper;
  open: boolean;
  onClose: () => void;
}) {
  const client = useQueryClient();
  const navigate = useNavigate();
  const { summary, analysis } = check;
  const fails = analysis?.verdict?.verdict === "fail";
  return (
    <PasswordDialog
      open={open}
      onClose={onClose}
      title={`Sign and submit ${summary.number}`}
      meaning="made by"
      lead={
        fails
          ? `${calledWords(summary)} is out of tolerance: it is put on hold as you submit, its owner is told, and an as-left check is asked for. A second person reviews the check.`
          : "A second person reviews it; until then it can be sent back, but no more be changed."
      }
      confirmLabel="Sign and submit"
      onConfirm={async (password) => {
        const version = await keeper.flush();
        await submitCheck(summary.id, { password, version }, crypto.randomUUID());
        await client.invalidateQueries();
        void navigate(`/checks/${summary.id}`);
      }}
    >
      {check.attempts.length > 1 && (
        <p className="type-note">
          {check.attempts.length} attempts are submitted with it. <TextButton onClick={onClose}>Look again</TextButton>
        </p>
      )}
    </PasswordDialog>
  );
}
