/** Errors and spectrum of an analysis on one wavelength axis, with the scale's switch and what can be taken away. */
import type { Check } from "@wavekeep/api/contract";
import type { Analysis } from "@wavekeep/core";
import { type CountsScale, DrawingLinks, SpectrumBench, useDrawing } from "../drawings/index.ts";
import { useUrlFilter } from "../shared/use-url-filter.ts";
import { formatLimit, ProblemNote, Section, Skeleton, Switches } from "../ui/index.ts";
import { useDrawing as useSpectrum } from "./queries.ts";

const scaleWords: Record<CountsScale, string> = { root: "root counts", linear: "linear", log: "log" };

interface SpectrumSectionProps {
  check: Check;
  analysis: Analysis;
  chosen: number | null;
  onChoose: (line: number | null) => void;
}

/** The drawing's switch, kept in the address. */
export function useCountsScale(): [CountsScale, (scale: CountsScale) => void] {
  const [filter, setFilter] = useUrlFilter(["scale"]);
  const scale = filter.scale === "linear" || filter.scale === "log" ? filter.scale : "root";
  return [scale, (next) => setFilter("scale", next === "root" ? null : next)];
}

export function ScaleSwitch({ scale, onChange }: { scale: CountsScale; onChange: (scale: CountsScale) => void }) {
  return (
    <Switches
      label="Scale of counts"
      value={scale}
      onChange={onChange}
      choices={(["root", "linear", "log"] as const).map((value) => ({ value, label: scaleWords[value] }))}
    />
  );
}

export function SpectrumSection({ check, analysis, chosen, onChoose }: SpectrumSectionProps) {
  const spectrum = useSpectrum(check.summary.id, check.analysisVersion?.version);
  const drawing = useDrawing(`${check.summary.number} errors and spectrum`);
  const [scale, setScale] = useCountsScale();
  const captures =
    check.attempts
      .find((attempt) => attempt.number === (check.analysisVersion?.attempt ?? check.currentAttempt))
      ?.captures.filter((capture) => capture.part === "lamp" && capture.refusal === null) ?? [];
  const limits = [...new Set(analysis.setup.tolerance.map((segment) => segment.toleranceNm))];
  const height =
    limits.length === 1 && limits[0] !== undefined
      ? `full height ${formatLimit(limits[0])}`
      : "full height the tolerance of its segment";
  const of = captures.length > 1 ? `the mean of ${captures.length} captures` : "the capture";
  return (
    <Section
      title="Errors and spectrum"
      note={`Error of each line above, ${height}${analysis.setup.decisionRule.kind === "guarded" ? "; the guard band is hatched" : ""}. The same lines in ${of}; what the fits leave below.`}
      switches={<ScaleSwitch scale={scale} onChange={setScale} />}
      links={<DrawingLinks handle={drawing} />}
    >
      {spectrum.error !== null && <ProblemNote error={spectrum.error} />}
      {spectrum.data !== undefined ? (
        <SpectrumBench
          analysis={analysis}
          drawing={spectrum.data}
          chosen={chosen}
          onChoose={onChoose}
          scale={scale}
          handle={drawing}
        />
      ) : (
        spectrum.error === null && <Skeleton rows={14} label="Loading the spectrum" />
      )}
    </Section>
  );
}
