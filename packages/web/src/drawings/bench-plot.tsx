/** The canvas of the spectrum bench: hairlines, trace, fitted curves with their areas, residuals. Chart.js, y already in px. */
import type { Analysis, SpectrumDrawing } from "@wavekeep/core";
import type { ChartData, ChartDataset, ChartOptions, Plugin } from "chart.js";
import { useMemo } from "react";
import { Scatter } from "react-chartjs-2";
import { SIGMA_PX, type CountsRuler, type Registers } from "./bench-layout.ts";
import { bareOptions } from "./chart-setup.ts";
import { crisp, linearScale, roundTicks, thinToColumns } from "./scale.ts";
import type { Palette } from "./use-palette.ts";
import { wavelengthHue } from "./wavelength-hue.ts";

interface BenchPlotProps {
  drawing: SpectrumDrawing;
  analysis: Analysis;
  registers: Registers;
  ruler: CountsRuler;
  view: [number, number];
  width: number;
  palette: Palette;
}

/** `#RRGGBB` with an alpha of 16 %. */
const wash = (hex: string) => `${hex}29`;

export function BenchPlot({ drawing, analysis, registers, ruler, view, width, palette }: BenchPlotProps) {
  const { spectrumTop, zero, residualZero, rulerTop } = registers;
  // The canvas reaches from the spectrum's top to the ruler; its y is px down from there.
  const top = spectrumTop - 4;
  const height = rulerTop - top - 2;
  const data = useMemo<ChartData<"scatter">>(() => {
    const yOf = (counts: number) => zero - top - ruler.up(counts);
    const kept = thinToColumns(drawing.x, drawing.counts, view[0], view[1], width);
    const datasets: ChartDataset<"scatter">[] = [
      {
        data: kept.map((i) => ({ x: drawing.x[i] ?? 0, y: yOf(drawing.counts[i] ?? 0) })),
        showLine: true,
        borderColor: palette.colour.ink,
        borderWidth: 1,
        pointRadius: 0,
        // The trace lies below what was fitted to it.
        order: 1,
      },
    ];
    const isFilled = palette.theme === "paper" || palette.theme === "ink";
    for (const fit of drawing.fits) {
      const line = analysis.lines[fit.line];
      const last = fit.x[fit.x.length - 1];
      if (line === undefined || fit.x.length === 0 || last === undefined || last < view[0] || (fit.x[0] ?? 0) > view[1])
        continue;
      if (line.status === "left-out" || line.status === "refused") continue;
      const hue = palette.resolve(
        line.wavelengthNm === null ? "var(--quiet)" : wavelengthHue(line.wavelengthNm, palette.theme),
      );
      datasets.push({
        data: fit.x.map((x, i) => ({ x, y: yOf(fit.baseline[i] ?? 0) })),
        showLine: true,
        borderWidth: 0,
        pointRadius: 0,
      });
      datasets.push({
        data: fit.x.map((x, i) => ({ x, y: yOf(fit.counts[i] ?? 0) })),
        showLine: true,
        borderColor: hue,
        borderWidth: 1.5,
        pointRadius: 0,
        fill: isFilled && !palette.isPrint ? "-1" : false,
        backgroundColor: hue.length === 7 ? wash(hue) : undefined,
      });
    }
    if (residualZero !== null) {
      datasets.push({
        data: drawing.residuals
          .filter((dot) => dot.x >= view[0] && dot.x <= view[1])
          .map((dot) => ({ x: dot.x, y: residualZero - top - Math.min(Math.max(dot.ratio, -5), 5) * SIGMA_PX })),
        pointRadius: 0.75,
        pointBorderWidth: 0,
        pointBackgroundColor: palette.colour.ink,
      });
    }
    return { datasets };
  }, [drawing, analysis, ruler, view, width, palette, zero, top, residualZero]);
  const options = useMemo<ChartOptions<"scatter">>(
    () => bareOptions({ min: view[0], max: view[1] }, { min: 0, max: height }, true),
    [view, height],
  );
  const plugins = useMemo(
    () => [gridPlugin(view, width, top, registers, ruler, palette)],
    [view, width, top, registers, ruler, palette],
  );
  return (
    <div className="absolute left-0" style={{ top, height, width }}>
      <Scatter
        key={`${palette.theme} ${palette.isPrint} ${view.join(" ")} ${width} ${ruler.max} ${ruler.ticks.length} ${ruler.up(100)}`}
        data={data}
        options={options}
        plugins={plugins}
        aria-hidden="true"
      />
    </div>
  );
}

/** Hairlines at the labelled wavelengths and counts, zero in graph, ±2 sigma and their zero. */
function gridPlugin(
  view: [number, number],
  width: number,
  top: number,
  registers: Registers,
  ruler: CountsRuler,
  palette: Palette,
): Plugin<"scatter"> {
  const scale = linearScale(view[0], view[1], width);
  const { zero, spectrumTop, residualZero } = registers;
  return {
    id: "wavekeep-grid",
    beforeDatasetsDraw({ ctx }) {
      const stroke = (colour: string, draw: () => void) => {
        ctx.strokeStyle = colour;
        ctx.lineWidth = 1;
        ctx.beginPath();
        draw();
        ctx.stroke();
      };
      ctx.save();
      stroke(palette.colour.hairline, () => {
        for (const tick of roundTicks(view[0], view[1], width, 72).ticks) {
          const x = crisp(scale.at(tick));
          ctx.moveTo(x, spectrumTop - top);
          ctx.lineTo(x, zero - top);
        }
        for (const tick of ruler.ticks) {
          const y = crisp(zero - top - ruler.up(tick));
          if (y < 0) continue;
          ctx.moveTo(0, y);
          ctx.lineTo(width, y);
        }
        if (residualZero !== null) {
          for (const side of [-2, 2]) {
            ctx.moveTo(0, crisp(residualZero - top + side * SIGMA_PX));
            ctx.lineTo(width, crisp(residualZero - top + side * SIGMA_PX));
          }
        }
      });
      stroke(palette.colour.graph, () => {
        ctx.moveTo(0, crisp(zero - top));
        ctx.lineTo(width, crisp(zero - top));
        if (residualZero !== null) {
          ctx.moveTo(0, crisp(residualZero - top));
          ctx.lineTo(width, crisp(residualZero - top));
        }
      });
      ctx.restore();
    },
  };
}
