/** The facts of a check: what stands beside its verdict, and the six by which it was made. */
import type { Check } from "@wavekeep/api/contract";
import type { Analysis } from "@wavekeep/core";
import { ToleranceUsed } from "../drawings/index.ts";
import { counted } from "../shared/words.ts";
import {
  Fact,
  Facts,
  formatDay,
  formatLimit,
  formatNumber,
  formatPercent,
  NARROW_SPACE,
  Status,
  statusWord,
  uncertaintyDecimals,
  useZone,
  verdictState,
} from "../ui/index.ts";
import { conformanceWords, leftOutSentence, worstOf } from "./verdict-sentence.ts";

/** Whether anything but the left-out lines changed between analyses, or the tolerance since. */
export function settingsWords(check: Check): string {
  const changes = check.analyses.length - 1;
  const parts = [
    changes > 0 ? counted(changes, "change") : null,
    check.tolerance.changedSince ? "tolerance changed since" : null,
  ].filter((part) => part !== null);
  return parts.length === 0 ? "not changed" : parts.join(", ");
}

const link = "text-link";

/** The verdict with every line, what was left out, attempts, changed settings: seen before any signature. */
export function StandsBeside({ check, analysis }: { check: Check; analysis: Analysis }) {
  const every = analysis.verdictWithEveryLine;
  const everyState = every === null ? "not-judged" : verdictState(every.verdict, every.nearLimit);
  const attempts = check.attempts.length;
  return (
    <dl className="grid w-[calc(100vw-32px)] grid-cols-1 gap-y-2 book:w-auto book:grid-cols-2 book:gap-x-9 book:gap-y-3 [&>div]:flex [&>div]:justify-between [&>div]:gap-4 book:[&>div]:block">
      <Fact label="With every line">
        <Status
          state={everyState}
          word={`${statusWord(everyState)}${every === null || every.toleranceUsed === null ? "" : `, ${formatPercent(every.toleranceUsed)}`}`}
        />
      </Fact>
      <Fact label="Left out">
        <a href="#lines" className={link}>
          {leftOutSentence(analysis)}
        </a>
      </Fact>
      <Fact label="Attempts">
        {attempts}
        {": "}
        <a href="#attempts" className={link}>
          {attempts === 1 ? "see it" : attempts === 2 ? "see both" : "see all"}
        </a>
      </Fact>
      <Fact label="Settings, tolerance">
        <a href="#settings" className={link}>
          {settingsWords(check)}
        </a>
      </Fact>
    </dl>
  );
}

export function CheckFacts({ check, analysis }: { check: Check; analysis: Analysis }) {
  const zone = useZone();
  const worst = worstOf(analysis);
  const { decisionRule } = analysis.setup;
  const guard = worst?.guardBandNm ?? null;
  const limit = worst?.toleranceNm ?? null;
  const acceptedTo = limit === null ? null : limit - (guard ?? 0);
  const room = [
    check.draft.temperatureC === null
      ? null
      : `${formatNumber(check.draft.temperatureC, { decimals: 1 })}${NARROW_SPACE}°C`,
    check.draft.pressureHpa === null
      ? null
      : `${formatNumber(check.draft.pressureHpa, { grouped: true })}${NARROW_SPACE}hPa`,
  ].filter((part) => part !== null);
  const source = check.sources.map((item) => item.label).join(", ") || "none named";
  const minutes = check.draft.minutesSinceSwitchOn;
  return (
    <Facts>
      <Fact label="Tolerance used">
        {worst === null || worst.toleranceUsed === null ? (
          "–"
        ) : (
          <span className="flex items-center gap-[10px]">
            {formatPercent(worst.toleranceUsed)}
            <ToleranceUsed
              bare
              used={worst.toleranceUsed}
              guardShare={guard === null || limit === null ? null : guard / limit}
              state={verdictState(analysis.verdict?.verdict, analysis.verdict?.nearLimit)}
            />
          </span>
        )}
      </Fact>
      <Fact label="Decision rule">
        {decisionRule.kind === "simple"
          ? "simple, w = 0"
          : `guarded, w = ${decisionRule.r === 1 ? "" : `${formatNumber(decisionRule.r, { decimals: 2 })} `}U`}
      </Fact>
      <Fact label="Accepted to">
        {acceptedTo === null
          ? "–"
          : guard === null || guard === 0
            ? formatLimit(acceptedTo)
            : `${formatNumber(acceptedTo, { decimals: uncertaintyDecimals(guard) ?? 3 })}${NARROW_SPACE}nm`}
      </Fact>
      <Fact label="Conformance">{conformanceWords(worst?.conformanceProbability ?? null)}</Fact>
      <Fact label="Source, room">
        {source}
        {minutes !== null && ` on for ${formatNumber(minutes)}${NARROW_SPACE}min`}
        {room.length > 0 && `, ${room.join(", ")}`}
      </Fact>
      <Fact label="Axis in force">
        {analysis.axisKind === "wavelength"
          ? "the file’s own"
          : check.axisInForce === null
            ? "none yet"
            : `no. ${check.axisInForce.number}, since ${formatDay(check.axisInForce.inForceFrom, zone)}`}
      </Fact>
    </Facts>
  );
}
