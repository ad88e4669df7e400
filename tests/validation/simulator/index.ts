export { mixes, simulate, type Mix, type SimulateOptions, type Simulated, type TrueLine } from "./simulate.ts";
export { Random } from "./random.ts";
export { shapeOf, shareIn } from "./shape.ts";
