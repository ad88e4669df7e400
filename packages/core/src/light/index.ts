/** Light: its wavelength in vacuum and in air, and the quantities that stand for it. */
export * from "./air.ts";
export * from "./quantities.ts";
