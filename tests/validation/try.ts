/**
 * A look at the core through the independent simulator:
 *
 *   npx tsx tests/validation/try.ts --mode none|range|earlier-axis --captures 200 --seed 1 [--mix plain|main|hard] [--shape automatic] [--list]
 */
import { parseArgs } from "node:util";
import type { LineShapeChoice } from "../../packages/core/src/index.ts";
import type { ModeName } from "./judge.ts";
import type { Mix } from "./simulator/index.ts";
import { medianOf, runStudy, share } from "./study.ts";

const { values } = parseArgs({
  options: {
    mode: { type: "string", default: "range" },
    captures: { type: "string", default: "200" },
    seed: { type: "string", default: "1" },
    mix: { type: "string", default: "main" },
    shape: { type: "string" },
    list: { type: "boolean", default: false },
  },
});
const counts = runStudy({
  mode: values.mode as ModeName,
  mix: values.mix as Mix["name"],
  captures: Number(values.captures),
  seed: Number(values.seed),
  ...(values.shape === undefined ? {} : { lineShape: values.shape as LineShapeChoice }),
  each: (seed, judged, about) => {
    if (!judged.isSolved || values.list)
      console.log(
        `${seed} ${judged.isSolved ? "solved" : "NOT SOLVED"} ${judged.outcome} named ${judged.named} wrong ${judged.wrong.length} axis off ${judged.axisOffSamples.toFixed(3)} ${judged.elapsedMs.toFixed(0)} ms | ${about}${judged.outcome === "identified" ? "" : ` | ${judged.reason ?? ""}`}`,
      );
  },
});
const { bound } = counts;
console.log(
  `\nmode ${values.mode}, mix ${values.mix}, seeds ${values.seed} to ${Number(values.seed) + counts.captures - 1}`,
);
console.log(`solved                  ${share(counts.solved, counts.captures)}`);
console.log(`identified              ${share(counts.identified, counts.captures)} (ambiguous ${counts.ambiguous})`);
console.log(`  of those with >= 6 clear lines of one element  ${share(counts.identifiedOfSix, counts.withSix)}`);
console.log(
  `wrong lines             ${counts.wrongLines} of ${counts.named}; captures wrong as a whole ${counts.wrongIdentification}`,
);
for (const one of counts.wrongList) console.log(`  ${one}`);
console.log(`line intervals hold     ${share(counts.linesHeld, counts.linesTried)} of ${counts.linesTried}`);
console.log(`axis intervals hold     ${share(counts.axisHeld, counts.axisTried)} of ${counts.axisTried}`);
if (bound.count > 0) {
  const mean = bound.sum / bound.count;
  console.log(
    `variance / Cramér-Rao   ${mean.toFixed(3)} ± ${Math.sqrt((bound.squares / bound.count - mean * mean) / bound.count).toFixed(3)} (${bound.count} lines)`,
  );
}
console.log(`median                  ${medianOf(counts.elapsedMs).toFixed(1)} ms`);
