/** What led to the result: attempts with their files, analyses with what changed, what happened to the check. */
import type { Check } from "@wavekeep/api/contract";
import { checkEventWords, counted } from "../shared/words.ts";
import {
  FileLink,
  formatBytes,
  formatHash,
  routeUrl,
  Section,
  Status,
  Table,
  verdictState,
  When,
} from "../ui/index.ts";

export function AttemptsSection({ check }: { check: Check }) {
  return (
    <Section
      title="Attempts"
      id="attempts"
      note="Every file that was dropped in, byte for byte; an abandoned attempt stays in the list."
    >
      <div className="grid gap-6">
        {check.attempts.map((attempt) => (
          <div key={attempt.number}>
            <div className="flex flex-wrap items-baseline justify-between gap-x-6">
              <h3>
                <b>Attempt {attempt.number}</b>, <When at={attempt.startedAt} />
                {attempt.abandoned && (
                  <span className="left-out"> abandoned{attempt.note !== "" && `: ${attempt.note}`}</span>
                )}
              </h3>
              <span className="flex items-baseline gap-4">
                <span className="type-note">{counted(attempt.analysisCount, "analysis", "analyses")}</span>
                {attempt.verdict === null ? (
                  <span className="type-note">{attempt.outcome ?? "not analysed"}</span>
                ) : (
                  <Status state={verdictState(attempt.verdict)} />
                )}
              </span>
            </div>
            {attempt.captures.length > 0 && (
              <div className="mt-1">
                <Table
                  caption={`Files of attempt ${attempt.number}`}
                  compact
                  rows={attempt.captures}
                  rowKey={(capture) => capture.id}
                  columns={[
                    {
                      key: "file",
                      head: "File",
                      cell: (capture) => (
                        <FileLink
                          href={routeUrl("readCapture", { captureId: capture.id })}
                          download={capture.fileName}
                          className="break-all"
                        >
                          {capture.fileName}
                        </FileLink>
                      ),
                    },
                    {
                      key: "part",
                      head: "Read as",
                      cell: (capture) => (capture.refusal === null ? capture.part : "not read"),
                    },
                    { key: "size", head: "Size", numbers: true, cell: (capture) => formatBytes(capture.sizeBytes) },
                    {
                      key: "sha",
                      head: "SHA-256",
                      className: "whitespace-nowrap",
                      cell: (capture) => <span title={capture.sha256}>{formatHash(capture.sha256)}</span>,
                    },
                    {
                      key: "at",
                      head: "Received",
                      className: "whitespace-nowrap",
                      cell: (capture) => <When at={capture.receivedAt} seconds />,
                    },
                    { key: "trail", head: "Trail", numbers: true, cell: (capture) => capture.trailNumber },
                  ]}
                  rowNote={(capture) =>
                    capture.refusal ??
                    (capture.seenBefore === null
                      ? null
                      : `The same bytes were used before: ${capture.seenBefore.fileName} in ${capture.seenBefore.checkNumber}.`)
                  }
                  narrow={(capture) => (
                    <>
                      <p className="flex items-baseline justify-between gap-3">
                        <FileLink
                          href={routeUrl("readCapture", { captureId: capture.id })}
                          download={capture.fileName}
                          className="break-all"
                        >
                          {capture.fileName}
                        </FileLink>
                        <span className="type-note">{capture.part}</span>
                      </p>
                      <p className="type-note">
                        {formatHash(capture.sha256)}, <When at={capture.receivedAt} as="time" seconds />, trail{" "}
                        {capture.trailNumber}
                      </p>
                      {capture.refusal !== null && <p className="type-note">{capture.refusal}</p>}
                    </>
                  )}
                />
              </div>
            )}
          </div>
        ))}
      </div>
    </Section>
  );
}

export function AnalysesSection({ check }: { check: Check }) {
  return (
    <Section
      title="Settings"
      id="settings"
      note={`Judged by tolerance version ${check.tolerance.version}${check.tolerance.changedSince ? "; it was changed since" : ""}. Every analysis is kept.`}
    >
      {check.analyses.length === 0 ? (
        <p className="text-quiet">Nothing was analysed yet.</p>
      ) : (
        <Table
          caption="Analyses of this check"
          compact
          rows={[...check.analyses].reverse()}
          rowKey={(analysis) => String(analysis.version)}
          isChosen={(analysis) => analysis.version === check.analysisVersion?.version}
          columns={[
            { key: "version", head: "Version", cell: (analysis) => analysis.version },
            { key: "changed", head: "What changed", cell: (analysis) => analysis.changed },
            { key: "attempt", head: "Attempt", cell: (analysis) => analysis.attempt },
            { key: "by", head: "By", cell: (analysis) => analysis.madeBy.name },
            {
              key: "at",
              head: "At",
              className: "whitespace-nowrap",
              cell: (analysis) => <When at={analysis.madeAt} seconds />,
            },
            { key: "core", head: "Core", cell: (analysis) => analysis.coreVersion },
            {
              key: "sha",
              head: "SHA-256",
              className: "whitespace-nowrap",
              cell: (analysis) => <span title={analysis.sha256}>{formatHash(analysis.sha256)}</span>,
            },
          ]}
          narrow={(analysis) => (
            <>
              <p>
                <b>Version {analysis.version}</b>, attempt {analysis.attempt}: {analysis.changed}
              </p>
              <p className="type-note">
                {analysis.madeBy.name}, <When at={analysis.madeAt} />
              </p>
            </>
          )}
        />
      )}
    </Section>
  );
}

export function EventsSection({ check }: { check: Check }) {
  return (
    <Section title="What happened" note="Newest last.">
      <ol>
        {check.events.map((event) => (
          <li key={event.id} className="border-hairline flex flex-wrap items-baseline gap-x-4 border-b py-[7px]">
            <span className="text-quiet w-[180px] flex-none">
              <When at={event.at} />
            </span>
            <span className="min-w-0 flex-1 basis-[240px]">
              <b>{event.by.name}</b>: {checkEventWords[event.kind]}
              {event.comment !== null && event.comment !== "" && `. ${event.comment}`}
            </span>
          </li>
        ))}
      </ol>
    </Section>
  );
}
