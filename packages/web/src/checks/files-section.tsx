/** Files of the current attempt: dropped in, on their way, stored with a receipt, and how the chosen one is read. */
import type { CaptureReceipt, Check } from "@wavekeep/api/contract";
import { useRef, useState, type DragEvent } from "react";
import {
  Button,
  formatCount,
  formatHash,
  formatPercent,
  formatTime,
  ProblemNote,
  Section,
  SelectField,
  Table,
  TextButton,
  useZone,
  zoneName,
  formatClock,
} from "../ui/index.ts";
import type { Uploads } from "./use-uploads.ts";

interface FilesSectionProps {
  check: Check;
  uploads: Uploads;
  onNewAttempt: () => void;
}

export function FilesSection({ check, uploads, onNewAttempt }: FilesSectionProps) {
  const [part, setPart] = useState<"lamp" | "dark">("lamp");
  const [isOver, setOver] = useState(false);
  const [picked, setPicked] = useState<string | null>(null);
  const input = useRef<HTMLInputElement>(null);
  const captures = check.attempts.find((attempt) => attempt.number === check.currentAttempt)?.captures ?? [];
  const chosen =
    captures.find((capture) => capture.id === picked) ??
    captures.find((capture) => capture.reading !== null) ??
    captures[0];
  const drop = (event: DragEvent) => {
    event.preventDefault();
    setOver(false);
    uploads.add([...event.dataTransfer.files], part);
  };
  return (
    <Section
      title="Files"
      note="Stored as they were written, before anything is read. A file that was stored stays on record."
      links={captures.length > 0 && <TextButton onClick={onNewAttempt}>Begin a new attempt</TextButton>}
    >
      <div
        onDragOver={(event) => {
          event.preventDefault();
          setOver(true);
        }}
        onDragLeave={() => setOver(false)}
        onDrop={drop}
        className="grid gap-x-10 gap-y-6 wide:grid-cols-[minmax(0,1fr)_minmax(0,420px)]"
      >
        <div className="min-w-0">
          {captures.length > 0 && (
            <CapturesTable captures={captures} chosen={chosen} onChoose={(capture) => setPicked(capture.id)} />
          )}
          <Travelling uploads={uploads} />
          <div
            className={`mt-3 flex flex-wrap items-end gap-4 rounded-(--radius) border border-dashed p-4 ${isOver ? "border-accent" : "border-graph"}`}
          >
            <div className="min-w-[200px] flex-1">
              <p>
                {captures.length === 0
                  ? "Drop the captures here as the instrument wrote them, or choose them."
                  : "Drop more captures here, or choose them."}
              </p>
              <p className="type-note">
                CSV or text, up to 50 MB each. Repeats of one lamp are taken together; a dark is subtracted.
              </p>
            </div>
            <SelectField
              label="They are"
              className="w-[136px]"
              value={part}
              onChange={(event) => setPart(event.target.value === "dark" ? "dark" : "lamp")}
              choices={[
                { value: "lamp", label: "of the lamp" },
                { value: "dark", label: "dark" },
              ]}
            />
            <input
              ref={input}
              type="file"
              multiple
              className="sr-only"
              tabIndex={-1}
              aria-label="Captures to add"
              onChange={(event) => {
                uploads.add([...(event.target.files ?? [])], part);
                event.target.value = "";
              }}
            />
            <Button onClick={() => input.current?.click()}>Add files</Button>
          </div>
        </div>
        {chosen !== undefined && <AsRead capture={chosen} />}
      </div>
    </Section>
  );
}

function CapturesTable({
  captures,
  chosen,
  onChoose,
}: {
  captures: readonly CaptureReceipt[];
  chosen: CaptureReceipt | undefined;
  onChoose: (capture: CaptureReceipt) => void;
}) {
  const zone = useZone();
  const note = (capture: CaptureReceipt) =>
    capture.refusal ??
    (capture.seenBefore === null
      ? null
      : `The same bytes as ${capture.seenBefore.fileName} in ${capture.seenBefore.checkNumber}, received ${formatTime(capture.seenBefore.receivedAt, zone)}.`);
  return (
    <div className="@container">
      <Table
        caption={`Files of attempt ${captures[0]?.attempt ?? 1}`}
        compact
        rows={captures}
        rowKey={(capture) => capture.id}
        isChosen={(capture) => capture.id === chosen?.id}
        onChoose={onChoose}
        rowNote={note}
        rowClassName={(capture) => (capture.refusal === null ? "" : "text-quiet")}
        columns={[
          { key: "file", head: "File", cell: (capture) => <span className="break-all">{capture.fileName}</span> },
          {
            key: "rows",
            head: "Rows",
            numbers: true,
            className: "hidden @min-[420px]:table-cell",
            cell: (capture) => (capture.reading === null ? "–" : formatCount(capture.reading.rows)),
          },
          { key: "part", head: "Read as", cell: (capture) => (capture.refusal !== null ? "not read" : capture.part) },
          {
            key: "sha",
            head: "SHA-256",
            className: "hidden whitespace-nowrap @min-[480px]:table-cell",
            cell: (capture) => (
              <span title={capture.sha256}>
                {capture.sha256.slice(0, 4)} {capture.sha256.slice(4, 8)}
              </span>
            ),
          },
          {
            key: "at",
            head: `Received, ${zoneName(captures[0]?.receivedAt ?? new Date(), zone)}`,
            className: "whitespace-nowrap",
            cell: (capture) => formatTime(capture.receivedAt, zone, true).split(" ")[0],
          },
          {
            key: "trail",
            head: "Trail",
            numbers: true,
            className: "hidden @min-[540px]:table-cell",
            cell: (capture) => formatCount(capture.trailNumber),
          },
        ]}
        narrow={(capture) => (
          <button type="button" className="block w-full text-left" onClick={() => onChoose(capture)}>
            <span className="flex items-baseline justify-between gap-3">
              <span className="break-all">{capture.fileName}</span>
              <span className="type-note">{capture.refusal !== null ? "not read" : capture.part}</span>
            </span>
            <span className="type-note block">
              {formatHash(capture.sha256)}, {formatClock(capture.receivedAt, zone)}, trail{" "}
              {formatCount(capture.trailNumber)}
            </span>
            {note(capture) !== null && <span className="type-note block">{note(capture)}</span>}
          </button>
        )}
      />
    </div>
  );
}

/** Files on their way, and those that were refused: a reason each, until it is put away. */
function Travelling({ uploads }: { uploads: Uploads }) {
  if (uploads.travelling.length === 0) return null;
  return (
    <ul aria-label="Files on their way">
      {uploads.travelling.map((file) => (
        <li key={file.key} className="border-hairline border-b py-2">
          {file.problem === null ? (
            <div className="flex items-baseline justify-between gap-4">
              <span className="break-all">{file.name}</span>
              <span className="type-note" role="status">
                {file.sent < 1 ? `${formatPercent(file.sent)} sent` : "sent, being stored"}
              </span>
            </div>
          ) : (
            <div className="flex items-start justify-between gap-4">
              <div>
                <p className="break-all">{file.name}</p>
                <ProblemNote error={file.problem} />
              </div>
              <TextButton onClick={() => uploads.dismiss(file.key)} aria-label={`Put ${file.name} away`}>
                Put away
              </TextButton>
            </div>
          )}
        </li>
      ))}
    </ul>
  );
}

const columnUse = (index: number, reading: NonNullable<CaptureReceipt["reading"]>): string =>
  index === reading.intensityColumn
    ? "intensity"
    : index === reading.axisColumn
      ? `${reading.axisKind}, ${reading.axisUnit}`
      : "not used";

const delimiterWords: Record<string, string> = { ",": "Commas", ";": "Semicolons", "\t": "Tabs", " ": "Spaces" };

/** How the chosen file was read: what each column counts, over its first rows. */
function AsRead({ capture }: { capture: CaptureReceipt }) {
  const { reading } = capture;
  if (reading === null) {
    return (
      <div>
        <h3 className="strong">{capture.fileName}</h3>
        <p className="mt-1">{capture.refusal ?? "It could not be read."}</p>
        <p className="type-note mt-1">It is stored as it is, with its receipt.</p>
      </div>
    );
  }
  return (
    <div className="min-w-0">
      <h3 className="sr-only">How {capture.fileName} is read</h3>
      <div className="overflow-x-auto" tabIndex={0} role="region" aria-label={`First rows of ${capture.fileName}`}>
        <table className="w-full">
          <thead>
            <tr>
              {reading.columns.map((heading, index) => (
                <th key={`${heading} ${index}`} scope="col" className="pr-4 pb-1 align-bottom">
                  <span
                    className={`block border px-2 py-[3px] type-note whitespace-nowrap ${index === reading.intensityColumn || index === reading.axisColumn ? "border-graph strong !text-ink" : "border-graph border-dashed"}`}
                  >
                    {columnUse(index, reading)}
                  </span>
                  <span className="type-note mt-1 block">{heading}</span>
                </th>
              ))}
            </tr>
          </thead>
          <tbody>
            {reading.firstRows.slice(0, 6).map((row, rowIndex) => (
              <tr key={rowIndex}>
                {reading.columns.map((heading, index) => (
                  <td
                    key={`${heading} ${index}`}
                    className={`py-[2px] pr-4 whitespace-nowrap ${index === reading.intensityColumn || index === reading.axisColumn ? "" : "text-quiet"}`}
                  >
                    {row[index] ?? ""}
                  </td>
                ))}
              </tr>
            ))}
          </tbody>
        </table>
      </div>
      <p className="type-note mt-2">
        {delimiterWords[reading.delimiter] ?? reading.delimiter}, decimal {reading.decimal === "," ? "comma" : "point"},{" "}
        {formatCount(reading.rows)} rows. {reading.remarks.join(" ")}
      </p>
    </div>
  );
}
