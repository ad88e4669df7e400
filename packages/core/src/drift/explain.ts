/** Why a history was judged as it was, in a sentence or two with figures; expanded uncertainties with k = 2. */
import type { DriftAssessment } from "./assess-drift.ts";
import type { ChosenModel } from "./choose-model.ts";
import { isoDateOfDay } from "./civil-date.ts";
import type { DriftSeries } from "./history.ts";

export function explain(assessment: DriftAssessment, series: DriftSeries, model: ChosenModel): string {
  const { step, temperature, odd } = assessment;
  const stable = model.probabilities[0]!;
  const own = assessment.probabilities![assessment.kind!];
  const against = ` Probability ${percent(own)}, of a stable instrument ${percent(stable)}.`;
  const since = onsetDate(series, model);
  switch (assessment.kind!) {
    case "stable":
      return (
        `The errors scatter about a constant level: the trend at mid-range is ${signed(assessment.rateNmPerYear)} ± ` +
        `${plain(2 * (assessment.rateUncNmPerYear ?? NaN))} nm a year (k = 2), and no step, temperature effect or odd check ` +
        `stands out of the scatter. Probability ${percent(own)}.`
      );
    case "drift":
      return (
        `The error at mid-range changes by ${signed(assessment.rateNmPerYear)} ± ` +
        `${plain(2 * (assessment.rateUncNmPerYear ?? NaN))} nm a year (k = 2)${since}, alike at all wavelengths.${against}`
      );
    case "scale":
      return (
        `The scale error, from one end of the range to the other, changes by ${signed(assessment.scaleRateNmPerYear)} ± ` +
        `${plain(2 * (assessment.scaleRateUncNmPerYear ?? NaN))} nm a year (k = 2)${since}.${against}`
      );
    case "step":
      return (
        `From the check of ${step!.date} on, the error at mid-range is ${sized(step!.midNm, step!.midUncNm)} and the scale error ` +
        `${sized(step!.scaleNm, step!.scaleUncNm)} off what it was before.${against}`
      );
    case "temperature":
      return (
        `The error follows the temperature: ${signed(temperature!.midNmPerK)} ± ${plain(2 * temperature!.midUncNmPerK)} nm/K at ` +
        `mid-range (k = 2), ${signed(temperature!.scaleNmPerK)} nm/K in scale; what is left shows neither a trend nor a step.${against}`
      );
    case "mislabelled": {
      const fits =
        odd!.fitsSource !== null
          ? ` Its lines are those of ${odd!.fitsSource}.`
          : odd!.fitsDate !== null
            ? ` It would fit the trend on ${odd!.fitsDate}.`
            : "";
      const last = odd!.index === series.count - 1;
      const place =
        odd!.index === 0 || last
          ? `does not fit those ${last ? "before" : "after"} it (one check more ${last ? "after" : "before"} it would tell a step)`
          : "fits neither those before it nor those after it";
      return (
        `The check of ${odd!.date} ${place}: it lies ${sized(odd!.midNm, odd!.midUncNm)} off at mid-range.${fits} Look whether it ` +
        `belongs to another source, date or instrument.${against}`
      );
    }
  }
}

function onsetDate(series: DriftSeries, model: ChosenModel): string {
  for (const term of [...model.form.mid, ...model.form.scale]) {
    if (term.effect === "onset") return ` since about ${isoDateOfDay(series.days[term.place]!)}`;
  }
  return "";
}

function sized(value: number, unc: number): string {
  return value === 0 && unc === 0 ? "no more than scatter" : `${signed(value)} ± ${plain(2 * unc)} nm`;
}

/** Three significant digits, without an exponent for the sizes that occur. */
function plain(value: number): string {
  if (!(Math.abs(value) < Infinity)) return "?";
  if (value === 0) return "0";
  let decimals = 2;
  for (let size = Math.abs(value); size < 1 && decimals < 9; size *= 10) decimals += 1;
  return value.toFixed(Math.min(decimals, 9));
}

function signed(value: number | null): string {
  if (value === null) return "?";
  return `${value < 0 ? "−" : "+"}${plain(Math.abs(value))}`;
}

function percent(probability: number): string {
  if (probability < 0.001) return "below 0.1 %";
  return probability > 0.999 ? "above 99.9 %" : `${(100 * probability).toFixed(1)} %`;
}
