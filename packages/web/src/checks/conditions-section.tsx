/** Source and conditions of a check: what shone, for how long, in what room; how pixels are named. */
import type { Check, Configuration, Source } from "@wavekeep/api/contract";
import { problemOf } from "../shared/problem.ts";
import { Refused } from "../shared/form.tsx";
import { sourceKindWords } from "../shared/words.ts";
import {
  Caution,
  formatDate,
  formatNumber,
  NARROW_SPACE,
  NumberField,
  Section,
  SelectField,
  TextArea,
  TextButton,
  TextLink,
} from "../ui/index.ts";
import { useSources } from "./queries.ts";
import type { DraftKeeper } from "./use-draft.ts";

interface ConditionsProps {
  check: Check;
  keeper: DraftKeeper;
  configuration: Configuration | undefined;
  altitudeM: number | null;
}

export function ConditionsSection({ check, keeper, configuration, altitudeM }: ConditionsProps) {
  const { draft, change } = keeper;
  const refusals = new Map(
    (keeper.saveError === null ? [] : (problemOf(keeper.saveError).fields ?? [])).map((field) => [
      field.path,
      field.message,
    ]),
  );
  const warmUp = check.procedure.warmUpMinutes;
  const isShort = draft.minutesSinceSwitchOn !== null && draft.minutesSinceSwitchOn < warmUp;
  return (
    <Section title="Source and conditions" note="Units stand beside the fields; a comma or a point will do.">
      <p className="mb-4">
        <span className="type-label">Procedure</span>
        <br />
        {check.procedure.code}, {check.procedure.title.charAt(0).toLowerCase()}
        {check.procedure.title.slice(1)}, version {check.procedure.version}
        <span className="type-note">
          {" "}
          {formatNumber(check.procedure.repeats)} repeats, lamp on for {warmUp}
          {NARROW_SPACE}min
        </span>
      </p>
      <SourceChoice check={check} keeper={keeper} error={refusals.get("sourceIds")} />
      <div className="mt-4 grid gap-x-6 gap-y-4 book:grid-cols-2 wide:grid-cols-4">
        <NumberField
          label="Since lamp was switched on"
          unit="min"
          value={draft.minutesSinceSwitchOn}
          onChange={(value) => change({ minutesSinceSwitchOn: value })}
          note={isShort ? `The procedure asks for ${warmUp} min: the lines may still move.` : undefined}
          error={refusals.get("minutesSinceSwitchOn")}
        />
        <NumberField
          label="Room temperature"
          unit="°C"
          value={draft.temperatureC}
          onChange={(value) => change({ temperatureC: value })}
          error={refusals.get("temperatureC")}
        />
        <NumberField
          label="Pressure"
          unit="hPa"
          value={draft.pressureHpa}
          onChange={(value) => change({ pressureHpa: value })}
          note={
            altitudeM === null
              ? "Barometer; if empty, from the lab’s altitude"
              : `Barometer; if empty, from ${formatNumber(altitudeM)} m`
          }
          error={refusals.get("pressureHpa")}
        />
        <NumberField
          label="Relative humidity"
          unit="%"
          value={draft.relativeHumidity === null ? null : Number((draft.relativeHumidity * 100).toPrecision(12))}
          onChange={(value) =>
            change({ relativeHumidity: value === null ? null : Number((value / 100).toPrecision(12)) })
          }
          error={refusals.get("relativeHumidity")}
        />
        <NumberField
          label="Detector full scale"
          unit="counts"
          value={draft.fullScaleCounts}
          onChange={(value) => change({ fullScaleCounts: value })}
          note={
            configuration !== undefined && configuration.optics.fullScaleCounts !== null
              ? `If empty, ${formatNumber(configuration.optics.fullScaleCounts, { grouped: true })} as registered`
              : "One scan; 65 535 for 16 bit"
          }
          error={refusals.get("fullScaleCounts")}
        />
        {configuration !== undefined && configuration.axisKind !== "wavelength" && (
          <>
            <SelectField
              label="Lines are named by"
              value={draft.mode}
              onChange={(event) => change({ mode: event.target.value as typeof draft.mode })}
              choices={[
                {
                  value: "earlier-axis",
                  label:
                    check.axisInForce === null
                      ? "the axis in force: none yet"
                      : `the axis in force, no. ${check.axisInForce.number}`,
                  disabled: check.axisInForce === null && draft.mode !== "earlier-axis",
                },
                { value: "range", label: "a range typed in" },
                { value: "none", label: "the lamp alone" },
              ]}
              note={draft.mode === "none" ? "Six lines or more must stand out; a range is surer" : undefined}
              error={refusals.get("mode")}
            />
            {draft.mode === "range" && (
              <>
                <NumberField
                  label="First pixel at"
                  unit="nm"
                  value={draft.rangeFirstNm}
                  onChange={(value) => change({ rangeFirstNm: value })}
                  note="Good to 5 % of the span"
                  error={refusals.get("rangeFirstNm")}
                />
                <NumberField
                  label="Last pixel at"
                  unit="nm"
                  value={draft.rangeLastNm}
                  onChange={(value) => change({ rangeLastNm: value })}
                  error={refusals.get("rangeLastNm")}
                />
              </>
            )}
          </>
        )}
      </div>
      <TextArea
        label="Note"
        className="mt-4 max-w-[720px]"
        rows={2}
        value={draft.note}
        onChange={(event) => change({ note: event.target.value })}
        error={refusals.get("note")}
      />
      <Refused error={keeper.saveError} onKeepMine={keeper.keepMine} onTakeTheirs={keeper.takeTheirs} />
    </Section>
  );
}

const sourceName = (source: Source) => `${source.label}, ${source.name.charAt(0).toLowerCase()}${source.name.slice(1)}`;

function SourceChoice({ check, keeper, error }: { check: Check; keeper: DraftKeeper; error: string | undefined }) {
  const sources = useSources();
  const { draft, change } = keeper;
  const all = sources.data?.items ?? [];
  const chosen = draft.sourceIds
    .map((id) => all.find((source) => source.id === id))
    .filter((source) => source !== undefined);
  const usable = all.filter(
    (source) =>
      source.retiredAt === null &&
      !draft.sourceIds.includes(source.id) &&
      (source.builtIntoInstrumentId === null || source.builtIntoInstrumentId === check.summary.instrumentId),
  );
  const cautions = [
    ...new Map(
      chosen.flatMap((source) => source.cautions).map((caution) => [`${caution.title} ${caution.text}`, caution]),
    ).values(),
  ];
  return (
    <div>
      {chosen.length > 0 && (
        <ul className="mb-3">
          {chosen.map((source) => (
            <li key={source.id} className="border-hairline flex flex-wrap items-baseline gap-x-4 border-b py-[7px]">
              <b className="min-w-0 flex-1 book:flex-none">{sourceName(source)}</b>
              <span className="type-note order-last min-w-0 basis-full book:order-none book:flex-1 book:basis-0">
                {sourceKindWords[source.kind]}
                {source.elements.length > 0 && `, ${source.elements.join(" and ")}`}
                {source.reviewDueOn !== null &&
                  (source.reviewDueDays !== null && source.reviewDueDays < 0
                    ? `; its review was due ${formatDate(source.reviewDueOn)}`
                    : `; review due ${formatDate(source.reviewDueOn)}`)}
              </span>
              <TextButton
                onClick={() => change({ sourceIds: draft.sourceIds.filter((id) => id !== source.id) })}
                aria-label={`Remove source ${source.label}`}
              >
                Remove
              </TextButton>
            </li>
          ))}
        </ul>
      )}
      {draft.sourceIds.length < 8 && (
        <SelectField
          className="max-w-[504px]"
          label={chosen.length === 0 ? "Source" : "Another source"}
          placeholder={sources.isPending ? "Loading the sources" : "Choose a source"}
          value=""
          onChange={(event) =>
            event.target.value !== "" && change({ sourceIds: [...draft.sourceIds, event.target.value] })
          }
          choices={usable.map((source) => ({ value: source.id, label: sourceName(source) }))}
          error={error}
          note={
            all.length === 0 && sources.data !== undefined ? (
              <TextLink to="/sources">No source is registered yet: a manager registers the first.</TextLink>
            ) : undefined
          }
        />
      )}
      {cautions.length > 0 && (
        <div className="mt-4 grid gap-3">
          {cautions.map((caution) => (
            <Caution key={`${caution.title} ${caution.text}`} title={caution.title} text={caution.text} />
          ))}
        </div>
      )}
    </div>
  );
}
