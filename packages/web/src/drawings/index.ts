/** Our own drawings, as pages take them. */
export { namedLines, stripLineOf } from "./bench-layout.ts";
export { DaysRuler, type DueItem } from "./days-ruler.tsx";
export { DrawingLinks, useDrawing, type DrawingHandle } from "./drawing.tsx";
export { DriftRibbon, SpectrumBench } from "./lazy.tsx";
export { LineStrip } from "./line-strip.tsx";
export type { RibbonSeries } from "./ribbon-layout.ts";
export type { CountsScale } from "./scale.ts";
export { ToleranceUsed } from "./tolerance-used.tsx";
export { TrailRuler } from "./trail-ruler.tsx";
export { wavelengthHue } from "./wavelength-hue.ts";
