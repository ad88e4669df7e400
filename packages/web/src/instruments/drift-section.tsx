/** The drift ribbon with its switch, its events and its table. */
import type { Configuration, DriftReply, Instrument } from "@wavekeep/api/contract";
import { useNavigate, useSearchParams } from "react-router";
import { DrawingLinks, DriftRibbon, type RibbonSeries, useDrawing } from "../drawings/index.ts";
import { Asked } from "../shared/asked.tsx";
import {
  dayOf,
  Empty,
  formatLimit,
  formatNumber,
  LinkButton,
  Section,
  Switches,
  useMay,
  useZone,
} from "../ui/index.ts";
import { useDrift } from "./queries.ts";

const seriesWords: Record<RibbonSeries, string> = {
  largest: "largest in range",
  mid: "at mid-range",
  scale: "scale error",
};

const seriesNotes = (drift: DriftReply): Record<RibbonSeries, string> => ({
  largest: `Largest error, offset and scale together${drift.fromNm === null || drift.toNm === null ? "" : `, from ${formatNumber(drift.fromNm)} to ${formatNumber(drift.toNm)} nm`}, with U.`,
  mid: `Error at mid-range${drift.midNm === null ? "" : `, ${formatNumber(drift.midNm)} nm`}, with U: what the whole axis is off by.`,
  scale: "Scale error over the range, with U: how much more the far end is off than the near one.",
});

interface DriftSectionProps {
  instrument: Instrument;
  configuration: Configuration;
  /** The first section under the tabs has no rule. */
  plain?: boolean;
}

export function DriftSection({ instrument, configuration, plain = false }: DriftSectionProps) {
  const drift = useDrift(configuration.id);
  const may = useMay();
  const zone = useZone();
  const navigate = useNavigate();
  const [search, setSearch] = useSearchParams();
  const asked = search.get("series");
  const series: RibbonSeries = asked === "mid" || asked === "scale" ? asked : "largest";
  const drawing = useDrawing(`${instrument.name} drift`);
  const data = drift.data;
  return (
    <Section
      plain={plain}
      title="Drift"
      note={
        data === undefined
          ? undefined
          : `${seriesNotes(data)[series]} Tolerance ±${formatLimit(data.toleranceNm)}${data.guardBandNm === null ? "" : ", guard band hatched"}.`
      }
      switches={
        data !== undefined &&
        data.points.length > 0 && (
          <Switches
            label="What is drawn"
            value={series}
            onChange={(value) =>
              setSearch(
                (before) => {
                  const next = new URLSearchParams(before);
                  if (value === "largest") next.delete("series");
                  else next.set("series", value);
                  return next;
                },
                { replace: true, preventScrollReset: true },
              )
            }
            choices={(["largest", "mid", "scale"] as const).map((value) => ({ value, label: seriesWords[value] }))}
          />
        )
      }
      links={data !== undefined && data.points.length > 0 && <DrawingLinks handle={drawing} />}
    >
      <Asked query={drift} rows={6}>
        {(reply) =>
          reply.points.length === 0 ? (
            <Empty
              text="Each check is a point here, with its uncertainty, between the limits; moves, lamps and adjustments are marked. The first check makes the first point."
              action={
                instrument.retiredAt === null &&
                configuration.toOn === null &&
                may("check.begin") && (
                  <LinkButton to={`/checks/new?configuration=${configuration.id}`}>Start a check</LinkButton>
                )
              }
            />
          ) : (
            <DriftRibbon
              drift={reply}
              series={series}
              todayOn={dayOf(new Date(), zone)}
              handle={drawing}
              onOpen={(checkId) => void navigate(`/checks/${checkId}`)}
            />
          )
        }
      </Asked>
    </Section>
  );
}
