/** One check as it is read: verdict, spectrum, lines, signatures; reviewed and signed here. */
import type { Check } from "@wavekeep/api/contract";
import { useState } from "react";
import { useParams } from "react-router";
import { Asked } from "../shared/asked.tsx";
import { calledWords, conditionWords, configurationPath, shortName } from "../shared/words.ts";
import {
  formatClock,
  formatDay,
  LinkButton,
  NARROW_SPACE,
  Page,
  Section,
  TextLink,
  useZone,
  When,
} from "../ui/index.ts";
import { CheckFacts, StandsBeside } from "./check-facts.tsx";
import { AnalysesSection, AttemptsSection, EventsSection } from "./check-history.tsx";
import { CheckSide } from "./check-side.tsx";
import { DispersionSection } from "./dispersion-section.tsx";
import { LinesNote, LinesTable } from "./lines-table.tsx";
import { useCheck } from "./queries.ts";
import { SpectrumSection } from "./spectrum-section.tsx";
import { analysisState, verdictSentence } from "./verdict-sentence.ts";

export function CheckPage() {
  const { checkId = "" } = useParams();
  const check = useCheck(checkId);
  if (check.data !== undefined) return <LoadedCheck key={checkId} check={check.data} />;
  return (
    <Page title={<span className="text-quiet">Check</span>} name="Check" aside="Checks">
      <Section title="Errors and spectrum">
        <Asked query={check} rows={10}>
          {() => null}
        </Asked>
      </Section>
    </Page>
  );
}

function LoadedCheck({ check }: { check: Check }) {
  const { analysis, summary } = check;
  const worst = analysis?.verdict?.worstLine ?? null;
  const [picked, setPicked] = useState<number | null | undefined>(undefined);
  const chosen = picked === undefined ? worst : picked;
  const maker = summary.begunBy;
  return (
    <Page
      name={`${summary.number}, ${calledWords(summary)}`}
      title={analysis === null ? `${summary.number} has no result yet.` : verdictSentence(analysis)}
      state={analysis === null ? undefined : analysisState(analysis)}
      aside={<CheckAside check={check} />}
      actions={analysis !== null && <StandsBeside check={check} analysis={analysis} />}
      lead={<CheckLead check={check} />}
    >
      {analysis !== null && (
        <>
          <div className="book">
            <div className="book-margin hidden book:block" />
            <div className="book-body">
              <CheckFacts check={check} analysis={analysis} />
            </div>
          </div>
          <SpectrumSection check={check} analysis={analysis} chosen={chosen} onChoose={setPicked} />
        </>
      )}
      <Section title="Lines" id="lines" note={analysis === null ? undefined : linesMargin(check)}>
        <div className="grid gap-x-10 gap-y-10 wide:grid-cols-[minmax(0,1fr)_316px]">
          <div className="min-w-0">
            {analysis === null ? (
              <p className="text-quiet">Nothing was analysed yet.</p>
            ) : (
              <>
                <LinesTable
                  analysis={analysis}
                  chosen={chosen}
                  onChoose={setPicked}
                  leftOutBy={shortName(maker.name)}
                />
                <LinesNote analysis={analysis} />
              </>
            )}
          </div>
          <CheckSide check={check} analysis={analysis} chosen={chosen} />
        </div>
      </Section>
      {analysis !== null && <DispersionSection check={check} analysis={analysis} />}
      <AttemptsSection check={check} />
      <AnalysesSection check={check} />
      <EventsSection check={check} />
    </Page>
  );
}

function linesMargin(check: Check): string {
  const meaning = { vacuum: "In vacuum", "standard-air": "In standard air", "room-air": "In the air of the room" }[
    check.analysis?.setup.axisMeaning ?? "standard-air"
  ];
  return `${meaning}, line list ${check.analysis?.setup.lineListVersion ?? ""}. U is expanded for 95.45${NARROW_SPACE}%. All in nm but the position.`;
}

function CheckAside({ check }: { check: Check }) {
  const zone = useZone();
  const { summary } = check;
  const at = summary.submittedAt ?? summary.begunAt;
  return (
    <div className="flex flex-wrap gap-x-2 book:block">
      <p className="strong text-ink">{summary.number}</p>
      <p>
        <TextLink to={configurationPath(summary)}>{calledWords(summary)}</TextLink>
      </p>
      <p className="hidden book:block">Verification, {conditionWords[summary.condition]}</p>
      <p>
        {formatDay(at, zone)}, {formatClock(at, zone)}
      </p>
      <p className="hidden book:block">
        Procedure {check.procedure.code}, version {check.procedure.version}
      </p>
    </div>
  );
}

/** What stands in the way or was said about the check, in one or two lines. */
function CheckLead({ check }: { check: Check }) {
  const { summary, analysis } = check;
  const returned = [...check.events].reverse().find((event) => event.kind === "returned");
  const aside = [...check.events].reverse().find((event) => event.kind === "set-aside");
  return (
    <div className="grid gap-1 empty:hidden">
      {check.state === "returned" && returned !== undefined && (
        <p>
          Sent back by {returned.by.name}, <When at={returned.at} />: {returned.comment}
        </p>
      )}
      {check.state === "set-aside" && (
        <p>
          Set aside{aside !== undefined && ` by ${aside.by.name}`}
          {aside !== undefined && aside.comment !== null && `: ${aside.comment}`}
        </p>
      )}
      {check.state === "begun" && <p>A draft: nothing here is signed yet.</p>}
      {analysis !== null && analysis.reason !== null && <p>{analysis.reason}</p>}
      {check.hold !== null && (
        <p>
          {calledWords(summary)} is on hold since <When at={check.hold.since} />
          {check.hold.decided ? "; the decision is made." : "; a manager confirms or lifts it."}{" "}
          {check.impactReview !== null && (
            <TextLink to={`/impact/${check.impactReview.id}`}>{check.impactReview.number}</TextLink>
          )}
        </p>
      )}
      {check.follows !== null && (
        <p>
          As left, after <TextLink to={`/checks/${check.follows.id}`}>{check.follows.number}</TextLink>.
        </p>
      )}
      {check.followedBy.length > 0 && (
        <p>
          Followed by{" "}
          {check.followedBy.map((next, index) => (
            <span key={next.id}>
              {index > 0 && ", "}
              <TextLink to={`/checks/${next.id}`}>{next.number}</TextLink>
            </span>
          ))}
          .
        </p>
      )}
      {check.may.edit && (
        <p className="no-print mt-2">
          <LinkButton to={`/checks/${summary.id}/edit`} filled={check.state !== "submitted"}>
            {check.state === "set-aside" ? "Take it up again" : "Go on with it"}
          </LinkButton>
        </p>
      )}
    </div>
  );
}
