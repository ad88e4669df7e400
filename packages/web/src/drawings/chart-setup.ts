/** The parts of Chart.js that the drawings use: straight scales, points and lines, areas. No text: labels are SVG, in the design's own type. */
import { Chart, Filler, LinearScale, LineElement, PointElement, ScatterController, type ChartOptions } from "chart.js";

Chart.register(ScatterController, LinearScale, PointElement, LineElement, Filler);

/** A bare plot: no axes, no legend, no animation; x and y run exactly from edge to edge. */
export function bareOptions(
  x: { min: number; max: number },
  y: { min: number; max: number },
  reverseY = false,
): ChartOptions<"scatter"> {
  return {
    animation: false,
    responsive: true,
    maintainAspectRatio: false,
    normalized: true,
    parsing: false,
    events: [],
    layout: { padding: 0, autoPadding: false },
    plugins: { legend: { display: false }, tooltip: { enabled: false } },
    scales: {
      x: { type: "linear", display: false, min: x.min, max: x.max },
      y: { type: "linear", display: false, min: y.min, max: y.max, reverse: reverseY },
    },
    elements: { line: { tension: 0 } },
  };
}
