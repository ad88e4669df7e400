/** The measuring core's front door. */
export * from "./analysis/types.ts";
export { coreVersion } from "./version.ts";
