/** Optics and tolerance: what each configuration is made of and judged by, and how a manager changes it. */
import type { Configuration, Instrument } from "@wavekeep/api/contract";
import {
  formatDate,
  formatDay,
  formatLimit,
  formatNumber,
  formatPercent,
  NARROW_SPACE,
  Button,
  FactList,
  LinkButton,
  Section,
  Table,
  useMay,
  useZone,
  When,
} from "../ui/index.ts";
import { sentenceCase, standingWords } from "../shared/words.ts";
import { AxesSection } from "./axes-section.tsx";
import { axisWords, intervalWords } from "./overview-tab.tsx";

interface OpticsTabProps {
  instrument: Instrument;
  configuration: Configuration;
  show: (what: string) => void;
}

const withUnit = (value: number | null, unit: string, decimals = 0) =>
  value === null ? (
    <span className="text-quiet">not recorded</span>
  ) : (
    `${formatNumber(value, { decimals, grouped: true })}${NARROW_SPACE}${unit}`
  );

const axisKindWords = { pixel: "pixels", wavelength: "wavelength", step: "motor steps" } as const;

export function OpticsTab({ instrument, configuration, show }: OpticsTabProps) {
  const zone = useZone();
  const may = useMay();
  const isPresent = instrument.retiredAt === null && configuration.toOn === null;
  const changes = may("instrument.change") && isPresent;
  const { optics, decisionRule, tolerance, standing } = configuration;
  const plain = (value: number | null, unit: string) =>
    withUnit(value, unit, value !== null && !Number.isInteger(value) ? 2 : 0);
  const ended = instrument.configurations.filter((item) => item.toOn !== null && item.id !== configuration.id);
  const present = instrument.configurations.filter((item) => item.toOn === null);
  return (
    <>
      <Section
        plain
        title="Tolerance"
        note={`In force since ${formatDay(tolerance.inForceFrom, zone)}, set by ${tolerance.by.name}. A check is judged by the one in force when its first capture arrived.`}
      >
        <Table
          caption="Tolerance by segment"
          rows={tolerance.segments}
          rowKey={(segment) => String(segment.fromNm)}
          columns={[
            {
              key: "range",
              head: "Segment",
              cell: (segment) => `${formatNumber(segment.fromNm)}–${formatNumber(segment.toNm)}${NARROW_SPACE}nm`,
            },
            { key: "tolerance", head: "Tolerance", cell: (segment) => `±${formatLimit(segment.toleranceNm)}` },
          ]}
        />
        <p className="type-note mt-2 max-w-[720px]">
          Version {tolerance.version}: {tolerance.reason}
        </p>
        {may("tolerance.change") && isPresent && (
          <Button className="mt-4" onClick={() => show("tolerance")}>
            Change the tolerance
          </Button>
        )}
      </Section>
      <Section title="Decision and interval">
        <div className="max-w-[520px]">
          <FactList
            items={[
              {
                label: "Decision rule",
                value:
                  decisionRule.kind === "simple"
                    ? "simple acceptance, w = 0"
                    : `guarded, w = ${decisionRule.r === 1 ? "" : `${formatNumber(decisionRule.r, { decimals: 2 })} `}U`,
              },
              { label: "Near limit above", value: `${formatPercent(configuration.warningShare)} of the tolerance` },
              {
                label: "Set-up reproducibility, u",
                value:
                  configuration.setupReproducibilityNm === null ? (
                    <i>assumed, 0.1 px or step</i>
                  ) : (
                    withUnit(configuration.setupReproducibilityNm, "nm", 3)
                  ),
              },
              { label: "Interval", value: intervalWords(configuration.intervalDays) },
              { label: "Days of grace", value: configuration.graceDays },
              { label: "Next due", value: configuration.dueOn === null ? "no date" : formatDate(configuration.dueOn) },
              { label: "Procedure", value: configuration.procedureTitle },
            ]}
          />
        </div>
      </Section>
      <Section title="Axis and optics">
        <div className="grid gap-x-14 book:grid-cols-2">
          <FactList
            items={[
              {
                label: "Range",
                value: `${formatNumber(configuration.rangeFirstNm)}–${formatNumber(configuration.rangeLastNm)}${NARROW_SPACE}nm`,
              },
              { label: "Its files count", value: axisKindWords[configuration.axisKind] },
              { label: "Axis in force", value: axisWords(configuration) },
              {
                label: "Since",
                value: configuration.axis === null ? "–" : <When at={configuration.axis.inForceFrom} as="day" />,
              },
              { label: "Nominal resolution, FWHM", value: plain(configuration.nominalFwhmNm, "nm") },
              { label: "Detector full scale", value: plain(optics.fullScaleCounts, "counts") },
            ]}
          />
          <FactList
            items={[
              {
                label: "Grating",
                value: optics.groovesPerMm === null ? plain(null, "") : `${formatNumber(optics.groovesPerMm)}/mm`,
              },
              { label: "Focal length", value: plain(optics.focalLengthMm, "mm") },
              { label: "Included angle", value: plain(optics.includedAngleDeg, "°") },
              { label: "Slit or fibre", value: plain(optics.slitUm, "µm") },
              {
                label: "Detector",
                value:
                  optics.pixels === null
                    ? plain(null, "")
                    : `${formatNumber(optics.pixels, { grouped: true })}${NARROW_SPACE}px${optics.pixelPitchUm === null ? "" : ` of ${formatNumber(optics.pixelPitchUm)}${NARROW_SPACE}µm`}`,
              },
              ...(optics.laserNm === null ? [] : [{ label: "Laser", value: plain(optics.laserNm, "nm") }]),
            ]}
          />
        </div>
        {optics.adjustmentNote !== null && optics.adjustmentNote !== "" && (
          <p className="mt-3 max-w-[720px]">{optics.adjustmentNote}</p>
        )}
        {changes && (
          <div className="mt-4 flex flex-wrap gap-3">
            <Button onClick={() => show("optics")}>Change axis, optics or interval</Button>
            <Button onClick={() => show("replace")}>Replace a part</Button>
            <Button onClick={() => show("add")}>Add a channel or grating</Button>
            {present.length > 1 && <Button onClick={() => show("end")}>End this one</Button>}
          </div>
        )}
      </Section>
      <AxesSection configuration={configuration} />
      <Section title="Standing">
        <p>
          {sentenceCase(standingWords[standing.standing])}
          {standing.restriction !== null && ` to ${standing.restriction}`} since <When at={standing.since} />.{" "}
          <span className="text-quiet">{standing.reason}</span>
        </p>
        {may("standing.change") && isPresent && (
          <Button className="mt-4" onClick={() => show("hold")}>
            {standing.standing === "on-hold" ? "Confirm or lift the hold" : "Change the standing"}
          </Button>
        )}
      </Section>
      {ended.length > 0 && (
        <Section title="Earlier configurations" note="Each keeps its own history; they are never joined.">
          <Table
            caption="Ended configurations"
            rows={ended}
            rowKey={(item) => item.id}
            columns={[
              { key: "name", head: "Configuration", cell: (item) => <b>{item.name ?? "first"}</b> },
              {
                key: "range",
                head: "Range",
                cell: (item) => `${formatNumber(item.rangeFirstNm)}–${formatNumber(item.rangeLastNm)}${NARROW_SPACE}nm`,
              },
              { key: "from", head: "From", cell: (item) => formatDate(item.fromOn) },
              { key: "to", head: "To", cell: (item) => (item.toOn === null ? "" : formatDate(item.toOn)) },
              {
                key: "open",
                head: "",
                cell: (item) => (
                  <LinkButton to={`/instruments/${instrument.id}/drift?configuration=${item.id}`}>Its drift</LinkButton>
                ),
              },
            ]}
          />
        </Section>
      )}
      {may("instrument.change") && (
        <Section title="The instrument">
          <div className="max-w-[520px]">
            <FactList
              items={[
                {
                  label: "Maker and model",
                  value:
                    [instrument.maker, instrument.model].filter((word) => word !== "").join(", ") || "not recorded",
                },
                { label: "Serial number", value: instrument.serial || "not recorded" },
                {
                  label: "Purchased",
                  value: instrument.purchasedOn === null ? "not recorded" : formatDate(instrument.purchasedOn),
                },
                { label: "Place", value: instrument.place || "not recorded" },
                {
                  label: "Altitude",
                  value: instrument.altitudeM === null ? "the lab’s" : withUnit(instrument.altitudeM, "m"),
                },
                ...(instrument.retiredAt === null
                  ? []
                  : [
                      {
                        label: "Retired",
                        value: (
                          <>
                            <When at={instrument.retiredAt} as="day" />: {instrument.retiredReason}
                          </>
                        ),
                      },
                    ]),
              ]}
            />
          </div>
          {instrument.retiredAt === null && (
            <div className="mt-4 flex flex-wrap gap-3">
              <LinkButton to={`/instruments/${instrument.id}/edit`}>Edit name, place or owner</LinkButton>
              <Button onClick={() => show("retire")}>Retire</Button>
            </div>
          )}
        </Section>
      )}
    </>
  );
}
