/** Overview of an instrument: drift, the last check's errors, recent checks with what comes next. */
import type { Configuration, Instrument } from "@wavekeep/api/contract";
import { useNavigate, useSearchParams } from "react-router";
import { DrawingLinks, LineStrip, useDrawing } from "../drawings/index.ts";
import { ChecksTable } from "../shared/checks-table.tsx";
import { conditionWords, counted } from "../shared/words.ts";
import {
  Due,
  Empty,
  FactList,
  formatDate,
  formatDay,
  formatLimit,
  formatNumber,
  formatShortDay,
  NARROW_SPACE,
  Section,
  TextButton,
  TextLink,
  useMay,
  useZone,
  daysBetween,
  dayOf,
} from "../ui/index.ts";
import { DriftSection } from "./drift-section.tsx";

interface TabProps {
  instrument: Instrument;
  configuration: Configuration;
  show: (what: string) => void;
}

export function OverviewTab({ instrument, configuration, show }: TabProps) {
  return (
    <>
      <DriftSection instrument={instrument} configuration={configuration} plain />
      {instrument.lastCheck !== null && (
        <LastCheck instrument={instrument} configuration={configuration} last={instrument.lastCheck} />
      )}
      <RecentChecks instrument={instrument} configuration={configuration} show={show} />
    </>
  );
}

function LastCheck({
  instrument,
  configuration,
  last,
}: Pick<TabProps, "instrument" | "configuration"> & { last: NonNullable<Instrument["lastCheck"]> }) {
  const zone = useZone();
  const navigate = useNavigate();
  const { summary, strip } = last;
  const drawing = useDrawing(`${instrument.name} ${summary.number} errors`);
  const path = `/checks/${summary.id}`;
  return (
    <Section
      title="Last check"
      note={`${formatDay(summary.submittedAt ?? summary.begunAt, zone)}, ${conditionWords[summary.condition]}, ${summary.number}. Each line’s error, full height the tolerance; hollow: left out or refused; framed: the worst.`}
      links={
        <>
          <TextLink to={path} className="basis-full py-1">
            Open the check
          </TextLink>
          <DrawingLinks handle={drawing} />
        </>
      }
    >
      <LineStrip
        lines={strip}
        fromNm={configuration.rangeFirstNm}
        toNm={configuration.rangeLastNm}
        size="instrument"
        guardFactor={configuration.decisionRule.kind === "guarded" ? configuration.decisionRule.r : 0}
        handle={drawing}
        onOpen={() => void navigate(path)}
      />
    </Section>
  );
}

/** `600/mm, 2 048 px of 14 µm`. */
export function opticsWords({ optics }: Pick<Configuration, "optics">): string {
  const parts = [
    optics.groovesPerMm === null ? null : `${formatNumber(optics.groovesPerMm)}/mm`,
    optics.pixels === null
      ? null
      : `${formatNumber(optics.pixels, { grouped: true })}${NARROW_SPACE}px${optics.pixelPitchUm === null ? "" : ` of ${formatNumber(optics.pixelPitchUm)}${NARROW_SPACE}µm`}`,
    optics.laserNm === null
      ? null
      : `laser ${formatNumber(optics.laserNm, { decimals: Number.isInteger(optics.laserNm) ? 0 : 2 })}${NARROW_SPACE}nm`,
  ].filter((part) => part !== null);
  return parts.length === 0 ? "not recorded" : parts.join(", ");
}

export const meaningWords = {
  vacuum: "vacuum",
  "standard-air": "standard air",
  "room-air": "air of the room",
} as const;
export const degreeWords = [
  "constant",
  "linear",
  "quadratic",
  "cubic",
  "of degree 4",
  "of degree 5",
  "of degree 6",
  "of degree 7",
];

/** `no. 7, cubic, standard air`. */
export function axisWords(configuration: Configuration): string {
  if (configuration.axisKind === "wavelength") return `its own, ${meaningWords[configuration.axisMeaning]}`;
  if (configuration.axis === null) return "none yet";
  return `no. ${configuration.axis.number}, ${degreeWords[configuration.axis.degree] ?? ""}, ${meaningWords[configuration.axis.meaning]}`;
}

/** `4 weeks` where whole weeks fit, else days. */
export function intervalWords(days: number): string {
  return days % 7 === 0 ? counted(days / 7, "week") : counted(days, "day");
}

/** `±0.40 nm`; by segments, the range of tolerances. */
export function toleranceWords({ tolerance }: Pick<Configuration, "tolerance">): string {
  const values = tolerance.segments.map((segment) => segment.toleranceNm);
  const least = Math.min(...values);
  const most = Math.max(...values);
  return least === most
    ? `±${formatLimit(least)}`
    : `±${formatLimit(least)} to ±${formatLimit(most)}, ${counted(values.length, "segment")}`;
}

function RecentChecks({ instrument, configuration, show }: TabProps) {
  const [search] = useSearchParams();
  const zone = useZone();
  const may = useMay();
  const next =
    configuration.dueOn === null ? (
      "no date"
    ) : (
      <>
        <b>{formatDate(configuration.dueOn)}</b>
        {configuration.assignedTo !== null && `, ${configuration.assignedTo.name}`}
        {daysBetween(dayOf(new Date(), zone), configuration.dueOn) <= 10 && (
          <>
            {", "}
            <Due on={configuration.dueOn} days={daysBetween(dayOf(new Date(), zone), configuration.dueOn)} />
          </>
        )}
      </>
    );
  return (
    <Section
      title="Recent checks"
      note={
        instrument.firstCheckAt === null
          ? undefined
          : `${instrument.checkCount} since ${formatShortDay(instrument.firstCheckAt, zone)}.`
      }
      links={
        instrument.checkCount > 0 && (
          <TextLink to={`/instruments/${instrument.id}/checks${search.size === 0 ? "" : `?${search}`}`}>
            All checks
          </TextLink>
        )
      }
    >
      <div className="grid gap-x-10 gap-y-6 wide:grid-cols-[minmax(0,1fr)_312px]">
        {instrument.recentChecks.length === 0 ? (
          <Empty text="No check yet. The first one says where the axis stands." />
        ) : (
          <ChecksTable
            checks={instrument.recentChecks}
            caption={`Recent checks of ${instrument.name}`}
            ofInstrument
            compact
          />
        )}
        <div>
          <FactList
            items={[
              { label: "Next check", value: next },
              { label: "Interval", value: intervalWords(configuration.intervalDays) },
              { label: "Axis in force", value: axisWords(configuration) },
              { label: "Tolerance", value: toleranceWords(configuration) },
              { label: "Optics", value: opticsWords(configuration) },
              { label: "Procedure", value: configuration.procedureTitle },
            ]}
          />
          {may("due.change") && instrument.retiredAt === null && configuration.toOn === null && (
            <p className="mt-3 text-right">
              <TextButton onClick={() => show("due")}>Move the due date or assign</TextButton>
            </p>
          )}
        </div>
      </div>
    </Section>
  );
}
