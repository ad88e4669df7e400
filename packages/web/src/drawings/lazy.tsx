/** The two drawings that bring Chart.js come when they are first drawn; their place is kept meanwhile. */
import { lazy, Suspense } from "react";
import type { DriftRibbonProps } from "./drift-ribbon.tsx";
import type { SpectrumBenchProps } from "./spectrum-bench.tsx";

const LazyRibbon = lazy(async () => ({ default: (await import("./drift-ribbon.tsx")).DriftRibbon }));
const LazyBench = lazy(async () => ({ default: (await import("./spectrum-bench.tsx")).SpectrumBench }));

export function DriftRibbon(props: DriftRibbonProps) {
  return (
    <Suspense fallback={<div style={{ height: 296 }} role="status" aria-label="Drawing the drift" />}>
      <LazyRibbon {...props} />
    </Suspense>
  );
}

export function SpectrumBench(props: SpectrumBenchProps) {
  return (
    <Suspense fallback={<div style={{ height: 587 }} role="status" aria-label="Drawing the spectrum" />}>
      <LazyBench {...props} />
    </Suspense>
  );
}
