/** The fitted axis: coefficients, what the fit leaves, and its uncertainty across the range. */
import type { Check } from "@wavekeep/api/contract";
import type { Analysis } from "@wavekeep/core";
import { sentenceCase } from "../shared/words.ts";
import { Decimal, FactList, formatNumber, MINUS, NARROW_SPACE, Section, Table } from "../ui/index.ts";
import { FittedAxis } from "./fitted-axis.tsx";
import { lineName } from "./verdict-sentence.ts";

const degreeWords = ["constant", "linear", "quadratic", "cubic"];
const chosenBy = {
  given: "as given",
  "leave-one-out": "chosen by leaving each line out in turn",
  "earlier-axis": "as the earlier axis",
} as const;

/** A coefficient with nine significant digits, in powers of ten as people write them. */
function Coefficient({ value }: { value: number }) {
  const [mantissa = "", exponent] = value.toExponential(8).split("e");
  const power = Number(exponent ?? 0);
  const digits = mantissa.replace("-", MINUS);
  if (power >= -3 && power <= 4) return <>{formatNumber(value, { decimals: Math.max(0, 8 - power) })}</>;
  return (
    <>
      {digits} × 10<sup>{String(power).replace("-", MINUS)}</sup>
    </>
  );
}

/** Shown only where an axis was fitted: a capture that brings wavelengths of its own needs none. */
export function DispersionSection({ check, analysis }: { check: Check; analysis: Analysis }) {
  const { axisUnit, dispersion } = analysis;
  if (dispersion === null || analysis.axisKind === "wavelength") return null;
  const nameOf = (index: number) => {
    const line = analysis.lines[index];
    return line === undefined ? "A line" : sentenceCase(lineName(line, axisUnit));
  };
  const { degree, coefficients, samples, rejected } = dispersion;
  return (
    <Section
      title="Dispersion"
      note="Wavelength as a polynomial of the position, weighted by each line’s uncertainty; u is standard."
    >
      <FittedAxis check={check} />
      <div className="grid gap-x-10 gap-y-6 wide:grid-cols-[minmax(0,1fr)_316px]">
        <div className="max-w-[440px]">
          <Table
            caption="The axis at eleven places, first to last"
            compact
            rows={samples}
            rowKey={(sample) => String(sample.px)}
            columns={[
              {
                key: "px",
                head: `Position, ${axisUnit}`,
                numbers: true,
                cell: (sample) => <Decimal value={sample.px} decimals={1} columnDecimals={1} />,
              },
              {
                key: "nm",
                head: "Wavelength, nm",
                numbers: true,
                cell: (sample) => <Decimal value={sample.nm} decimals={4} columnDecimals={4} />,
              },
              {
                key: "u",
                head: "u, nm",
                numbers: true,
                cell: (sample) => <Decimal value={sample.uncNm} decimals={4} columnDecimals={4} />,
              },
            ]}
          />
        </div>
        <div>
          <FactList
            items={[
              { label: "Degree", value: `${degreeWords[degree] ?? degree}, ${chosenBy[dispersion.degreeChosenBy]}` },
              ...coefficients.map((value, power) => ({ label: `c${power}`, value: <Coefficient value={value} /> })),
              {
                label: "Left by the fit, rms",
                value: `${formatNumber(dispersion.rmsPx, { decimals: 3 })}${NARROW_SPACE}${axisUnit}, ${formatNumber(dispersion.rmsNm, { decimals: 4 })}${NARROW_SPACE}nm`,
              },
              {
                label: "Leaving each out, rms",
                value: `${formatNumber(dispersion.leaveOneOutRmsNm, { decimals: 4 })}${NARROW_SPACE}nm`,
              },
            ]}
          />
          {rejected.length > 0 && (
            <ul className="type-note mt-2">
              {rejected.map((item) => (
                <li key={item.line}>
                  {nameOf(item.line)}: {item.reason.charAt(0).toLowerCase()}
                  {item.reason.slice(1)}
                </li>
              ))}
            </ul>
          )}
        </div>
      </div>
    </Section>
  );
}
