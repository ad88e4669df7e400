/** The result so far: the receipt above the verdict, the drawing, the lines with what may be left out. */
import type { Check } from "@wavekeep/api/contract";
import type { LineResult } from "@wavekeep/core";
import { useState } from "react";
import { DrawingLinks, SpectrumBench, useDrawing } from "../drawings/index.ts";
import { counted, speciesWord } from "../shared/words.ts";
import {
  Button,
  Empty,
  Fact,
  Facts,
  formatCount,
  formatHash,
  formatInstant,
  formatNumber,
  formatPercent,
  NARROW_SPACE,
  ProblemNote,
  Section,
  Skeleton,
  Status,
  StatusShape,
  statusWord,
  useZone,
  verdictState,
} from "../ui/index.ts";
import { BudgetTable } from "./budget-table.tsx";
import { DispersionSection } from "./dispersion-section.tsx";
import type { DrawReply } from "./draw-worker.ts";
import { LeaveOutDialog } from "./leave-out-dialog.tsx";
import { LinesNote, LinesTable } from "./lines-table.tsx";
import { useDrawing as useSpectrum } from "./queries.ts";
import { ScaleSwitch, useCountsScale } from "./spectrum-section.tsx";
import type { DraftKeeper } from "./use-draft.ts";
import { analysisState, leftOutSentence, verdictSentence } from "./verdict-sentence.ts";

interface ResultSectionProps {
  check: Check;
  keeper: DraftKeeper;
  /** Drawn on this device while the file travels. */
  local: DrawReply | null;
  isTravelling: boolean;
}

export function ResultSection({ check, keeper, local, isTravelling }: ResultSectionProps) {
  const { analysis, analysisVersion } = check;
  const [picked, setPicked] = useState<number | null | undefined>(undefined);
  const [leavingOut, setLeavingOut] = useState<LineResult | null>(null);
  const [scale, setScale] = useCountsScale();
  const handle = useDrawing(`${check.summary.number} draft`);
  const isCurrent = analysisVersion?.attempt === check.currentAttempt;
  const spectrum = useSpectrum(check.summary.id, isCurrent ? analysisVersion?.version : undefined);
  const chosen = picked === undefined ? (analysis?.verdict?.worstLine ?? null) : picked;
  const captures = check.attempts.find((attempt) => attempt.number === check.currentAttempt)?.captures ?? [];
  // The drawing made here stands only until the server's own is there.
  const ahead = local !== null && (isTravelling || keeper.isAnalysing || !isCurrent) ? local : null;
  const hasMatter = captures.length > 0 || ahead !== null;
  const chosenLine = chosen === null ? undefined : analysis?.lines[chosen];
  const actions = {
    isBusy: keeper.isAnalysing || keeper.isSaving,
    onLeaveOut: setLeavingOut,
    onBringBack: (line: LineResult) =>
      void keeper
        .apply({
          leftOut: keeper.draft.leftOut.filter(
            (left) => left.wavelengthNm !== (line.leftOut?.wavelengthNm ?? line.wavelengthNm),
          ),
        })
        .catch(() => undefined),
  };
  return (
    <>
      <Section
        title="Result so far"
        note={
          ahead !== null
            ? `Drawn on this device in ${formatNumber(Math.max(1, ahead.elapsedMs))}${NARROW_SPACE}ms while the file travels, with the server’s own core. No verdict before the receipt.`
            : "As the server’s core reads it; nothing is signed yet."
        }
        switches={hasMatter && <ScaleSwitch scale={scale} onChange={setScale} />}
        links={isCurrent && spectrum.data !== undefined && ahead === null && <DrawingLinks handle={handle} />}
      >
        {!hasMatter ? (
          <Empty text="The spectrum stands here as soon as the first file is dropped: each line found, fitted and named, with its error and uncertainty." />
        ) : (
          <>
            <Receipt check={check} />
            <Verdict check={check} keeper={keeper} isTravelling={isTravelling} isCurrent={isCurrent} />
            {ahead !== null ? (
              <Ahead drawn={ahead} scale={scale} />
            ) : isCurrent && analysis !== null ? (
              spectrum.data !== undefined ? (
                <SpectrumBench
                  analysis={analysis}
                  drawing={spectrum.data}
                  chosen={chosen}
                  onChoose={setPicked}
                  scale={scale}
                  handle={handle}
                />
              ) : spectrum.error !== null ? (
                <ProblemNote error={spectrum.error} />
              ) : (
                <Skeleton rows={14} label="Loading the spectrum" />
              )
            ) : null}
          </>
        )}
      </Section>
      {isCurrent && analysis !== null && analysis.lines.length > 0 && (
        <Section
          title="Lines"
          note="A line may be left out for what can be seen in the data, never for its error."
          id="lines"
        >
          <div className="grid gap-x-10 gap-y-8 wide:grid-cols-[minmax(0,1fr)_316px]">
            <div className="min-w-0">
              <LinesTable
                analysis={analysis}
                chosen={chosen}
                onChoose={setPicked}
                action={(line, index) => index === chosen && <LineAction line={line} {...actions} />}
              />
              <LinesNote analysis={analysis} />
            </div>
            <div className="min-w-0" aria-live="polite">
              {chosenLine !== undefined && (
                <>
                  <BudgetTable line={chosenLine} axisUnit={analysis.axisUnit} />
                  <div className="mt-4 hidden book:block">
                    <LineAction line={chosenLine} {...actions} />
                  </div>
                </>
              )}
            </div>
          </div>
        </Section>
      )}
      {isCurrent && analysis !== null && <DispersionSection check={check} analysis={analysis} />}
      {leavingOut !== null && analysis !== null && (
        <LeaveOutDialog line={leavingOut} analysis={analysis} keeper={keeper} onClose={() => setLeavingOut(null)} />
      )}
    </>
  );
}

interface LineActionProps {
  line: LineResult;
  isBusy: boolean;
  onLeaveOut: (line: LineResult) => void;
  onBringBack: (line: LineResult) => void;
}

/** What may be done with the chosen line: leave it out, or bring it back. */
function LineAction({ line, isBusy, onLeaveOut, onBringBack }: LineActionProps) {
  if (line.wavelengthNm === null) return null;
  const name = `${speciesWord(line.species)} ${formatNumber(line.wavelengthNm, { decimals: 3 })}`;
  if (line.status === "left-out") {
    return (
      <Button disabled={isBusy} onClick={() => onBringBack(line)}>
        Bring {name} back
      </Button>
    );
  }
  if (line.status !== "judged") return null;
  return (
    <Button disabled={isBusy} onClick={() => onLeaveOut(line)}>
      Leave {name} out
    </Button>
  );
}

/** `Received file, time, SHA-256, trail number` of the last file in. */
function Receipt({ check }: { check: Check }) {
  const zone = useZone();
  const captures = check.attempts.find((attempt) => attempt.number === check.currentAttempt)?.captures ?? [];
  const last = captures.at(-1);
  if (last === undefined)
    return <p className="border-hairline border-b pb-3 text-quiet">No receipt yet: the file is on its way.</p>;
  return (
    <p className="border-hairline flex flex-wrap gap-x-5 gap-y-1 border-b pb-3">
      <b>Received</b>
      <span className="text-quiet break-all">{last.fileName}</span>
      <span className="text-quiet">{formatInstant(last.receivedAt, zone, true)}</span>
      <span className="text-quiet" title={last.sha256}>
        SHA-256 {formatHash(last.sha256)}
      </span>
      <span className="text-quiet">trail {formatCount(last.trailNumber)}</span>
      {captures.length > 1 && <span className="text-quiet ml-auto">{counted(captures.length, "receipt")} above</span>}
    </p>
  );
}

function Verdict({
  check,
  keeper,
  isTravelling,
  isCurrent,
}: {
  check: Check;
  keeper: DraftKeeper;
  isTravelling: boolean;
  isCurrent: boolean;
}) {
  const { analysis } = check;
  const every = analysis?.verdictWithEveryLine ?? null;
  const everyState = every === null ? "not-judged" : verdictState(every.verdict, every.nearLimit);
  const again = (
    <Button busy={keeper.isAnalysing} onClick={() => void keeper.flush().then(keeper.analyseNow, () => undefined)}>
      Analyse
    </Button>
  );
  if (isTravelling || keeper.isAnalysing) {
    return (
      <p className="type-lead text-quiet my-4" role="status">
        {keeper.isAnalysing ? "Being analysed…" : "No verdict before the receipt."}
      </p>
    );
  }
  if (keeper.analysisError !== null) {
    return (
      <div className="my-4">
        <ProblemNote error={keeper.analysisError} />
        <div className="mt-3">{again}</div>
      </div>
    );
  }
  if (analysis === null || !isCurrent) {
    return (
      <div className="my-4 flex flex-wrap items-center gap-4">
        <p className="type-lead text-quiet">
          {keeper.draft.sourceIds.length === 0
            ? "Name the source above: without it no line can have a name."
            : "Stored, not analysed yet."}
        </p>
        {keeper.draft.sourceIds.length > 0 && again}
      </div>
    );
  }
  const named = analysis.lines.filter((line) => line.wavelengthNm !== null).length;
  const left = leftOutSentence(analysis);
  return (
    <div className="my-4" role="status">
      <p className="type-lead relative pl-7 book:pl-0">
        <StatusShape state={analysisState(analysis)} className="absolute top-[6px] left-0 book:-left-6" />
        {named > 0 && `${counted(named, "line")} named. `}
        {verdictSentence(analysis, " as it stands")}
      </p>
      {analysis.reason !== null && <p className="mt-1 max-w-[720px]">{analysis.reason}</p>}
      {(left !== "nothing" || (every !== null && every.verdict !== analysis.verdict?.verdict)) && (
        <Facts>
          <Fact label="With every line">
            <Status
              state={everyState}
              word={`${statusWord(everyState)}${every === null || every.toleranceUsed === null ? "" : `, ${formatPercent(every.toleranceUsed)}`}`}
            />
          </Fact>
          <Fact label="Left out">{left}</Fact>
        </Facts>
      )}
    </div>
  );
}

/** What this device drew: a spectrum without a name, or why it cannot be one. */
function Ahead({ drawn, scale }: { drawn: DrawReply; scale: "root" | "linear" | "log" }) {
  if (drawn.drawn.outcome === "refused") {
    return (
      <p className="max-w-[720px]">
        {drawn.name}: {drawn.drawn.reason}
      </p>
    );
  }
  return (
    <SpectrumBench
      analysis={drawn.drawn.analysis}
      drawing={drawn.drawn.drawing}
      chosen={null}
      onChoose={() => undefined}
      scale={scale}
    />
  );
}
